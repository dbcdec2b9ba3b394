"""What each command does, from parsed options to written output: a module for each kind.

`lpview.cli` names the module of every command; its function of the command's name takes
the parsed options and returns the exit status per model.
"""

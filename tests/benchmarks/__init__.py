"""Timings, run by hand: DEVELOPERS.md has the command. pytest collects nothing here."""

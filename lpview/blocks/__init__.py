"""CSV blocks to and from linear programs: sole owner of that format.

A model is one ``.csv`` file with blocks, or a folder with one file for each. A
block begins at a line whose first cell is its name in brackets. `layout` lists the
blocks, `source` and `structure` turn text into cells, and one module for each kind
of block turns cells into numbers; `writer` is the way back.

Names that a cell cannot hold (blanks at an end, line breaks, a beginning ``# ``)
are refused when reading and when writing. Any other name survives, also one that
looks like a block line, since a data line has more cells than a block line.
"""

from lpview.blocks.mistakes import InputError, Mistake
from lpview.blocks.names import name_problem
from lpview.blocks.plan import read_plan
from lpview.blocks.reader import read_label_file, read_model, read_model_bytes
from lpview.blocks.writer import write_blocks, write_labels, write_values

__all__ = [
    "InputError",
    "Mistake",
    "name_problem",
    "read_label_file",
    "read_model",
    "read_model_bytes",
    "read_plan",
    "write_blocks",
    "write_labels",
    "write_values",
]

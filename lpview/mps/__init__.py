"""MPS, the trade's interchange format, to linear programs: sole owner of that format.

A file is read twice, by two readers that share nothing. Ours takes the text apart:
`text` makes lines of bytes, `sections` and `fields` find what stands where, `matrix`,
`sides` and `bounds` give it its meaning, with line numbers for every mistake. The
solver's own reader then reads a plain `copy` of the same numerals under plain names, and
`compare` refuses whatever the two understood differently. Numbers longer than a double
are kept exactly, as everywhere.
"""

from lpview.mps.reader import read_mps, read_mps_bytes
from lpview.mps.text import looks_like_mps

__all__ = ["looks_like_mps", "read_mps", "read_mps_bytes"]

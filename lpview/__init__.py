"""Check, explain and sign off the answer of a linear program."""

__version__ = "0.1.0"

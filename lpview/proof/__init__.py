"""The optimum verified in exact rational arithmetic, on the numbers as written."""

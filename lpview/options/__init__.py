"""Options of the commands; nothing numeric is imported, so that wrong use is told at once."""

"""Models without an optimum: certificates that say why, checked on the file's numbers."""

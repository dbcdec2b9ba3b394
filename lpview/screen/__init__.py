"""The mirror at the keyboard: panes that show an examination's numbers and compute none."""

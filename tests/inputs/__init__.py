"""What arrives: plans and labels in files, and how a model is asked to be read."""

"""Floor 8: the commands."""

"""Floor 7: what is shown, and how."""

"""Floor 5: one file per question that a checker asks of a network."""

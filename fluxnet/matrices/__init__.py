"""Floor 3: labelled matrices of a network."""

"""Floor 4: problems and what solves them."""

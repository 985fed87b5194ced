"""Floor 2: the model as data, and the balance of a line."""

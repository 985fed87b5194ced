"""Floor 3: model text to a network, and back."""

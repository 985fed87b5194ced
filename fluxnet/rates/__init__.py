"""Floor 2: measured rates as data."""

"""Floor 3: tables that people bring."""

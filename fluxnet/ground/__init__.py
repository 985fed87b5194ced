"""Floor 0: source text, diagnostics, tables of results, progress. Standard library only."""

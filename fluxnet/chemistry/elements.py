"""The elements: atomic weights, and electrons relative to the reference compounds."""

"""Metabolic rates of a cultivation: closed, explained and proven from a plain-text reaction list."""

__version__ = "0.1.0"

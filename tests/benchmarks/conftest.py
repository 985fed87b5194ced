"""Benchmarks that need the extra ``oracles`` are not looked into for examples without it."""

from importlib.util import find_spec

collect_ignore = [] if find_spec("ppl") else ["routes.py"]

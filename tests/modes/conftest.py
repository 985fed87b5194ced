"""The polyhedral library that modes are compared with is an extra of its own (``oracles``)."""

from importlib.util import find_spec

collect_ignore = [] if find_spec("ppl") else ["test_against_polyhedra.py", "polyhedra.py"]

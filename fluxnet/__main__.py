"""``python -m fluxnet`` is the same as ``fluxnet``."""

from fluxnet.cli.main import run

raise SystemExit(run())

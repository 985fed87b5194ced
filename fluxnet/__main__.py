"""The process of one command: ``fluxnet``, or ``python -m fluxnet``."""

from __future__ import annotations

import gc
import os

__all__ = ["main"]


def main() -> int:
    """Run the command line in a process that ends with it, and give the exit status.

    Most commands end in a moment, so that what pays only in a long computation is spared.
    """
    # The matrices of a network are small: starting numpy's threads takes longer than they save.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    # What is imported stays: looking for garbage every few hundred objects does not find any.
    gc.set_threshold(50_000, 20, 20)
    from fluxnet.cli.main import run

    status = run()
    # All that is left goes with the process; no need to look through it for garbage first.
    gc.freeze()
    return status


if __name__ == "__main__":
    raise SystemExit(main())

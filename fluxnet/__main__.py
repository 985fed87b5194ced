"""The process of one command: ``fluxnet``, or ``python -m fluxnet``."""

from __future__ import annotations

import gc
import os
import sys
from contextlib import suppress
from typing import NoReturn

__all__ = ["main"]


def main() -> NoReturn:
    """Run the command line in a process that ends with it.

    Most commands end in a moment, so that what pays only in a long computation is spared.
    """
    # The matrices of a network are small: starting numpy's threads takes longer than they save.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    # What is imported stays: looking for garbage at every few hundred objects finds none.
    gc.set_threshold(200_000, 20, 20)
    try:
        from fluxnet.cli.main import run

        status = run()
    except KeyboardInterrupt:  # while what tells of it is still being loaded
        status = 130
    # What cannot be written was told by the command. Taking apart what goes with the process
    # anyway takes as long as reading a model.
    for stream in (sys.stdout, sys.stderr):
        with suppress(OSError, ValueError, AttributeError):
            stream.flush()
    os._exit(status)


if __name__ == "__main__":
    main()

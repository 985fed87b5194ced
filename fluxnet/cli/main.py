"""The command ``fluxnet``: picks the command that was asked for and builds only its parser."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from enum import IntEnum
from importlib import import_module

import fluxnet
from fluxnet.ground.record import record

__all__ = ["COMMANDS", "Command", "Exit", "run"]


class Exit(IntEnum):
    """Exit statuses: sound; something is wrong with the data or the model; wrongly used; ours."""

    SOUND = 0
    FINDING = 1
    MISUSE = 2
    OURS = 3
    INTERRUPTED = 130


@record
class Command:
    """A command, the module that runs it, the question that it answers, one example."""

    name: str
    module: str
    question: str
    example: str


COMMANDS: tuple[Command, ...] = (
    Command("rates", "rates", "What are the rates, from the files as they came?",
            "fluxnet rates run.xlsx -o rates.csv"),
    Command("closure", "closure", "Do carbon, nitrogen and electrons close?",
            "fluxnet closure rates.csv"),
    Command("check", "check", "Is my reaction list sound?", "fluxnet check model.flux"),
    Command("solve", "solve", "What did the cell do; who made and who spent the ATP and the NADH?",
            "fluxnet solve model.flux rates.csv"),
    Command("solve", "solve", "How much can it make at most?",
            "fluxnet solve model.flux --maximise ethanol"),
    Command("compare", "compare",
            "Which variant is worth building, and where does its yield go?",
            "fluxnet compare model.flux --product ethanol --from glucose --staircase"),
    Command("routes", "routes", "By which routes can it get there, and what would have to go?",
            "fluxnet routes model.flux --from glucose --to ethanol"),
    Command("frontier", "frontier", "What does more of one thing cost of another?",
            "fluxnet frontier model.flux mu ethanol"),
    Command("lump", "lump", "Which shorter list does the same?",
            "fluxnet lump model.flux --keep pyruvate,ethanol -o short.flux"),
    Command("demo", "demo", "Show me the whole job on an example.", "fluxnet demo"),
    Command("new", "new", "Give me a folder to start from.", "fluxnet new my-strain"),
    Command("catalogue", "catalogue", "Which compounds does it know?",
            "fluxnet catalogue acetic acid"),
    Command("explain", "explain", "What does that message mean?",
            "fluxnet explain unbalanced-line"),
    Command("manual", "manual", "How is a model written, how a screen read?",
            "fluxnet manual language"),
)  # fmt: skip

_MODULES = {command.name: command.module for command in COMMANDS}


def run(arguments: Sequence[str] | None = None) -> int:
    """Run one command line and give its exit status; never lets a traceback out."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    from fluxnet.cli.streams import complain, prepare_streams

    prepare_streams()
    if words and words[0] in _MODULES:
        return _guarded(words[0], words[1:])
    try:
        status = _about(words)
        print(end="", flush=True)
    except BrokenPipeError:
        sys.stdout = None
        return Exit.SOUND
    except OSError as error:
        complain(f"fluxnet: output: {error.strerror}")
        return Exit.MISUSE
    return status


def _about(words: list[str]) -> int:
    """What is said without any command."""
    if not words:
        print(_questions())
    elif words[0] in ("-h", "--help", "help"):
        print(_help())
    elif words[0] in ("--version", "-V"):
        print(f"fluxnet {fluxnet.__version__}")
    else:
        return _unknown(words[0])
    return Exit.SOUND


def _guarded(name: str, words: list[str]) -> int:
    """Run a command's module; what goes wrong becomes an exit status with one sentence."""
    import argparse

    from fluxnet.cli.faults import report_fault
    from fluxnet.cli.streams import complain
    from fluxnet.ground.errors import MisuseError

    try:
        module = import_module(f"fluxnet.cli.{_MODULES[name]}")
        parser = argparse.ArgumentParser(
            prog=f"fluxnet {name}",
            description=module.EXAMPLES,
            formatter_class=argparse.RawDescriptionHelpFormatter,
            allow_abbrev=False,
        )
        module.add_arguments(parser)
        status: int = module.run(parser.parse_args(words))
        print(end="", flush=True)
        return status
    except SystemExit as stop:
        return stop.code if isinstance(stop.code, int) else Exit.MISUSE
    except MisuseError as error:
        complain(f"fluxnet {name}: {error}")
        return Exit.MISUSE
    except KeyboardInterrupt:
        complain("interrupted")
        return Exit.INTERRUPTED
    except BrokenPipeError:
        # The reader of our output has gone (`| head`): nothing is left to be said to it.
        sys.stdout = None
        return Exit.SOUND
    except OSError as error:
        complain(f"fluxnet {name}: {error.filename or 'output'}: {error.strerror}")
        return Exit.MISUSE
    except Exception:
        return report_fault(name, words)


def _questions() -> str:
    """What is shown for ``fluxnet`` alone: the questions with the command for each."""
    lines = [f"  {c.question}\n      {c.example}" for c in COMMANDS]
    return "\n".join(
        [
            "fluxnet closes, explains and proves the rates of a cultivation.",
            "",
            *lines,
            "",
            "fluxnet COMMAND --help shows its options.",
        ]
    )


def _help() -> str:
    return "\n".join(
        [
            _questions(),
            "",
            "common options",
            "  --json        results as data, to standard output",
            "  --csv DIR     every table as a CSV file in DIR",
            "  --xlsx FILE   every table as a sheet of a workbook",
            "  --quiet       the verdict only",
            "  --force       overwrite files that exist",
            "  --no-color    no colour (also: the variable NO_COLOR)",
            "  --version     the version",
            "",
            "exit status  0 done and sound; 1 something is wrong with the data or the model;",
            "             2 wrongly used, or the input cannot be read; 3 a fault of ours;",
            "             130 interrupted",
        ]
    )


def _unknown(word: str) -> int:
    from difflib import get_close_matches

    near = get_close_matches(word, _MODULES, 1, 0.6)
    hint = f"; the nearest is {near[0]}" if near else ""
    print(f"fluxnet: there is no command {word!r}{hint}\n", file=sys.stderr)
    print(_questions(), file=sys.stderr)
    return Exit.MISUSE

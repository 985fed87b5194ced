"""How much longer a command takes than the bare import of the libraries that it uses.

    python tests/benchmarks/startup.py [runs]

The bare imports are `import` of exactly what the command itself has loaded when it ends; that is
verified before anything is measured. `check` loads lark, flint, networkx, numpy, highspy and
rich, and neither scipy, pandas, daqp nor matplotlib; `solve` of measured rates loads lark, flint,
numpy, daqp and rich, with an aim highspy as well, and neither scipy, pandas, networkx
nor matplotlib. `--help` loads no library.

Command and bare import are started in turn, as installed: with compiled byte code, a parser and
the statements of a model that was read before, all in a folder of this benchmark. (A model read
for the first time takes the parsing of its lines more.) Printed are medians of two measures and
their ratios: the time that passes, and the processor time that the process takes
(user and system), which is the steadier one on a machine that does other work. A command starts
no threads of numpy, a bare import does: that is part of what is measured.
"""

from __future__ import annotations

import json
import os
import resource
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path
from typing import NamedTuple

ROOT = Path(__file__).resolve().parents[2]

# The lysine producer with seven reactions more: 40.
EXTRA = """
product  glycerol, ethanol, formate, succinate
compartment extra
    gpd  : T3P + NADH -> glycerol
    pfl  : pyruvate -> acetyl-CoA + formate
    adh  : acetyl-CoA + 2 NADH -> ethanol
    sout : succinate-in -> succinate
    mae  : malate -> pyruvate + CO2 + NADPH
    pnt  : NADH <-> NADPH
    gapN : T3P -> 3PG + NADPH
limit  glucose <= 10
"""
RATES = """shared error biomass 4 %
run,species,direction,rate,sd,unit
1,glucose,in,4.0,3 %,mmol/g/h
1,oxygen,in,8.1,5 %,mmol/g/h
1,CO2,out,9.5,5 %,mmol/g/h
1,lysine,out,0.8,4 %,mmol/g/h
1,acetate,out,0.3,5 %,mmol/g/h
1,lactate,out,0.2,5 %,mmol/g/h
1,ethanol,out,0.1,5 %,mmol/g/h
1,mu,,0.2,2 %,1/h
"""

LIBRARIES = (
    "lark", "flint", "networkx", "numpy", "highspy", "daqp", "rich", "pandas", "scipy",
    "matplotlib", "pint", "xlsxwriter", "python_calamine",
)  # fmt: skip
PARTS = {"rich": "rich.console, rich.table"}

# What the installed script does.
COMMAND = "import sys; from fluxnet.__main__ import main; sys.exit(main())"
LOADED = """
import json, sys
from fluxnet.cli.main import run
run(sys.argv[1:])
print(json.dumps([name for name in {names!r} if name in sys.modules]), file=sys.stderr)
"""


class Pair(NamedTuple):
    """A command, the libraries that it loads, and the ratio that is asked for."""

    name: str
    words: tuple[str, ...]
    libraries: tuple[str, ...]
    below: float


PAIRS = (
    Pair("fluxnet --help", ("--help",), (), 6.0),
    Pair(
        "check, 40 reactions", ("check", "forty.flux"),
        ("lark", "flint", "networkx", "numpy", "highspy", "rich"), 1.4,
    ),
    Pair(
        "solve, 40 reactions", ("solve", "forty.flux", "forty.csv"),
        ("lark", "flint", "numpy", "daqp", "rich"), 1.5,
    ),
    Pair(
        "solve with an aim", ("solve", "forty.flux", "--maximise", "lysine"),
        ("lark", "flint", "numpy", "highspy", "daqp", "rich"), 1.5,
    ),
)  # fmt: skip


class Taken(NamedTuple):
    """The seconds that one process took."""

    passed: float
    processor: float


def bare(libraries: tuple[str, ...]) -> list[str]:
    """A process that imports the libraries and ends."""
    names = [PARTS.get(name, name) for name in libraries]
    return [sys.executable, "-c", f"import {', '.join(names)}" if names else "pass"]


def processor() -> float:
    used = resource.getrusage(resource.RUSAGE_CHILDREN)
    return used.ru_utime + used.ru_stime


def take(command: list[str], folder: Path, environment: dict[str, str]) -> Taken:
    start, used = time.perf_counter(), processor()
    done = subprocess.run(
        command, capture_output=True, cwd=folder, env=environment, check=False
    )
    taken = Taken(time.perf_counter() - start, processor() - used)
    if done.returncode not in (0, 1):
        raise SystemExit(f"{' '.join(command)}: {done.stderr.decode()}")
    return taken


def verify(pair: Pair, folder: Path, environment: dict[str, str]) -> None:
    """Stop where a command loads other libraries than its bare import."""
    done = subprocess.run(
        [sys.executable, "-c", LOADED.format(names=LIBRARIES), *pair.words],
        capture_output=True, cwd=folder, env=environment, text=True, check=True,
    )  # fmt: skip
    loaded = set(json.loads(done.stderr.splitlines()[-1]))
    if loaded != set(pair.libraries):
        raise SystemExit(f"{pair.name} loads {sorted(loaded)}, not {sorted(pair.libraries)}")


def middle(taken: list[Taken]) -> Taken:
    return Taken(
        statistics.median(t.passed for t in taken), statistics.median(t.processor for t in taken)
    )


def show(pair: Pair, one: Taken, other: Taken) -> None:
    for what, mine, bare_ in (
        ("time", one.passed, other.passed), ("processor", one.processor, other.processor)
    ):  # fmt: skip
        print(
            f"{pair.name:<21}{what:<11}{mine * 1e3:>6.0f} ms{bare_ * 1e3:>8.0f} ms"
            f"{mine / bare_:>8.2f}{pair.below:>7}"
        )


def main() -> None:
    runs = int(sys.argv[1]) if len(sys.argv) > 1 else 9
    print(f"{'command':<21}{'measure':<11}{'median':>9}{'bare':>11}{'ratio':>8}{'below':>7}")
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        text = (ROOT / "models" / "amino-acid.flux").read_text(encoding="utf-8")
        text = text[: text.index("\nvariant ")] + EXTRA
        (folder / "forty.flux").write_text(text, encoding="utf-8")
        (folder / "forty.csv").write_text(RATES, encoding="utf-8")
        environment = {k: v for k, v in os.environ.items() if not k.startswith("PYTHON")}
        environment["PYTHONPYCACHEPREFIX"] = str(folder / "compiled")
        environment["XDG_CACHE_HOME"] = str(folder / "cache")
        for pair in PAIRS:
            command = [sys.executable, "-c", COMMAND, *pair.words]
            verify(pair, folder, environment)
            taken: tuple[list[Taken], list[Taken]] = ([], [])
            for _ in range(runs + 1):
                taken[0].append(take(command, folder, environment))
                taken[1].append(take(bare(pair.libraries), folder, environment))
            show(pair, *(middle(some[1:]) for some in taken))


if __name__ == "__main__":
    main()

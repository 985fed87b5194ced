"""How much longer a command takes than the bare import of the libraries that it uses.

    python tests/benchmarks/startup.py [runs]

Prints medians over runs taken in turn, and their ratios, with what they should stay below.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

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

PYTHON = [sys.executable]
FLUXNET = [sys.executable, "-m", "fluxnet"]
CHECK = ["lark", "flint", "networkx", "numpy", "highspy", "rich.console", "rich.table"]
SOLVE = ["lark", "flint", "numpy", "highspy", "daqp", "rich.console", "rich.table"]


def imports(names: list[str]) -> list[str]:
    return [*PYTHON, "-c", f"import argparse, dataclasses, {', '.join(names)}"]


PAIRS = [
    ("fluxnet --help", [*FLUXNET, "--help"], "python -c pass", [*PYTHON, "-c", "pass"], 6.0),
    ("check, 40 reactions", [*FLUXNET, "check", "forty.flux"], "bare imports", imports(CHECK), 1.4),
    (
        "solve, 40 reactions",
        [*FLUXNET, "solve", "forty.flux", "forty.csv"],
        "bare imports",
        imports(SOLVE),
        1.5,
    ),
]


def seconds(command: list[str], folder: str) -> float:
    start = time.perf_counter()
    done = subprocess.run(command, capture_output=True, cwd=folder, check=False)
    elapsed = time.perf_counter() - start
    if done.returncode not in (0, 1):
        raise SystemExit(f"{' '.join(command)}: {done.stderr.decode()}")
    return elapsed


def main() -> None:
    runs = int(sys.argv[1]) if len(sys.argv) > 1 else 9
    print(f"{'command':<22}{'median':>9}   {'against':<16}{'median':>9}{'ratio':>8}{'below':>7}")
    with tempfile.TemporaryDirectory() as folder:
        text = (ROOT / "models" / "amino-acid.flux").read_text(encoding="utf-8")
        text = text[: text.index("\nvariant ")] + EXTRA
        (Path(folder) / "forty.flux").write_text(text, encoding="utf-8")
        (Path(folder) / "forty.csv").write_text(RATES, encoding="utf-8")
        for name, command, against, other, bound in PAIRS:
            times: tuple[list[float], list[float]] = ([], [])
            for _ in range(runs + 1):
                times[0].append(seconds(command, folder))
                times[1].append(seconds(other, folder))
            one, two = (statistics.median(t[1:]) for t in times)
            print(
                f"{name:<22}{one * 1e3:>7.0f}ms   {against:<16}{two * 1e3:>7.0f}ms"
                f"{one / two:>8.2f}{bound:>7}"
            )


if __name__ == "__main__":
    main()

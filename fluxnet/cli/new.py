"""``fluxnet new``: a folder to start from."""

from __future__ import annotations

import argparse
from pathlib import Path

from fluxnet.cli.main import Exit
from fluxnet.cli.new_raw import raw_files
from fluxnet.presenting.files import refuse_file, write_text
from fluxnet.rates.cultivation import Mode

__all__ = ["EXAMPLES", "MODEL", "RATES", "add_arguments", "run"]

EXAMPLES = """A folder to start from: a model, an empty rates table, an example of one, a how-to.

  fluxnet new my-strain
  fluxnet new my-strain --mode fed-batch       and templates for the raw data of a fed-batch
"""

MODEL = """\
model   My strain                      # a title
basis   mmol/g/h                       # the unit of every rate

substrate  glucose                     # can only be taken up
substrate  ammonia, oxygen
product    ethanol                     # can only be released
exchange   CO2                         # either way
biomass    X          CH1.8O0.5N0.2  ash 8 %

carrier    ATP        carries energy
carrier    NADH       carries 2 electrons
inside     pyruvate

parameter  PO   = 1.4 ± 0.2  in [0.5, 2.5]     # mol ATP per atom of oxygen
parameter  K_X  = 1.8 ± 0.3                    # mol ATP per mole of X

compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    burn       : pyruvate -> 3 CO2 + 5 NADH + ATP
    oxphos     : NADH + 0.5 oxygen -> PO ATP

compartment anabolism
    growth     : ? glucose + 0.2 ammonia + K_X ATP -> X + 0.1 CO2 + ? NADH

compartment maintenance
    upkeep     : ATP -> nothing

limit  upkeep = 1.0 ± 0.3              # a measured value, mmol ATP/g/h
"""

RATES = """\
shared error biomass 4 %
run,species,direction,rate,sd,unit
1,glucose,in,2.05,3 %,mmol/g/h
1,oxygen,in,3.60,5 %,mmol/g/h
1,CO2,out,4.40,5 %,mmol/g/h
1,ethanol,out,0.58,5 %,mmol/g/h
1,mu,,0.172,3 %,1/h
"""

_EMPTY = """\
# A row a run, below the units. An sd is absolute, or in per cent (3 %); 0 is exact.
run,glucose in,sd,oxygen in,sd,CO2 out,sd,ethanol out,sd,mu,sd
,mmol/g/h,,mmol/g/h,,mmol/g/h,,mmol/g/h,,1/h,
"""

_HOW_TO = """\
Put your reactions into model.flux and your rates into rates.csv, then

    fluxnet check model.flux                 is the reaction list sound?
    fluxnet closure rates.csv --model model.flux      do carbon and electrons close?
    fluxnet solve model.flux rates.csv       what did the cell do?

rates.csv is empty: a row of names, a row of units, and room for a row a run. A blank rate says:
exchanged, but not measured. example.csv shows the other way to write a table, a row a rate; its
numbers are invented, so that the commands can be tried.
`fluxnet manual language` and `fluxnet manual rates` tell how the two files are written.
"""

_RAW_HOW_TO = """
The folder raw holds templates for the raw data of a {mode}: what was run (run-sheet.csv),
samples, off-gas, what was added, and the hours that get rates (phases.csv). Their numbers are
invented, so that the commands can be tried; put your own in their place, or the files of your
instruments as they are.

    fluxnet rates raw --model model.flux -o measured.csv     rates with their errors
    fluxnet closure measured.csv --model model.flux
    fluxnet solve model.flux measured.csv

`fluxnet manual raw` tells what may stand in these files.
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("name", type=Path, help="the folder")
    parser.add_argument(
        "--mode", choices=[mode.value for mode in Mode],
        help="templates for raw data of this kind of cultivation as well",
    )  # fmt: skip
    parser.add_argument("--force", "-f", action="store_true", help="overwrite files that exist")


def run(arguments: argparse.Namespace) -> int:
    """Write the folder."""
    folder: Path = arguments.name
    files = {
        "model.flux": MODEL, "rates.csv": _EMPTY, "example.csv": RATES, "HOW-TO.txt": _HOW_TO
    }  # fmt: skip
    if arguments.mode is not None:
        files["HOW-TO.txt"] += _RAW_HOW_TO.format(mode=arguments.mode)
        files |= {f"raw/{name}": text for name, text in raw_files(Mode(arguments.mode)).items()}
        (folder / "raw").mkdir(parents=True, exist_ok=True)
    folder.mkdir(parents=True, exist_ok=True)
    for name in files:
        refuse_file(folder / name, force=arguments.force)
    for name, text in files.items():
        write_text(folder / name, text, force=arguments.force)
    print(f"wrote {', '.join(files)} into {folder}; next: fluxnet {_next(folder, arguments.mode)}")
    return Exit.SOUND


def _next(folder: Path, mode: str | None) -> str:
    """What to ask first."""
    model = folder / "model.flux"
    return f"check {model}" if mode is None else f"rates {folder / 'raw'} --model {model}"

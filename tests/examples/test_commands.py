"""The commands of each example's README run, and say what its answer rests on."""

from __future__ import annotations

import re
import shlex
import shutil
from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run

EXAMPLES = Path(__file__).resolve().parents[2] / "examples"

# The status of each command in turn, and what it must say, whatever the breaks of its lines.
EXPECTED: dict[str, tuple[tuple[Exit, tuple[str, ...]], ...]] = {
    "1-four-weeks-of-a-diol": (
        (Exit.SOUND, ("Sound: every line balances",)),
        (Exit.FINDING, ("W11 no 8.22", "W15 yes")),
        (Exit.FINDING, ("W11: does not close", "(h = 8.22 on 2 degrees of freedom, limit 5.99")),
        (Exit.FINDING, ("run W11 (temperature 37): inconsistent", "oxygen in 3.888 4.58 ± 0.22")),
        (Exit.SOUND, ("run W15", "Carrier ledger")),
        (Exit.FINDING, ("run W14", "inconsistent")),
        (Exit.FINDING, ("infeasible", "moves flux upkeep from 4 to 1.088")),
    ),
    "2-four-ways-to-one-acid": (
        (Exit.SOUND, ("Sound: every line balances", "glucose ATP 20.8")),
        (Exit.SOUND, ("glucose: glycerol * stirred", "1.63 mol/mol", "with 20 g/L of biomass 163",
                      "13 xylose alanine tank 0.535 0.535 0.423", "14* glucose alanine sealed")),
        (Exit.SOUND, ("With tank, most", "oxygen 16, CO2 51.2, base 189, heat 3.16 W/L",
                      "aspartate is second", "spends 1 ATP more", "14 % more of the electrons")),
        (Exit.SOUND, ("aspartate is second", "0.189 mol per mol", "134 kJ", "3.04", "2.24")),
        (Exit.SOUND, ("Where the yield goes: alanine", "-0.5363", "add up exactly")),
        (Exit.SOUND, ("8.016 at oxygen in 4.382", "1.028 4.921 0.9231", "proven")),
        (Exit.SOUND, ("8.149 at oxygen in 3.984, is that of glycerol * on-glucose", "proven")),
        (Exit.SOUND, ("at most 1.542 mol/mol", "80 alanine", "85 glycerol")),
        (Exit.SOUND, ("pyr-ly and pyr-ox 2 1.06 to 1.43",)),
        (Exit.SOUND, ("optimal", "0.7044 mol per mol xylose")),
        (Exit.SOUND, ("16 reactions have become", "Nothing is lost")),
    ),
    "3-one-yeast-in-three-vessels": (
        (Exit.SOUND, ("HPLC!E18 n.d. taken as not measured", "glucose in 3.24 ± 0.07", "RQ 1.320")),
        (Exit.FINDING, ("vessel 1 slow yes", "vessel 1 fast no", "Near 3.10 ± 0.04 it was the")),
        (Exit.SOUND, ("run vessel 1 slow (phase slow, mode chemostat): solved",)),
        (Exit.SOUND, ("decimal comma, 3 rows of titles", "growth glucose 4.60 ± 0.14")),
        (Exit.SOUND, ("run vessel 2 growth (phase growth, mode batch): solved",)),
        (Exit.SOUND, ("found over expected at the end: 100.2", "Enriched or pure oxygen")),
        (Exit.SOUND, ("The rates and the network agree", "Carrier ledger")),
    ),
}


def commands(example: str) -> list[list[str]]:
    """The commands of an example's README, without the name of the program."""
    text = (EXAMPLES / example / "README.md").read_text(encoding="utf-8")
    return [shlex.split(line) for line in re.findall(r"^    fluxnet (.+)$", text, re.M)]


def test_every_example_has_its_commands_tested():
    found = {p.name for p in EXAMPLES.iterdir() if (p / "README.md").is_file()}
    assert found == set(EXPECTED), "an example has a line of EXPECTED for each of its commands"
    for name, expected in EXPECTED.items():
        assert len(commands(name)) == len(expected), name


@pytest.mark.parametrize(
    ("example", "place"),
    [
        pytest.param(name, place, id=f"{name[0]}-{place + 1}-{commands(name)[place][0]}")
        for name, expected in EXPECTED.items()
        for place in range(len(expected))
    ],
)
def test_a_command_ends_as_it_should_and_says_what_counts(
    example: str,
    place: int,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    folder = shutil.copytree(EXAMPLES / example, tmp_path / "example")
    monkeypatch.chdir(folder)
    status, sentences = EXPECTED[example][place]
    for earlier in commands(example)[:place]:
        if earlier[0] == "rates":  # what it writes is read by those that follow
            run(earlier)
    capsys.readouterr()
    assert run(commands(example)[place]) == status
    shown = " ".join(capsys.readouterr().out.split())
    for sentence in sentences:
        assert sentence in shown

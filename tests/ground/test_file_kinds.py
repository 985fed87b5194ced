"""Which kind of file a text is: told where it is sure, and else nothing is told."""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.ground.file_kinds import find_model_instead, find_table_instead
from fluxnet.ground.resources import resource_folder

MODELS = sorted(
    p for folder in ("models", "examples") for p in resource_folder(folder).rglob("*.flux")
)
TABLES = sorted(resource_folder("examples").rglob("*.csv"))

TABLE_TEXTS = {
    "long": "run,species,direction,rate,sd,unit\nA,glucose,in,2.05,3 %,mmol/g/h\n",
    "long with semicolons": "run;species;direction;rate;unit\nA;glucose;in;2,05;mmol/g/h\n",
    "long with tabs": "species\trate\tunit\nglucose\t2\tmmol\n",
    "wide": "run,glucose in [mmol/g/h],glucose sd,mu [1/h]\nA,2.05,0.1,0.17\n",
    "wide with units below": "run,glucose in,CO2 out\n,mmol/g/h,mmol/g/h\nA,2,4\n",
    "notes above": "Vessel 3\n\nshared error biomass 4 %\nspecies,rate,unit\nglucose,2,mmol\n",
    "declarations above": "biomass X CH1.8O0.5N0.2 ash 8 %\nspecies,rate,unit\nCO2,2,mmol\n",
    "marked": "\ufeffrun,species,direction,rate,sd,unit\nA,glucose,in,2.05,3 %,mmol/g/h\n",
    "other titles": "Versuch;Stoff;Wert\nA;Glucose;2,05\nA;CO2;4,4\n",
}
MODEL_TEXTS = {
    "small": "substrate A C\nproduct B C\ncompartment all\n    r : A -> B\n",
    "reactions only": "use \"names.flux\"\na : A -> B\nb : B <-> 2 C\n",
    "arrow of a letter": "compartment all\n    r : A → B\n    s : B ⇌ C\n",
    "commas": "substrate a, b, c, d\nproduct e, f, g, h\ninside i, j, k, l\n",
    "ranges": "parameter PO = 1.4 ± 0.2 in [0.5, 2.5]\nparameter K = 1 in [0.5, 2.5]\n",
    "limits": "limit glucose in <= 3\nlimit CO2 out >= 1\nlimit oxygen in <= 2\n",
    "long names": "inside species, rate, unit\ncompartment c\n    r : species -> rate\n",
    "nothing": "# only a remark\n",
    "words": "this is no file, that we know, of any kind\nand more, of it\n",
}


@pytest.mark.parametrize("kind", TABLE_TEXTS)
def test_a_table_is_told_from_a_model(kind):
    lines = TABLE_TEXTS[kind].splitlines()
    assert find_table_instead(lines, "x") is not None
    assert find_model_instead(lines, "x") is None


@pytest.mark.parametrize("kind", MODEL_TEXTS)
def test_a_model_is_not_taken_for_a_table(kind):
    assert find_table_instead(MODEL_TEXTS[kind].splitlines(), "x") is None


@pytest.mark.parametrize("kind", ["small", "reactions only", "arrow of a letter", "long names"])
def test_a_reaction_list_is_told_from_a_table(kind):
    found = find_model_instead(MODEL_TEXTS[kind].splitlines(), "x.flux")
    assert found is not None
    assert found.message == "x.flux looks like a model; a table of rates was expected here"


def test_a_table_with_arrows_in_its_notes_is_no_model():
    text = "made by a -> b\nthen b -> c\n" + TABLE_TEXTS["long"]
    assert find_model_instead(text.splitlines(), "x") is None


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.name)
def test_no_model_that_comes_with_the_tool_is_taken_for_a_table(path: Path):
    lines = path.read_text(encoding="utf-8").splitlines()
    assert find_table_instead(lines, path.name) is None


@pytest.mark.parametrize("path", TABLES, ids=lambda p: p.name)
def test_no_table_that_comes_with_the_tool_is_taken_for_a_model(path: Path):
    lines = path.read_text(encoding="utf-8", errors="replace").splitlines()  # exports are Latin-1
    assert find_model_instead(lines, path.name) is None

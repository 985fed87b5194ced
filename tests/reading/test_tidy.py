"""The canonical layout of a file."""

from __future__ import annotations

from fluxnet.reading.tidy import tidy_text

ROUGH = """\
# Organism   somebody's yeast


model Yeast , lumped   # the title
basis mmol/g/h

substrate glucose#sugar
substrate   xylose  C5H10O5
product ethanol,lactate , 2,3-butanediol
biomass X CH1.8O0.5N0.2   ash 8+-1%
carrier NADH carries   2 electrons,ATP
parameter PO=1.4+-0.2 in[0.5,2.5]
 parameter K_X = 2.1 # mol


compartment   catabolism
  # the upper part
  kinase:glucose+ATP→G6P
  glycolysis : G6P->2 pyruvate+ 3ATP   # wrong, but kept
  th : NADH⇌ NADPH  accept dead-end:   by hand
  # the end of it
limit CO2/oxygen=1.05±0.03
limit CO2 between in 1 and out 5
variant   lean   from wide,b   "few ways"
\tlimit oxygen<=0
\tadd to catabolism
\t\tx : ( 2*PO ) ATP -> nothing
\tset PO=1.0
frobnicate   all
"""
NEAT = """\
# Organism   somebody's yeast

model      Yeast , lumped  # the title
basis      mmol/g/h

substrate  glucose    #sugar
substrate  xylose  C5H10O5
product    ethanol, lactate, 2,3-butanediol
biomass    X       CH1.8O0.5N0.2  ash 8 ± 1 %
carrier    NADH carries 2 electrons, ATP
parameter  PO  = 1.4 ± 0.2  in [0.5, 2.5]
parameter  K_X = 2.1  # mol

compartment catabolism
    # the upper part
    kinase     : glucose + ATP -> G6P
    glycolysis : G6P -> 2 pyruvate + 3ATP  # wrong, but kept
    th         : NADH <-> NADPH  accept dead-end: by hand
    # the end of it
limit      CO2 / oxygen = 1.05 ± 0.03
limit      CO2 between in 1 and out 5
variant lean "few ways" from wide, b
    limit  oxygen <= 0
    add to catabolism
        x : ( 2*PO ) ATP -> nothing
    set  PO = 1.0
frobnicate   all
"""


def test_a_rough_file_is_laid_out_in_one_way() -> None:
    assert tidy_text(ROUGH) == NEAT


def test_a_neat_file_stays_as_it_is() -> None:
    assert tidy_text(NEAT) == NEAT


def test_line_ends_and_a_mark_of_byte_order_are_made_alike() -> None:
    assert tidy_text("\ufeff" + ROUGH.replace("\n", "\r\n")) == NEAT


def test_an_empty_text_stays_empty() -> None:
    assert tidy_text("") == ""
    assert tidy_text("\n\n") == ""


def test_a_long_reaction_is_broken_behind_a_plus_and_read_as_the_same() -> None:
    terms = " + ".join(f"0.{k} precursor-{k}" for k in range(11, 40))
    text = f"compartment anabolism\n    growth : {terms} -> X\n"

    neat = tidy_text(text)

    assert max(len(line) for line in neat.splitlines()) <= 100
    assert len(neat.splitlines()) > 4
    assert tidy_text(neat) == neat
    assert "".join(neat.split()) == "".join(text.split())


def test_a_continued_line_with_remarks_between_keeps_them() -> None:
    text = "compartment c\n  a : A +  # first\n     B -> C  # last\n"

    neat = tidy_text(text)

    assert neat == "compartment c\n    a : A +  # first\n     B -> C  # last\n"
    assert tidy_text(neat) == neat


def test_a_continued_line_without_remarks_is_joined() -> None:
    assert tidy_text("compartment c\n a : A +\n   B ->\n   C\n") == (
        "compartment c\n    a : A + B -> C\n"
    )

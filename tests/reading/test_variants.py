"""Variants as data, and what is said of them before they are applied."""

from __future__ import annotations

from fractions import Fraction

import pytest

HEAD = """\
substrate glucose, oxygen
product ethanol, CO2
carrier NADH carries 2 electrons, NADPH carries 2 electrons
parameter p = 2 ± 0.1 in [1, 3]
compartment c
    a : p glucose -> (2*p) ethanol + (2*p) CO2
    b : ethanol + 3 oxygen -> 2 CO2
limit oxygen <= 8
"""


def test_a_variant_keeps_what_it_changes_as_data(read) -> None:
    network = read(HEAD + """\
variant wide "more ways" # a comment
    inside pyruvate
    add to c
        pfl : glucose -> 2 pyruvate + 2 NADH
        th  : NADH <-> NADPH
    set p = 1.5
    limit oxygen <= 3
    limit pfl <= 2
    drop b, limit oxygen in
variant wider from wide
    drop th, pfl, pyruvate
""")
    wide, wider = network.variants

    assert (wide.name, wide.words, wide.parents) == ("wide", "more ways", ())
    assert [s.name for s in wide.species] == ["pyruvate"]
    assert [(r.name, r.compartment) for r in wide.reactions] == [("pfl", "c"), ("th", "c")]
    assert wide.settings[0].value == Fraction(3, 2)
    assert (wide.settings[0].sd, wide.settings[0].low) == (None, None)
    assert [str(limit.quantity) for limit in wide.limits] == ["oxygen in", "flux pfl"]
    assert [d.name or f"limit {d.quantity}" for d in wide.drops] == ["b", "limit oxygen in"]
    assert (wider.parents, [d.name for d in wider.drops]) == (("wide",), ["th", "pfl", "pyruvate"])
    assert [r.name for r in network.reactions] == ["a", "b"]


def test_a_child_may_declare_anew_what_its_parent_adds(read) -> None:
    network = read(HEAD + """\
variant one
    add to c
        th : NADH -> NADPH
variant two from one
    add to c
        th : NADH <-> NADPH
""")

    assert [v.reactions[0].reversible for v in network.variants] == [False, True]


def test_a_variant_may_replace_a_reaction_that_it_drops(read) -> None:
    network = read(HEAD + """\
variant one
    drop b
    add to c
        b : 2 ethanol + 6 oxygen -> 4 CO2
""")

    assert network.variants[0].reactions[0].name == "b"


@pytest.mark.parametrize(
    ("lines", "name", "line"),
    [
        (["variant v", "    add to c", "        a : NADH -> NADPH"], "declared-twice", 11),
        (["variant v", "    set p = 1", "    set p = 2"], "declared-twice", 11),
        (["variant v", "    set q = 1"], "variant-target", 10),
        (["variant v", "    drop z"], "variant-target", 10),
        (["variant v", "    set p = 9"], "outside-range", 10),
        (["variant v from v", "    set p = 1"], "variant-circle", 9),
        (["variant v from w", "    set p = 1"], "unknown-variant", 9),
        (["variant v", "    add to d", "        th : NADH -> NADPH"], "unknown-compartment", 10),
        (["variant v", "    limit oxygen <= 1", "    limit oxygen <= 2"], "limit-repeated", 11),
        (["variant v", "    th : NADH -> NADPH"], "reaction-outside", 10),
        (["variant v", "    parameter q = 1"], "bad-indentation", 10),
        (["variant v", "    add to c", "        th : NADH -> 2 NADPH"], "unbalanced-line", 11),
        (["variant v", "    add to c", "        th : NADH -> NADPG"], "unknown-species", 11),
    ],
)
def test_what_is_wrong_in_a_variant_is_told_at_its_line(faults, lines, name, line) -> None:
    found = faults(HEAD + "\n".join(lines) + "\n")

    assert (name, line) in [(d.name.value, d.span.line) for d in found]
    assert {d.name.value for d in found} <= {name, "variant-empty", "unused-parameter"}


def test_a_species_of_a_variant_is_not_known_outside_of_it(fault) -> None:
    found = fault(HEAD.replace("    b :", "    e : glucose -> 2 lactate\n    b :") + """\
variant v
    product lactate
    set p = 1
""")

    assert found.name.value == "unknown-species"
    assert "only in variant v" in found.mend


def test_lines_of_variants_are_balanced_though_another_line_is_at_fault(faults) -> None:
    found = faults(HEAD + """\
subtrate xylose
variant v
    add to c
        th : NADH -> 2 NADPH
""")

    assert [d.name.value for d in found] == ["unknown-statement", "unbalanced-line"]


def test_faults_of_variants_are_told_beside_those_of_the_model_and_make_no_others(faults) -> None:
    found = faults("""\
substrate glucose
product   ethanol, lactate, CO2
inside    pyruvate
carrier   NADH
parameter a = 2 in [1, 3]
compartment c
    gly : glucose -> 2 pyruvate + (a + 2 - a) NADH
    eth : pyruvate + NADH -> ethanol + 2 CO2
    ldh : pyruvate + NADH -> lactat
    bad : pyruvate => lactate
limit glucose <= -3
variant one
    drop ldh, bad
    set a = 7
variant two from one
    drop limit glucose
variant three
    drop ldh,, bad
    add to c
        ldh : pyruvate + NADH -> lactate
        new : pyruvate + NADH -> lactate + CO2
variant four
    drop ethanol
    limit glucos <= 1
variant five from four
""")

    assert [(d.span.line, d.name.value) for d in found] == [
        (8, "still-used"),  # once, though `five` inherits it
        (8, "unbalanced-line"),
        (9, "unknown-species"),
        (10, "wrong-arrow"),
        (11, "bad-limit"),
        (14, "outside-range"),
        (18, "unreadable-line"),
        (21, "unbalanced-line"),
        (24, "unknown-limit"),
    ]
    used = found[0]
    assert used.span.column == 30
    assert [(s.line, s.column) for s in used.also] == [(23, 10)]


def test_a_long_chain_of_variants_is_applied_link_by_link(read) -> None:
    from fluxnet.network.variant import apply_variant

    links = "".join(
        f"variant v{k}{f' from v{k - 1}' if k else ''}\n    set a = {k + 2}\n"
        f"    inside m{k} C3H4O3\n    add to c\n        r{k} : pyruvate -> m{k}\n"
        for k in range(400)
    )
    network = read(
        "substrate glucose\nproduct ethanol, CO2\ninside pyruvate\ncarrier NADH\n"
        "parameter a = 1 ± 0.1 in [0, 500]\ncompartment c\n"
        "    gly : glucose -> 2 pyruvate + (a + 2 - a) NADH\n"
        "    eth : pyruvate + NADH -> ethanol + CO2\n" + links
    )

    last, told = apply_variant(network, "v399")

    assert told == ()
    assert [r.name for r in last.reactions] == ["gly", "eth", *(f"r{k}" for k in range(400))]
    a = last.parameters[0]
    assert (a.value, a.sd, a.high) == (401, Fraction(1, 10), 500)

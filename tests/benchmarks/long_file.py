"""How the check of a long file takes its time: files of 200, 500 and 1,000 reactions.

Prints seconds for reading with balances, for the graph, and for the whole check, and the
exponent by which each grows. Run it by hand::

    python tests/benchmarks/long_file.py [REACTIONS ...]
"""

from __future__ import annotations

import random
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from math import log
from typing import TypeVar

from fluxnet.checks.graph import find_dead_ends, find_parts
from fluxnet.checks.twins import check_twins
from fluxnet.checks.unused import check_unused
from fluxnet.ground.diagnostic import in_order
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.reading.model import read_model_text
from fluxnet.studies.check import check_network

Result = TypeVar("Result")

HEAD = """model  Invented network of {count} reactions
basis  mmol/g/h
substrate glucose, ammonia, oxygen
exchange  CO2
biomass   X CH1.8O0.5N0.2 ash 8 %
carrier   ATP carries energy
carrier   NADH carries 2 electrons
carrier   NADPH carries 2 electrons
inside    hub C3H4O3, two C2H2O
"""

CORE = """compartment core
    uptake    : glucose -> 2 hub + 2 ATP + 2 NADH
    cleave    : hub -> two + CO2 + NADH
    burn      : two -> 2 CO2 + 4 NADH + ATP
    breathe   : NADH + 0.5 oxygen -> 1.4 ATP
    exchange  : NADH <-> NADPH
    growth    : ? hub + 0.2 ammonia + 2 ATP + ? NADH -> X + 0.1 CO2
    upkeep    : ATP -> nothing
"""


@dataclass(frozen=True, slots=True)
class Compound:
    """An invented inside species: its name and what it holds."""

    name: str
    carbon: int
    hydrogen: int
    oxygen: int

    @property
    def formula(self) -> str:
        parts = (("C", self.carbon), ("H", self.hydrogen), ("O", self.oxygen))
        return "".join(e if n == 1 else f"{e}{n}" for e, n in parts if n)


def write_model(count: int) -> str:
    """A sound model of so many reactions: pathways that leave the hub and end in a product.

    Each step loads or unloads a carrier, takes up or sets free CO2, or adds a C2 group; every
    third pathway is joined to the one before it by a reversible transfer.
    """
    dice = random.Random(f"long file of {count} reactions")
    hub = Compound("hub", 3, 4, 3)
    left = count - CORE.count("\n") + 1
    declared: list[str] = []
    products: list[str] = []
    lines: list[str] = []
    number = 0
    while left > 0:
        number += 1
        steps = min(left, dice.randint(4, 14))
        at, path = hub, [f"compartment path{number}"]
        for k in range(steps - 1):
            after, line = _step(dice, at, f"m{number}-{k + 1}", f"r{number}-{k + 1}")
            path.append(line)
            declared.append(f"inside {after.name} {after.formula}")
            at = after
        product = f"p{number}"
        products.append(f"product {product} {at.formula}")
        path.append(f"    out{number} : {at.name} -> {product}")
        left -= steps
        lines += path
    return HEAD.format(count=count) + "\n".join([*declared, *products, CORE, *lines]) + "\n"


def _step(dice: random.Random, at: Compound, name: str, reaction: str) -> tuple[Compound, str]:
    """One balanced step from a compound to a new one."""
    carrier = dice.choice(("NADH", "NADPH"))
    kind = dice.choice(("load", "unload", "unload", "fix", "cleave", "add", "turn", "spend"))
    moved = replace(at, name=name)
    used, made, arrow = at.name, name, "->"
    if kind == "load" and at.hydrogen >= 4:
        moved, made = replace(moved, hydrogen=at.hydrogen - 2), f"{name} + {carrier}"
    elif kind == "unload":
        moved, used = replace(moved, hydrogen=at.hydrogen + 2), f"{at.name} + {carrier}"
        arrow = "<->"
    elif kind == "fix":
        moved = replace(moved, carbon=at.carbon + 1, oxygen=at.oxygen + 2)
        used = f"{at.name} + CO2 + ATP"
    elif kind == "cleave" and at.carbon >= 3 and at.oxygen >= 2:
        moved = replace(moved, carbon=at.carbon - 1, oxygen=at.oxygen - 2)
        made = f"{name} + CO2"
    elif kind == "add":
        moved = replace(
            moved, carbon=at.carbon + 2, hydrogen=at.hydrogen + 2, oxygen=at.oxygen + 1
        )
        used = f"{at.name} + two"
    elif kind == "spend":
        used = f"{at.name} + ATP"
    else:
        arrow = "<->"
    return moved, f"    {reaction} : {used} {arrow} {made}"


def _timed(work: Callable[[], Result]) -> tuple[Result, float]:
    """What some work gives, and the least of three times it takes [s]."""
    least = float("inf")
    for _ in range(3):
        start = time.perf_counter()
        result = work()
        least = min(least, time.perf_counter() - start)
    return result, least


def measure(count: int) -> tuple[float, float, float]:
    """Seconds for reading with balances, for the graph, for the whole check with reading."""
    text = write_model(count)
    reading, read = _timed(lambda: read_model_text(text))
    network = reading.network
    if network is None:
        raise SystemExit("\n".join(d.message for d in reading.diagnostics))

    def draw() -> int:
        stoich = stoichiometry(network)
        found = find_dead_ends(network, stoich), find_parts(network, stoich)
        told = in_order([*check_twins(network, stoich), *check_unused(network)])
        return len(found) + len(told)

    _, graph = _timed(draw)
    result, check = _timed(lambda: check_network(network, reading.diagnostics))
    state = "sound" if result.sound and result.verified else "NOT SOUND"
    print(
        f"{count:6d} reactions {len(network.species):6d} species   read {read:7.2f} s   "
        f"graph {graph:6.2f} s   all checks {check:7.2f} s   {state}, "
        f"{len(result.diagnostics)} findings, {len(result.blocked_reactions)} blocked, "
        f"{result.freedom.dimension} free"
    )
    return read + graph, check, read + check


def report(counts: Sequence[int]) -> None:
    """Print the times and the exponents between the smallest and the largest file."""
    measure(40)
    times = [measure(count) for count in counts]
    span = log(counts[-1] / counts[0])
    for k, what in enumerate(("parsing, balances and graph", "checks", "everything")):
        exponent = log(times[-1][k] / times[0][k]) / span
        print(f"{what}: {times[-1][k]:.2f} s at {counts[-1]}, growing as n^{exponent:.2f}")


if __name__ == "__main__":
    report([int(word) for word in sys.argv[1:]] or [200, 500, 1000])

"""All routes of a network of 37 balanced species and 75 one-way reactions, beside pplpy.

Run it as a script: ``python tests/benchmarks/routes.py [--large]``. Both are given the same cone,
as the model writes it, and find the same 17,150 modes (compared as whole numbers, every one).
Prints the ratio of the medians of alternating repeats, which should be above 10, and how time
grows with the number of modes, on the same network with reactions dropped. pplpy is also given
the cone as it is after our compression, which costs it nothing: that ratio says what the method
alone is worth. ``--large`` adds the network of 60 reactions, with 286,539 modes, and the memory
that they took.
"""

from __future__ import annotations

import resource
import sys
from dataclasses import replace
from fractions import Fraction
from pathlib import Path
from statistics import median
from time import perf_counter

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "modes"))
from every_support import canonical
from polyhedra import cone_of, extreme_rays, joined

from fluxnet.modes.compression import compress
from fluxnet.modes.cone import Cone
from fluxnet.modes.enumerate import find_modes
from fluxnet.reading.model import read_model
from fluxnet.studies.routes_system import Openings, route_system

HERE = Path(__file__).resolve().parent
REPEATS = 3
DROPPED = (
    ("frd", "bdh", "fhl", "gpd", "ldh", "ppc"), ("frd", "bdh", "fhl", "gpd"), ("frd", "bdh"),
    ("frd",), (),
)  # fmt: skip


def cone_in(name: str, dropped: tuple[str, ...] = ()) -> Cone:
    """The cone of a model beside this file, without some reactions."""
    network = read_model(HERE / name).network
    assert network is not None
    kept = tuple(r for r in network.reactions if r.name not in dropped)
    return route_system(replace(network, reactions=kept), Openings()).cone


def compressed(cone: Cone) -> Cone:
    """The small cone as balances of its groups."""
    small = compress(cone)
    rows = tuple(
        {g: Fraction(1), **{small.free[t]: -a for t, a in form.items()}}
        for g, form in enumerate(small.forms)
        if g not in small.free
    )
    names = tuple(cone.columns[group.members[0][0]] for group in small.groups)
    return Cone(names, tuple(group.both_ways for group in small.groups), rows)


def compare() -> bool:
    """Both on the same cone; whether the ratio is as it should be."""
    cone = cone_in("routes.flux")
    tight = compressed(cone)
    columns = len(cone.columns) + sum(cone.both_ways)
    print(f"{len(cone.rows)} balances, {columns} one-way columns")
    ours, theirs, theirs_tight = [], [], []
    for _ in range(REPEATS):
        start = perf_counter()
        modes = find_modes(cone)
        ours.append(perf_counter() - start)
        system = cone_of(cone)
        start = perf_counter()
        rays = extreme_rays(system)
        theirs.append(perf_counter() - start)
        system = cone_of(tight)
        start = perf_counter()
        extreme_rays(system)
        theirs_tight.append(perf_counter() - start)
        found = {canonical(cone, mode) for mode in modes.values.tolist()}
        assert found == joined(cone, rays), "the two do not find the same modes"
        assert len(found) == modes.count
    ratio = median(theirs) / median(ours)
    print(f"{modes.count:,} modes: ours {median(ours):.2f} s, pplpy {median(theirs):.2f} s")
    print(f"ratio {ratio:.1f} (to be above 10)")
    print(f"pplpy on the compressed cone: {median(theirs_tight) / median(ours):.1f} times ours")
    return ratio > 10


def growth() -> None:
    """Time by the number of modes."""
    print("modes     seconds   per 1,000 modes")
    for dropped in DROPPED:
        cone = cone_in("routes.flux", dropped)
        start = perf_counter()
        count = find_modes(cone).count
        seconds = perf_counter() - start
        print(f"{count:8,}  {seconds:7.3f}  {1000 * seconds / max(count, 1):8.4f}")


def large() -> None:
    """The network of 60 reactions."""
    start = perf_counter()
    modes = find_modes(cone_in("sixty.flux"), memory=4e9)
    seconds = perf_counter() - start
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1e6
    print(f"{modes.count:,} modes in {seconds:.0f} s ({modes.ending.value}), {peak:.2f} GB at most")


if __name__ == "__main__":
    sound = compare()
    growth()
    if "--large" in sys.argv:
        large()
    sys.exit(not sound)

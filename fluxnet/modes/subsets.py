"""Which bit patterns have more than two of many others inside them: a tree of patterns.

The patterns of the tree are halved by one bit after another. Each node keeps what all of its
patterns have in common; a pattern that lacks any of it holds none of them, and is not taken
down that branch (Terzer & Stelling 2008, from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["Node", "holds_third", "plant"]

Patterns = NDArray[np.uint64]

_LEAF = 24
_BLOCK = 1 << 21


@record
class Node:
    """A node: what its patterns share, and either two halves or the patterns themselves."""

    shared: Patterns
    halves: tuple[Node, ...]
    patterns: Patterns | None


def plant(patterns: Patterns) -> Node:
    """A tree over patterns of shape (n, words)."""
    shared = np.bitwise_and.reduce(patterns, axis=0)
    if len(patterns) <= _LEAF:
        return Node(shared, (), patterns)
    counts = _bit_counts(patterns)
    bit = int(np.argmin(np.abs(counts - len(patterns) / 2)))
    has = (patterns[:, bit // 64] >> np.uint64(bit % 64)) & np.uint64(1) == 1
    if has.all() or not has.any():
        return Node(shared, (), patterns)
    return Node(shared, (plant(patterns[~has]), plant(patterns[has])), None)


def holds_third(tree: Node, unions: Patterns) -> NDArray[np.bool_]:
    """For each union of two patterns of the tree whether it holds a third one.

    Examples
    --------
    >>> tree = plant(np.array([[1], [2], [4], [3]], dtype=np.uint64))
    >>> holds_third(tree, np.array([[5], [3]], dtype=np.uint64)).tolist()
    [False, True]
    """
    found = np.zeros(len(unions), dtype=np.int32)
    _descend(tree, ~unions, np.arange(len(unions)), found)
    return found > 2


def _descend(
    node: Node, lacks: Patterns, which: NDArray[np.intp], found: NDArray[np.int32]
) -> None:
    which = which[found[which] <= 2]
    for word, shared in enumerate(node.shared):
        if shared:
            which = which[lacks[which, word] & shared == 0]
    if not len(which):
        return
    for half in node.halves:
        _descend(half, lacks, which, found)
    if node.patterns is None:
        return
    step = max(1, _BLOCK // len(node.patterns))
    for start in range(0, len(which), step):
        some = which[start : start + step]
        inside = np.ones((len(some), len(node.patterns)), dtype=bool)
        for word in range(lacks.shape[1]):
            inside &= (lacks[some, word, None] & node.patterns[None, :, word]) == 0
        found[some] += inside.sum(axis=1, dtype=np.int32)


def _bit_counts(patterns: Patterns) -> NDArray[np.intp]:
    """How many patterns have each bit."""
    some = patterns[:: max(1, len(patterns) // 512)]
    octets = np.ascontiguousarray(some).view(np.uint8)
    bits = np.unpackbits(octets, axis=1, bitorder="little")
    return np.asarray(bits.sum(axis=0, dtype=np.intp) * (len(patterns) // len(some)))

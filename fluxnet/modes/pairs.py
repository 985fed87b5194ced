"""Pairs of patterns whose union is small enough for the two to be neighbours.

Patterns are sorted and cut into blocks. What a block's patterns share has to be in every union
with them: if that alone is too much, two blocks are passed over with one look.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["Candidates", "room_for", "small_unions"]

Patterns = NDArray[np.uint64]
Places = NDArray[np.intp]

_BLOCK = 64
_AT_ONCE = 128  # pairs of blocks: half a million pairs of patterns, near enough to the processor
_PORTION = 1 << 21
_MIX = np.uint64(0x9E3779B97F4A7C15)


@record
class Candidates:
    """Pairs by their places in two lists, and their unions (n, words)."""

    left: Places
    right: Places
    unions: Patterns


def room_for(left: int, right: int, words: int) -> int:
    """About the bytes that looking at pairs of two such lists takes at most."""
    blocks = (left // _BLOCK + 1) * (right // _BLOCK + 1)
    at_once = min(left * right, _PORTION + _AT_ONCE * _BLOCK * _BLOCK)
    return 20 * blocks + at_once * (40 + 24 * words)


def _sorted_order(patterns: Patterns) -> Places:
    """Places in an order that puts like patterns side by side."""
    return np.lexsort(patterns.T)


def small_unions(
    left: Patterns, right: Patterns, most: int, turning: Patterns
) -> Iterator[Candidates]:
    """Pairs whose union has at most ``most`` bits, in portions; places are as given.

    Pairs with one and the same union hold one another, and are all left out as far as a
    portion shows them.

    Parameters
    ----------
    turning
        Of each word the even bits that, with the next bit, are the two directions of one
        column: a union with both is left out.
    """
    first, second = _sorted_order(left), _sorted_order(right)
    blocks = [_blocks(left[first]), _blocks(right[second])]
    shared = [np.bitwise_and.reduce(b, axis=1) for b in blocks]
    count_type = np.uint8 if left.shape[1] < 4 else np.uint16
    near = np.zeros((len(blocks[0]), len(blocks[1])), dtype=count_type)
    for word in range(left.shape[1]):
        near += np.bitwise_count(shared[0][:, None, word] | shared[1][None, :, word])
    rows, columns = np.nonzero(near <= most)
    portion: list[Candidates] = []
    held = 0
    for start in range(0, len(rows), _AT_ONCE):
        some = slice(start, start + _AT_ONCE)
        a, b = blocks[0][rows[some]], blocks[1][columns[some]]
        count = np.bitwise_count(a[:, :, None, 0] | b[:, None, :, 0]).astype(count_type, copy=False)
        for word in range(1, left.shape[1]):
            count += np.bitwise_count(a[:, :, None, word] | b[:, None, :, word])
        near_by = np.flatnonzero(count.reshape(-1) <= most)
        k, inside = np.divmod(near_by, _BLOCK * _BLOCK)
        i, j = np.divmod(inside, _BLOCK)
        unions = a[k, i] | b[k, j]
        i += rows[some][k] * _BLOCK
        j += columns[some][k] * _BLOCK
        both = (unions & (unions >> np.uint64(1)) & turning).any(axis=1)
        real = np.flatnonzero((i < len(left)) & (j < len(right)) & ~both)
        portion.append(Candidates(i[real], j[real], unions[real]))
        held += len(portion[-1].left)
        if held >= _PORTION:
            yield _alone(portion, first, second)
            portion, held = [], 0
    if held:
        yield _alone(portion, first, second)


def _alone(portion: list[Candidates], first: Places, second: Places) -> Candidates:
    """The pairs of a portion whose union no other pair has; their places in the given lists."""
    unions = np.concatenate([some.unions for some in portion])
    order = _alike(unions)
    lined = unions[order]
    same = (lined[1:] == lined[:-1]).all(axis=1)
    edge = np.zeros(1, dtype=bool)
    once = order[~(np.append(edge, same) | np.append(same, edge))]
    left = np.concatenate([some.left for some in portion])[once]
    right = np.concatenate([some.right for some in portion])[once]
    return Candidates(first[left], second[right], unions[once])


def _alike(patterns: Patterns) -> Places:
    """An order in which equal patterns stand together."""
    key = patterns[:, 0].copy()
    for word in range(1, patterns.shape[1]):
        key = (key ^ (key >> np.uint64(29))) * _MIX + patterns[:, word]
    order = np.argsort(key)
    if patterns.shape[1] > 1:
        lined, keys = patterns[order], key[order]
        mixed = (keys[1:] == keys[:-1]) & (lined[1:] != lined[:-1]).any(axis=1)
        if mixed.any():  # two patterns with one key: order by the patterns themselves
            return np.lexsort(patterns.T)
    return order


def _blocks(patterns: Patterns) -> Patterns:
    """Patterns in blocks (blocks, size, words), the last one filled up with ones."""
    count = -(-len(patterns) // _BLOCK)
    filled = np.full((count * _BLOCK, patterns.shape[1]), ~np.uint64(0))
    filled[: len(patterns)] = patterns
    return filled.reshape(count, _BLOCK, patterns.shape[1])

"""Covers of few inputs as one byte a point: a private matter of `pla.logic.algebra`.

Recursion is slow where a cover is a long list of points, as tables and minterm lists are; whole
arrays are not. Points are numbered over the support of a cover only.
"""

from __future__ import annotations

import numpy as np

from pla.logic.cubes import Cover

__all__ = ["WIDEST", "cover_of_points", "pays", "points_of_cover", "support"]

WIDEST = 16
_FEWEST_CUBES = 48
_POINTS_FOR_A_CUBE = 64
_MOST_WRITES = 1 << 24

Points = np.ndarray[tuple[int], np.dtype[np.bool_]]


def support(*covers: Cover) -> int:
    """Mask of the inputs that any cube depends on."""
    literals = np.uint64(0)
    for cover in covers:
        literals |= np.bitwise_or.reduce(cover.ones | cover.zeros, initial=np.uint64(0))
    return int(literals)


def pays(bits: int, *covers: Cover) -> bool:
    """Whether points are likely to be quicker than recursion on cubes."""
    width, cubes = bits.bit_count(), sum(len(c) for c in covers)
    if width > WIDEST or cubes < _FEWEST_CUBES or 1 << width > _POINTS_FOR_A_CUBE * cubes:
        return False
    writes = sum(
        float(np.ldexp(1.0, width - np.bitwise_count(c.ones | c.zeros).astype(np.int64)).sum())
        for c in covers
    )
    return writes <= _MOST_WRITES


def points_of_cover(cover: Cover, bits: int) -> Points:
    """``bool[2^width]``: the points over the inputs of `bits` that lie in a cube."""
    places = _places(bits)
    held = np.zeros(1 << len(places), dtype=bool)
    ones, dashes = _packed(cover.ones, places), ~_packed(cover.ones | cover.zeros, places)
    dashes &= (1 << len(places)) - 1
    order = np.argsort(dashes, kind="stable")
    ones, dashes = ones[order], dashes[order]
    starts = np.flatnonzero(np.concatenate(([True], dashes[1:] != dashes[:-1])))
    for group in np.split(np.arange(len(dashes)), starts[1:]) if len(dashes) else ():
        held[(ones[group][:, None] | _subsets(int(dashes[group[0]]))[None, :]).ravel()] = True
    return held


def cover_of_points(n_inputs: int, held: Points, bits: int) -> Cover:
    """Disjoint cubes that hold exactly these points: neighbours joined input by input."""
    places = _places(bits)
    width = len(places)
    values = np.flatnonzero(held)
    dashes = np.zeros_like(values)
    for place in range(width):
        bit = 1 << place
        keys = dashes << width | values
        order = np.argsort(keys)
        keys, values, dashes = keys[order], values[order], dashes[order]
        low = np.flatnonzero(values & bit == 0)
        partner = np.searchsorted(keys, keys[low] | bit)
        partner[partner == len(keys)] = 0
        joined = keys[partner] == keys[low] | bit
        dashes[low[joined]] |= bit
        kept = np.ones(len(keys), dtype=bool)
        kept[partner[joined]] = False
        values, dashes = values[kept], dashes[kept]
    every = (1 << width) - 1
    ones = _spread(values & ~dashes, places)
    zeros = _spread(every & ~values & ~dashes, places)
    return Cover(n_inputs, ones, zeros, np.ones(len(ones), dtype=np.uint64))


def _places(bits: int) -> list[int]:
    return [i for i in range(bits.bit_length()) if bits >> i & 1]


def _packed(words: np.ndarray, places: list[int]) -> np.ndarray:
    packed = np.zeros(len(words), dtype=np.int64)
    for place, i in enumerate(places):
        packed |= (words >> np.uint64(i) & np.uint64(1)).astype(np.int64) << place
    return packed


def _spread(values: np.ndarray, places: list[int]) -> np.ndarray:
    words = np.zeros(len(values), dtype=np.uint64)
    for place, i in enumerate(places):
        words |= (values >> place & 1).astype(np.uint64) << np.uint64(i)
    return words


def _subsets(mask: int) -> np.ndarray:
    """All numbers made of bits of `mask`."""
    found = np.zeros(1, dtype=np.int64)
    for i in _places(mask):
        found = np.concatenate((found, found | 1 << i))
    return found

"""From what each description says to the function of the whole design.

Last in the order of precedence come the enables: while an output does not drive its pin, nobody
sees its value. Equations that name the output were worked out before that. The next value of a
registered output matters all the same: it may be seen after the clock edge, and is fed back.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.behaviour.model import DontCareSource
from pla.logic import algebra
from pla.logic.cubes import Cover
from pla.logic.function import Function

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from pla.behaviour.listing import Reason, Solved
    from pla.behaviour.model import Enabling
    from pla.behaviour.signals import Signals

__all__ = ["Assembled", "assemble"]

_REASONS: tuple[Reason, ...] = (
    "never",
    "others",
    "x",
    "dont_care",
    "elsewhere",
    "unused",
    "disabled",
)


@dataclass(frozen=True, slots=True)
class Assembled:
    """What the outputs and the inner signals do.

    Attributes:
        outputs: ON-set and OFF-set of the outputs.
        inner: Those of the inner signals; ``None`` if there are none.
        dont_cares: Where the outputs' freedom comes from.
    """

    outputs: Function
    inner: Function | None
    dont_cares: tuple[DontCareSource, ...]


def assemble(
    solved: Sequence[Solved], enables: Mapping[str, Enabling], never: Cover, signals: Signals
) -> Assembled:
    """Join all descriptions; ``impossible`` wins over [never], a disabled output over both.

    Args:
        solved: What the descriptions say outside of impossible inputs.
        enables: When three-state outputs drive their pins, by name.
        never: Impossible inputs.
        signals: What is declared.
    """
    n = signals.n_inputs
    on, off = (Cover.joined(n, (getattr(s, side) for s in solved)) for side in ("on", "off"))
    inner = None
    if signals.inner:
        inner = Function(
            n,
            signals.n_inner,
            _shifted(on, signals.n_outputs).merged(),
            _shifted(off, signals.n_outputs).merged(),
        )
    outputs = (1 << signals.n_outputs) - 1
    sets = {
        "on": _of(on, outputs) + never.feeding(_impossible(signals, 1)).fed(),
        "off": _of(off, outputs) + never.feeding(_impossible(signals, 0)).fed(),
    }
    free: dict[Reason, list[Cover]] = {reason: [] for reason in _REASONS}
    free["never"].append(never.feeding(_impossible(signals, None)).fed())
    for part in solved:
        for reason, cover in part.open:
            free[reason].append(_of(cover, outputs))
    for signal in signals.outputs:
        enable = enables.get(signal.name)
        if enable is None or signal.registered:
            continue
        mask = sum(1 << bit for bit in signal.positions)
        for side, cover in sets.items():
            sets[side] = _without(cover, mask, enable.off)
        for covers in free.values():
            covers[:] = [_without(cover, mask, enable.off) for cover in covers]
        impossible = algebra.intersection(never, enable.off)
        free["never"].append(impossible.feeding(mask))
        free["disabled"].append(algebra.difference(enable.off, never).feeding(mask))
    sources = ((reason, Cover.joined(n, covers).merged()) for reason, covers in free.items())
    return Assembled(
        Function(n, signals.n_outputs, sets["on"].merged(), sets["off"].merged()),
        inner,
        tuple(DontCareSource(reason, cover) for reason, cover in sources if len(cover)),
    )


def _impossible(signals: Signals, value: int | None) -> int:
    """The outputs with this value of `impossible`, as a mask."""
    return sum(((1 << s.size) - 1) << s.first for s in signals.outputs if s.impossible == value)


def _of(cover: Cover, mask: int) -> Cover:
    """The cubes as far as they feed the outputs of a mask."""
    return Cover(cover.n_inputs, cover.ones, cover.zeros, cover.outputs & np.uint64(mask)).fed()


def _shifted(cover: Cover, places: int) -> Cover:
    """The cubes as far as they feed the outputs from `places` on, which count from 0 then."""
    moved = cover.outputs >> np.uint64(places) if places < 64 else np.zeros_like(cover.outputs)
    return Cover(cover.n_inputs, cover.ones, cover.zeros, moved).fed()


def _without(cover: Cover, mask: int, region: Cover) -> Cover:
    """The cubes, whereby the outputs of the mask are no longer fed within a region."""
    kept = [_of(cover, ~mask & (1 << 64) - 1)]
    fed = _of(cover, mask)
    for outputs in sorted(set(fed.outputs.tolist())):
        same = fed.take(fed.outputs == np.uint64(outputs))
        kept.append(algebra.difference(same, region).feeding(outputs))
    return algebra.compact(Cover.joined(cover.n_inputs, kept))

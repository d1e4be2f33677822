"""A clocked design as a combinational one: what makes the next values of all registers."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from pla.behaviour.model import Output
from pla.logic.cubes import Cover
from pla.logic.function import Function

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour, Inner

__all__ = ["with_next_values"]


def with_next_values(behaviour: Behaviour) -> Behaviour:
    """The design with its registered inner signals behind the outputs.

    Combinational inner signals stay folded in; registered ones cannot be, since what they do now
    is seen after the clock edge only. A design without any is returned as it is.
    """
    moved = [k for k, inner in enumerate(behaviour.inner) if inner.register is not None]
    folded = behaviour.inner_function
    if not moved or folded is None:
        return behaviour
    function, n = behaviour.function, behaviour.function.n_inputs
    first = function.n_outputs
    on, off = (
        Cover.joined(n, (outputs, *(_placed(inner, k, first + i) for i, k in enumerate(moved))))
        for outputs, inner in ((function.on, folded.on), (function.off, folded.off))
    )
    kept = [k for k in range(len(behaviour.inner)) if k not in moved]
    rest = Function.of_outputs(n, [(folded.on.of_output(k), folded.off.of_output(k)) for k in kept])
    return replace(
        behaviour,
        outputs=(*behaviour.outputs, *(_as_output(behaviour.inner[k]) for k in moved)),
        function=Function(n, first + len(moved), on.merged(), off.merged()),
        inner=tuple(behaviour.inner[k] for k in kept),
        inner_function=rest if kept else None,
    )


def _placed(cover: Cover, output: int, place: int) -> Cover:
    """The cubes that feed one output, feeding another."""
    picked = cover.take((cover.outputs >> np.uint64(output) & np.uint64(1)).astype(bool))
    return picked.feeding(1 << place)


def _as_output(inner: Inner) -> Output:
    return Output(
        name=inner.name,
        active_low=False,
        impossible=None,
        location=inner.location,
        described=inner.described,
        form=inner.form,
        register=inner.register,
    )

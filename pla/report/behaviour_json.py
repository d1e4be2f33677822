"""What a design asks for, for programs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.logic import algebra
from pla.report.behaviour_counts import count_outputs
from pla.report.clocked_json import clocked_document
from pla.report.delays import plain_number

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour, Enabling

__all__ = ["behaviour_json"]


def behaviour_json(behaviour: Behaviour) -> dict[str, Any]:
    """Names in order, and for each output where its freedom comes from; counts are exact.

    Keys about inner signals, enables, bidirectional pins, registers, asynchronous inputs, signature
    and delays stand only in the documents of designs that have any.
    """
    outputs = zip(behaviour.outputs, count_outputs(behaviour), strict=True)
    document = {
        "name": behaviour.name,
        "revision": behaviour.revision,
        "inputs": list(behaviour.input_names),
        "outputs": list(behaviour.output_names),
        "active_low": [
            *(signal.name for signal in behaviour.inputs if signal.active_low),
            *(signal.name for signal in behaviour.outputs if signal.active_low),
        ],
        "descriptions": [
            {
                "output": output.name,
                "form": output.form,
                "file": output.described.file,
                "line": output.described.line,
                "impossible": output.impossible,
                "combinations": {
                    "one": count.one,
                    "zero": count.zero,
                    "dont_care": count.free,
                    "total": count.total,
                },
                "dont_care": dict(count.reasons),
            }
            for output, count in outputs
        ],
        "places": {
            device: {place.signal: place.pin for place in places}
            for device, places in behaviour.places.items()
        },
        "warnings": [w.as_json() for w in behaviour.warnings],
    }
    document |= {key: value for key, value in _more(behaviour) if value}
    return document | clocked_document(behaviour)


def _more(behaviour: Behaviour) -> Iterator[tuple[str, Any]]:
    yield (
        "inner",
        [
            {
                "name": inner.name,
                "form": inner.form,
                "file": inner.described.file,
                "line": inner.described.line,
                "named_by": [n for n, others in behaviour.named.items() if inner.name in others],
            }
            for inner in behaviour.inner
        ],
    )
    yield (
        "enables",
        {
            output.name: {
                "text": output.enable.text,
                "line": output.enable.location.line,
                "combinations": _switching(output.enable),
            }
            for output in behaviour.outputs
            if output.enable
        },
    )
    yield "reads", {o.name: o.reads for o in behaviour.outputs if o.reads}
    yield "asynchronous", [i.name for i in behaviour.inputs if i.asynchronous]
    yield "signature", behaviour.signature
    yield "max_delay", behaviour.max_delay and plain_number(behaviour.max_delay)
    yield (
        "max_delays",
        {o.name: plain_number(o.max_delay) for o in behaviour.outputs if o.max_delay},
    )


def _switching(enable: Enabling) -> dict[str, int]:
    total = 1 << enable.on.n_inputs
    on, off = algebra.size(enable.on), algebra.size(enable.off)
    return {"on": on, "off": off, "dont_care": total - on - off, "total": total}

"""What a design asks for, for programs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.behaviour_counts import count_outputs

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour

__all__ = ["behaviour_json"]


def behaviour_json(behaviour: Behaviour) -> dict[str, Any]:
    """Names in order, and for each output where its freedom comes from; counts are exact."""
    outputs = zip(behaviour.outputs, count_outputs(behaviour), strict=True)
    return {
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

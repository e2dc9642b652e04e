"""A model that remembers what it was asked: many pages ask for the same conditions."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from dataclasses import fields
from typing import TYPE_CHECKING, ClassVar

from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.prediction import Prediction, SystemModel


def remembering(model: SystemModel) -> SystemModel:
    """The same model; predictions and sensitivities are calculated once for each condition. Results do not change."""
    from commission.prediction import SystemModel as Base

    if getattr(model, "remembers", False):
        return model

    class Remembering(Base):
        """Keeps its answers for as long as it lives."""

        remembers: ClassVar[bool] = True

        def predict(
            self, conditions: Mapping[str, float] | None = None, *, as_stated: Collection[str] = ()
        ) -> Prediction:
            """As the model's own."""
            key = _key(conditions), frozenset(as_stated)
            if key not in predictions:
                predictions[key] = super().predict(conditions, as_stated=as_stated)
            return predictions[key]

        def grid(
            self, key: str, values: Sequence[float], others: Mapping[str, float] | None = None
        ) -> tuple[Prediction | NotCalculatedError, ...]:
            """As the model's own; its points are remembered too."""
            found = super().grid(key, values, others)
            for value, prediction in zip(values, found, strict=True):
                if not isinstance(prediction, NotCalculatedError):
                    predictions.setdefault((_key({**(others or {}), key: value}), frozenset()), prediction)
            return found

        def sensitivities(self, conditions: Mapping[str, float] | None = None) -> dict[str, dict[str, float]]:
            """As the model's own; a fresh copy each time."""
            key = _key(conditions)
            if key not in slopes:
                slopes[key] = super().sensitivities(conditions)
            return {name: dict(row) for name, row in slopes[key].items()}

    predictions: dict[object, Prediction] = {}
    slopes: dict[object, dict[str, dict[str, float]]] = {}
    return Remembering(**{f.name: getattr(model, f.name) for f in fields(model)})


def _key(conditions: Mapping[str, float] | None) -> object:
    return None if conditions is None else tuple(sorted(conditions.items()))

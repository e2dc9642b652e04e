"""Types of the models taken apart: what a message, a schema or the reference of keys must know of a field."""

from __future__ import annotations

from collections.abc import Mapping
from types import NoneType, UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from commission.description.fields import Meaning
from commission.description.positions import KeyPath


def known_keys(annotation: Any) -> tuple[str, ...]:
    """The keys that may stand in a mapping of this type; none where the keys are names that a person chooses."""
    model = model_of(annotation)
    return tuple(info.alias or name for name, info in model.model_fields.items()) if model else ()


def choices_of(annotation: Any) -> tuple[str, ...]:
    """The words allowed by a type that is a choice of words, else nothing."""
    annotation = plain(annotation)
    return tuple(map(str, get_args(annotation))) if get_origin(annotation) is Literal else ()


def model_of(annotation: Any) -> type[BaseModel] | None:
    """The model that a type is, without its wrappings."""
    annotation = plain(annotation)
    return annotation if isinstance(annotation, type) and issubclass(annotation, BaseModel) else None


def inner(annotation: Any) -> tuple[Literal["named", "list"], Any] | None:
    """What a mapping with chosen names, or a list, holds; None for any other type."""
    annotation = plain(annotation)
    if get_origin(annotation) in (dict, Mapping):
        return "named", get_args(annotation)[1]
    if get_origin(annotation) in (tuple, list):
        return "list", get_args(annotation)[0]
    return None


def meaning_of(annotation: Any) -> Meaning | None:
    """What the field type says of itself, through its wrappings."""
    origin = get_origin(annotation)
    if origin is Annotated:
        own = next((m for m in get_args(annotation)[1:] if isinstance(m, Meaning)), None)
        return own or meaning_of(get_args(annotation)[0])
    if origin in (Union, UnionType):
        found = [meaning_of(a) for a in get_args(annotation) if a is not NoneType]
        return next((m for m in found if m), None)
    return None


def plain(annotation: Any) -> Any:
    """A type without its `Annotated` and `| None` wrappings."""
    while True:
        origin = get_origin(annotation)
        if origin is Annotated:
            annotation = get_args(annotation)[0]
        elif origin in (Union, UnionType):
            parts = [a for a in get_args(annotation) if a is not NoneType]
            if len(parts) != 1:
                return annotation
            annotation = parts[0]
        else:
            return annotation


def field_at(model_cls: type[BaseModel], inside: KeyPath) -> FieldInfo | None:
    """The field that a model has at a key path, or None."""
    owner = model_of(annotation_at(model_cls, inside[:-1]))
    fields = owner.model_fields.items() if owner else ()
    return next((info for name, info in fields if inside[-1] in (name, info.alias)), None)


def annotation_at(model_cls: type[BaseModel], inside: KeyPath) -> Any:
    """The type that a model has at a key path; `Any` where the path leaves the model."""
    current: Any = model_cls
    for part in inside:
        model = model_of(current)
        if model:
            info = next((f for n, f in model.model_fields.items() if part in (f.alias or n, n)), None)
            current = info.annotation if info else Any
        else:
            held = inner(current)
            if held is None:
                return Any
            current = held[1]
    return current

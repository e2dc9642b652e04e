"""The JSON Schema of a description and the reference of its keys, both made from where each field is declared."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from commission.description.model import Plant, System
from commission.description.shapes import choices_of, inner, meaning_of, model_of

SCHEMA_FILE = "plant.schema.json"
_POINTS_FROM_FILE = ("rated_points", "points")


@dataclass(frozen=True, slots=True)
class KeyRow:
    """One key of the description.

    `path` shows `<id>` for a name that a person chooses and `[]` for an entry of a list; `form` says what is written
    there; `default` is what counts when the key is left out, as it would be written, or empty where nothing does.
    """

    path: str
    meaning: str
    form: str
    required: bool
    default: str
    allowed: tuple[str, ...]


def key_reference() -> tuple[KeyRow, ...]:
    """Every key of a description, in the order in which the models declare them."""
    return tuple(_rows(Plant, ""))


def _rows(model: type[BaseModel], above: str) -> list[KeyRow]:
    rows: list[KeyRow] = []
    for name, info in model.model_fields.items():
        path = f"{above}{info.alias or name}"
        rows.append(
            KeyRow(
                path,
                info.description or "",
                _form(info),
                info.is_required(),
                _default(info),
                choices_of(info.annotation),
            )
        )
        held: Any = info.annotation
        below = path
        while (step := inner(held)) is not None:
            below += ".<id>" if step[0] == "named" else "[]"
            held = step[1]
        part = model_of(held)
        if part is not None:
            rows += _rows(part, f"{below}.")
    return rows


def _form(info: FieldInfo) -> str:
    """What is written at a key, in words."""
    return _form_of(info.annotation, next((m.words for m in info.metadata if hasattr(m, "words")), None))


def _form_of(annotation: Any, own: str | None = None) -> str:
    meaning = meaning_of(annotation)
    if own or meaning:
        return own or (meaning.words if meaning else "")
    step = inner(annotation)
    if step is not None:
        what = _form_of(step[1])
        return f"a list of: {what}" if step[0] == "list" else f"names that you choose, each with: {what}"
    if model_of(annotation) is not None:
        return "keys, see below"
    return "one of the words allowed" if choices_of(annotation) else "text"


def _default(info: FieldInfo) -> str:
    value = info.default
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float) and info.alias is None:
        return f"{value:g} m" if "height above sea" in (info.description or "") else f"{value:g}"
    return str(value) if isinstance(value, (str, int)) else ""


def json_schema(*, part: bool = False) -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) of `plant.yaml`, or with `part` that of a file named by its `include`."""
    schema: dict[str, Any] = _cleaned(Plant.model_json_schema(by_alias=True, mode="validation"))
    schema["$schema"] = "https://json-schema.org/draft/2020-12/schema"
    schema["title"] = "Part of a plant description" if part else "Plant description"
    schema.pop("required", None)
    if part:
        schema["properties"].pop("include")
        schema["properties"].pop("plant")
    else:
        schema["required"] = ["plant"]
        schema["anyOf"] = [{"required": ["systems"]}, {"required": ["include"]}]
    system = schema["$defs"][System.__name__]
    required = system.pop("required")
    system["anyOf"] = [{"required": required}, {"required": ["like"]}]
    return schema


def _cleaned(node: Any, name: str | None = None) -> Any:
    """A schema as an editor needs it.

    No null (an empty value is an error), no defaults in SI, text where a person may write a number plainly, and a
    table in a file where a list of points may stand.
    """
    if isinstance(node, list):
        return [_cleaned(one) for one in node]
    if not isinstance(node, dict):
        return node
    if "properties" in node:
        node = {**node, "properties": {k: _cleaned(v, k) for k, v in node["properties"].items()}}
    rest = {k: v if k == "properties" else _cleaned(v) for k, v in node.items() if k not in ("default", "title")}
    return _with_file(_merged(rest), name)


def _merged(node: dict[str, Any]) -> dict[str, Any]:
    """One schema without its null alternative, its two descriptions in one, and its words also as numbers."""
    options = [one for one in node.get("anyOf", ()) if one != {"type": "null"}]
    if len(options) == 1:
        only = options[0]
        words = [w for w in (node.get("description"), only.get("description")) if w]
        node = {**{k: v for k, v in node.items() if k != "anyOf"}, **only}
        if words:
            node["description"] = ": ".join(dict.fromkeys(words))
    if node.get("type") == "string" and set(node) <= {"type", "description"}:
        node["type"] = ["string", "number"]
    for word in ("enum", "const"):
        values = node.get(word)
        texts = values if isinstance(values, list) and all(isinstance(v, str) for v in values) else []
        numbers = [int(v) for v in texts if v.isdigit()]
        if numbers:
            node = {k: v for k, v in node.items() if k != "type"} | {word: [*texts, *numbers]}
    return node


def _with_file(node: dict[str, Any], name: str | None) -> dict[str, Any]:
    if name not in _POINTS_FROM_FILE or node.get("type") != "array" or ("minItems" not in node and name == "points"):
        return node
    table = {
        "type": "object",
        "properties": {"file": {"type": "string"}},
        "required": ["file"],
        "additionalProperties": False,
    }
    return {
        "description": node.get("description", ""),
        "anyOf": [{k: v for k, v in node.items() if k != "description"}, table],
    }

"""The schemas of the contract, made from its types: what may be asked, and what is told.

The types know each noun once. On the wire a request may write a quantity with its unit, and knows no field beyond its
own; an answer holds plain numbers, and may learn new fields. So a noun that stands in both has two schemas: the request
keeps the name, the answer's is called ``<Name>Answer``. So is an answer with a field of its own name, since generated
clients take one for the other.
"""

from collections.abc import Callable, Iterable, Mapping
from typing import Any, Final, get_args

from msgspec.json import schema_components

from burntally.model.quantity import dimension_of, units_of, wire_pattern
from burntally.model.scalars import OR_UNIT_KEY, UNIT_KEY

__all__ = ["ANSWER_SUFFIX", "component_schemas", "ref_to"]

Schema = dict[str, Any]

ANSWER_SUFFIX: Final = "Answer"
_REF: Final = "#/components/schemas/"
_TEXT_MAX_LENGTH: Final = 100
# The longest answer that a request within its own bounds can have is far below these.
_ANSWER_BOUNDS: Final[dict[str, Schema]] = {
    "array": {"maxItems": 100_000},
    "integer": {"minimum": 0, "maximum": 2**53 - 1},
    "number": {"minimum": -1e300, "maximum": 1e300},
    "string": {"maxLength": 10_000},
    "object": {"maxProperties": 1000},
}
_BOUNDED_OTHERWISE: Final = frozenset({"const", "enum", "properties", "exclusiveMinimum", "exclusiveMaximum"})
_HOLDING_ONE: Final = frozenset({"items", "additionalProperties", "propertyNames"})
_UNIONS: Final = frozenset({"anyOf", "oneOf"})
_EXACT_INTEGERS: Final = 2.0**53
_TYPE_NAMES: Final = {str: "string", int: "integer", bool: "boolean"}
_TEXT_NAMES: Final = {
    "1": "FractionText",
    "kg": "MassText",
    "N": "ForceText",
    "s": "TimeText",
    "m/s": "SpeedText",
    "m": "LengthText",
    "m2": "AreaText",
    "deg": "AngleText",
    "m/s2": "AccelerationText",
    "Pa": "PressureText",
    "m2/s2": "SquaredSpeedText",
    "m3/s2": "GravitationalParameterText",
    "s m/s": "SpecificImpulseText",
}


def component_schemas(
    asked: Iterable[type], told: Iterable[type], unions: Mapping[str, object] | None = None
) -> dict[str, Schema]:
    """Make the schemas of all types that requests and answers are built from.

    Parameters
    ----------
    asked
        Types of requests.
    told
        Types of answers.
    unions
        Tagged unions that have a name, so that generated clients can speak of them.

    Returns
    -------
    dict
        JSON Schemas (2020-12) by their name below ``#/components/schemas``, in alphabetical order.
    """
    requests, answers = _components(asked), _components(told)
    shared = requests.keys() & answers.keys()
    renamed = {name: name + ANSWER_SUFFIX for name in answers if name in shared or _is_field_of(name, answers[name])}
    texts: dict[str, Schema] = {}
    schemas = {name: _walk(schema, lambda node: _asked_node(node, texts)) for name, schema in requests.items()}
    for name, schema in answers.items():
        schemas[renamed.get(name, name)] = _walk(schema, lambda node: _told_node(node, renamed))
    return dict(sorted((_with_named_unions(schemas, unions or {}) | texts).items()))


def ref_to(type_: type) -> Schema:
    """Refer to the schema of an answer's type."""
    _, components = schema_components([type_], ref_template=_REF + "{name}")
    name = type_.__name__
    return {"$ref": _REF + (name + ANSWER_SUFFIX if _is_field_of(name, components[name]) else name)}


def _is_field_of(name: str, schema: Schema) -> bool:
    return name.lower() in schema.get("properties", {})


def _with_named_unions(schemas: dict[str, Schema], unions: Mapping[str, object]) -> dict[str, Schema]:
    """Make components of the unions that have a name, and refer to them."""
    named: dict[frozenset[str], str] = {}
    for name, union in unions.items():
        members = [member.__name__ for member in get_args(union)]
        for suffix in ("", ANSWER_SUFFIX):
            named[frozenset(_REF + member + suffix for member in members)] = name + suffix
    components: dict[str, Schema] = {}

    def refer(node: Schema) -> Schema:
        options: list[Schema] = node.get("oneOf", [])
        name = named.get(frozenset(str(option.get("$ref")) for option in options))
        if name is None:
            return node
        union = {key: node.pop(key) for key in ("discriminator", "oneOf")}
        kinds = ", ".join(f"`{kind}`" for kind in union["discriminator"]["mapping"])
        components[name] = {"title": name, "description": f"Told by its kind: {kinds}."} | union
        return node | {"$ref": _REF + name}

    referring = {name: _walk(schema, refer) for name, schema in schemas.items()}
    return referring | components


def _components(types: Iterable[type]) -> dict[str, Schema]:
    _, components = schema_components(types, ref_template=_REF + "{name}")
    return components


def _walk(schema: Schema, change: Callable[[Schema], Schema]) -> Schema:
    """Rebuild a schema from its leaves upward, each schema within it by `change`."""
    rebuilt: Schema = {}
    for key, value in schema.items():
        if key == "properties":
            rebuilt[key] = {name: _walk(inner, change) for name, inner in value.items()}
        elif key in _UNIONS:
            rebuilt[key] = [_walk(inner, change) for inner in value]
        elif key in _HOLDING_ONE and value is not False:
            rebuilt[key] = _walk(value, change)
        else:
            rebuilt[key] = _tidy(value)
    return change(rebuilt)


def _tidy(value: object) -> object:
    is_whole = isinstance(value, float) and value.is_integer() and abs(value) < _EXACT_INTEGERS
    return int(value) if is_whole and isinstance(value, float) else value


def _asked_node(node: Schema, texts: dict[str, Schema]) -> Schema:
    node = _common_node(node)
    # That null stands for what is left out is told by its being allowed; told as a default, generators ask for it.
    if node.get("default", ...) is None:
        del node["default"]
    if node.get("type") == "number" and UNIT_KEY in node:
        return _quantity(node, texts)
    if "anyOf" in node:
        # An optional quantity is a number, a text or null, and not a union within a union.
        node["anyOf"] = [inner for option in node["anyOf"] for inner in _options(option)]
    return node


def _told_node(node: Schema, renamed: dict[str, str]) -> Schema:
    node = _common_node(node)
    if node.get("additionalProperties") is False:
        del node["additionalProperties"]
    node.pop(OR_UNIT_KEY, None)
    if "title" in node:
        node["title"] = renamed.get(node["title"], node["title"])
    if "$ref" in node:
        node["$ref"] = _renamed_ref(node["$ref"], renamed)
    if "discriminator" in node:
        tags = node["discriminator"]["mapping"]
        node["discriminator"] |= {"mapping": {tag: _renamed_ref(ref, renamed) for tag, ref in tags.items()}}
    return _without_null(_bounded(node))


def _common_node(node: Schema) -> Schema:
    """Mend what generators of clients stumble over: untyped enumerations, and tagged unions told as `anyOf`."""
    if "enum" in node:
        node = _typed_enumeration(node)
    if "discriminator" in node and "anyOf" in node:
        node["oneOf"] = node.pop("anyOf")
    if node.get("required") == []:
        del node["required"]
    if "description" in node:
        node["description"] = node["description"].replace("``", "`").replace("\n", " ")
    return node


def _typed_enumeration(node: Schema) -> Schema:
    values = node.pop("enum")
    typed: Schema = {"type": _TYPE_NAMES[type(values[0])]}
    typed |= {"const": values[0]} if len(values) == 1 else {"enum": values}
    # A tag is the one enumeration that the types do not describe.
    return {"description": "Tells which of its kind this is."} | node | typed


def _quantity(node: Schema, texts: dict[str, Schema]) -> Schema:
    """A number in the unit of the contract, or a text with a unit of its own."""
    units = [node[key] for key in (UNIT_KEY, OR_UNIT_KEY) if key in node]
    name = _TEXT_NAMES[" ".join(units)]
    texts[name] = _text_schema(name, units)
    number: Schema = {key: node.pop(key) for key in ("type", "minimum", "maximum", "exclusiveMinimum") if key in node}
    number[UNIT_KEY] = node[UNIT_KEY]
    return node | {"anyOf": [number, {"$ref": _REF + name}]}


def _text_schema(name: str, units: list[str]) -> Schema:
    dimensions = " or ".join(dimension_of(unit) for unit in units)
    common = ", ".join(unit for x_unit in units for unit in units_of(x_unit))
    return {
        "title": name,
        "description": (
            f"{dimensions[0].upper()}{dimensions[1:]} with its unit: {common}. The bounds are those of the number "
            "that may stand in its place. A server may know more units than these."
        ),
        "type": "string",
        "maxLength": _TEXT_MAX_LENGTH,
        "pattern": wire_pattern(*units),
        "examples": [f"1.5 {units_of(unit)[0]}" for unit in units],
    }


def _options(option: Schema) -> list[Schema]:
    return option["anyOf"] if "anyOf" in option and "discriminator" not in option else [option]


def _bounded(node: Schema) -> Schema:
    """Bound what an answer's type leaves open."""
    if node.keys().isdisjoint(_BOUNDED_OTHERWISE):
        bounds = _ANSWER_BOUNDS.get(node.get("type", ""), {})
        return node | {key: bound for key, bound in bounds.items() if key not in node}
    return node


def _renamed_ref(ref: str, renamed: dict[str, str]) -> str:
    name = ref.removeprefix(_REF)
    return _REF + renamed.get(name, name)


def _without_null(node: Schema) -> Schema:
    """Drop null where it is the default: an answer leaves such a field out."""
    if "default" not in node or node["default"] is not None or "anyOf" not in node:
        return node
    del node["default"]
    options = _distinct(option for option in node.pop("anyOf") if option != {"type": "null"})
    return options[0] | node if len(options) == 1 else {**node, "anyOf": options}


def _distinct(options: Iterable[Schema]) -> list[Schema]:
    """Leave out integers beside numbers: every integer is a number."""
    kept = list(options)
    has_number = any(option.get("type") == "number" for option in kept)
    return [option for option in kept if not (has_number and option.get("type") == "integer")]

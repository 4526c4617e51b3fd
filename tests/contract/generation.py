"""How requests are generated from the contract."""

import os
import tomllib
from pathlib import Path
from typing import Any, Final

import msgspec
import schemathesis
from schemathesis.specs.openapi.schemas import OpenApiSchema

from burntally_service.api.app import create_app
from burntally_service.api.openapi import encoded_document
from burntally_service.api.settings import Settings

PROFILE: Final = tomllib.loads(Path(__file__).with_name("schemathesis.toml").read_text(encoding="utf-8"))
AnyCase = schemathesis.Case[Any]

SEED: Final = int(os.environ.get("CONTRACT_TEST_SEED", PROFILE["seed"]))
RELEASE_PROFILE: Final = PROFILE | {
    "seed": SEED,
    "generation": PROFILE["generation"] | {"max-examples": 400},
    "operations": [],
}

# A pattern cannot say that "999 deg" is no inclination, so texts are drawn from these; what lies out of bounds has
# tests of its own.
_TEXTS: Final = {
    "AccelerationText": ["3 g0", "29.4 m/s2"],
    "AngleText": ["28.5 deg", "0.4 rad"],
    "AreaText": ["0.8 m2", "1200 cm2"],
    "ForceText": ["60 kN", "440 N"],
    "FractionText": ["5 %"],
    "GravitationalParameterText": ["4902.8 km3/s2"],
    "LengthText": ["400 km", "1.2e3 m"],
    "MassText": ["7.65 t", "12 kg"],
    "PressureText": ["1 bar", "30 kPa"],
    "SpecificImpulseText": ["345 s", "3.38 km/s"],
    "SpeedText": ["42 m/s", "3.1 km/s"],
    "SquaredSpeedText": ["8.5 km2/s2"],
    "TimeText": ["90 min", "2 d"],
}


def _packable(value: object) -> object:
    """MessagePack has no integers beyond 64 bits; as floats they are as wrong."""
    if isinstance(value, dict):
        return {key: _packable(inner) for key, inner in value.items()}
    if isinstance(value, list):
        return [_packable(inner) for inner in value]
    return float(value) if isinstance(value, int) and not -(2**63) <= value < 2**64 else value


@schemathesis.serializer("application/msgpack")
def _as_msgpack(_context: object, value: object) -> bytes:
    return msgspec.msgpack.encode(_packable(value))


@schemathesis.deserializer("application/msgpack")
def _from_msgpack(_context: object, response: Any) -> object:
    return msgspec.msgpack.decode(response.content)


def schema_for(media_types: list[str], profile: dict[str, Any]) -> OpenApiSchema:
    """Make the schema that requests are drawn from: the served one, with bodies in these media types alone."""
    narrowed = msgspec.json.decode(encoded_document())
    for name, texts in _TEXTS.items():
        narrowed["components"]["schemas"][name] = {"type": "string", "enum": texts}
    for operation in (node["post"] for node in narrowed["paths"].values() if "post" in node):
        content = operation["requestBody"]["content"]
        operation["requestBody"]["content"] = {name: content[name] for name in media_types}
    schema = schemathesis.openapi.from_dict(narrowed, config=schemathesis.Config.from_dict(profile))
    schema.app = create_app(Settings(body_timeout_s=30.0))
    return schema

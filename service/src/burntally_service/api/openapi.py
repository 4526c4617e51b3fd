"""The contract as an OpenAPI 3.1 document, made from the operations table.

Run as a module it prints the document: ``python -m burntally_service.api.openapi > openapi/burntally.openapi.json``.
"""

import re
import sys
from collections.abc import Iterable
from functools import cache
from importlib.resources import files
from typing import Any, Final

import msgspec

from burntally.model.decode import JSON, MSGPACK
from burntally.model.mission import Leg, Location
from burntally.model.operations import Problem
from burntally_service.api.examples import answer_of, requests_of
from burntally_service.api.exchange import VERSION
from burntally_service.api.problems import PROBLEM_JSON, PROBLEMS, ProblemType
from burntally_service.api.schemas import component_schemas, ref_to
from burntally_service.operations import OPERATIONS, Operation

__all__ = ["document", "encoded_document"]

Node = dict[str, Any]

_DESCRIPTION: Final = files("burntally_service.api") / "assets" / "description.md"
_TAGS: Final = {
    "budgets": "Budgets of designs: the main job.",
    "performance": "What vehicles give, without a mission.",
    "transfers": "What legs cost, without a vehicle.",
    "bodies": "The solar catalogue.",
    "rules": "Presets of rules, from published margin policies.",
}
_LISTED_BY: Final = {"list_bodies": ("get_body", "bodies"), "list_rules": ("get_rules", "presets")}
_BEARER: Final = {
    "type": "http",
    "scheme": "bearer",
    "description": "A token that the operator of the service gave out, where it asks for one (RFC 6750).",
}
_PROBLEM_HEADERS: Final[Node] = {
    "WWW-Authenticate": {
        "description": "How to ask for what is refused without a token.",
        "required": True,
        "schema": {"type": "string", "maxLength": 128, "pattern": "^Bearer "},
    },
    "Retry-After": {
        "description": "Seconds to wait.",
        "required": True,
        "schema": {"type": "integer", "minimum": 1, "maximum": 3600},
    },
    "RateLimit": {
        "description": "Requests left, and seconds until there are more (draft-ietf-httpapi-ratelimit-headers-10).",
        "required": True,
        "schema": {"type": "string", "maxLength": 64},
    },
    "RateLimit-Policy": {
        "description": "Requests that a caller has in how many seconds (draft-ietf-httpapi-ratelimit-headers-10).",
        "required": True,
        "schema": {"type": "string", "maxLength": 64},
    },
}
_HEADERS_OF: Final = {
    401: ("WWW-Authenticate",),
    429: ("Retry-After", "RateLimit", "RateLimit-Policy"),
    503: ("Retry-After",),
}
_STATUSES: Final = {
    "all": ("invalid-request", "unauthorized", "not-acceptable", "rate-limited", "internal-error"),
    "named": ("not-found",),
    "body": (
        "overloaded",
        "took-too-long",
        "worker-lost",
        "not-ready",
        "request-timeout",
        "precondition-failed",
        "payload-too-large",
        "unsupported-media-type",
        "inconsistent-request",
    ),
}


@cache
def encoded_document() -> bytes:
    """Return the document as it is served and committed, byte for byte."""
    return msgspec.json.format(msgspec.json.encode(document()), indent=1) + b"\n"


def document() -> Node:
    """Make the document."""
    operations = OPERATIONS.values()
    paths: dict[str, Node] = {}
    for operation in operations:
        paths.setdefault(operation.path, {})[operation.method.lower()] = _operation(operation)
    return {
        "openapi": "3.1.0",
        "jsonSchemaDialect": "https://spec.openapis.org/oas/3.1/dialect/base",
        "info": _info(),
        "servers": [{"url": "/", "description": "This service."}],
        "security": [{}, {"bearer": []}],
        "tags": [{"name": name, "description": text} for name, text in _TAGS.items()],
        "paths": paths,
        "components": {
            "schemas": component_schemas(
                [row.request for row in operations if row.takes_body and row.request],
                [*(row.response for row in operations), Problem],
                {"Leg": Leg, "Location": Location},
            ),
            "headers": _headers(operations) | _PROBLEM_HEADERS,
            "securitySchemes": {"bearer": _BEARER},
            "responses": {
                _response_name(kinds): _problem(kinds)
                for kinds in _by_status(code for row in operations for code in _codes(row))
            },
        },
    }


def _info() -> Node:
    return {
        "title": "Burntally",
        "summary": "Delta-v and propellant budgets of multi-stage vehicles.",
        "description": _DESCRIPTION.read_text(encoding="utf-8"),
        "version": VERSION,
        "contact": {"name": "The maintainers of Burntally"},
        "license": {"name": "Apache-2.0", "identifier": "Apache-2.0"},
    }


def _operation(operation: Operation) -> Node:
    node: Node = {
        "operationId": operation.id,
        "summary": operation.summary,
        "description": operation.description,
        "tags": [operation.path.split("/")[2]],
    }
    if operation.retirement is not None:
        node["deprecated"] = True
    if "{" in operation.path:
        node["parameters"] = _parameters(operation)
    if operation.takes_body:
        node["requestBody"] = {
            "description": "The request.",
            "required": True,
            "content": _content(operation.request, requests_of(operation.id)),
        }
    problems = _by_status(_codes(operation))
    node["responses"] = {"200": _success(operation)} | {
        str(kinds[0].status): {"$ref": f"#/components/responses/{_response_name(kinds)}"} for kinds in problems
    }
    return node


def _parameters(operation: Operation) -> list[Node]:
    """Path parameters are the fields of the request."""
    _, components = msgspec.json.schema_components([operation.request], ref_template="{name}")
    fields = components[operation.request.__name__]["properties"]  # type: ignore[union-attr]  # it has path parameters
    return [
        {
            "name": name,
            "in": "path",
            "required": True,
            "description": schema.pop("description"),
            "schema": schema,
            "example": requests_of(operation.id)["named"]["value"][name],
        }
        for name, schema in fields.items()
    ]


def _content(type_: type | None, examples: Node | None = None) -> Node:
    schema = ref_to(type_) if type_ else {}
    return {JSON: {"schema": schema} | ({"examples": examples} if examples else {}), MSGPACK: {"schema": schema}}


def _success(operation: Operation) -> Node:
    node: Node = {
        "description": "The answer.",
        "headers": {name: {"$ref": f"#/components/headers/{name}"} for name in _headers([operation])},
        "content": _content(operation.response, answer_of(operation.id)),
    }
    if operation.id in _LISTED_BY:
        node["links"] = _links(operation)
    return node


def _links(operation: Operation) -> Node:
    target, field = _LISTED_BY[operation.id]
    return {
        target: {
            "operationId": target,
            "description": "Each name in the list can be asked for by itself.",
            "parameters": {"name": f"$response.body#/{field}/0/name"},
        }
    }


def _codes(operation: Operation) -> list[str]:
    """Codes of the problems that the operation may answer."""
    codes = list(_STATUSES["all"])
    if "{" in operation.path:
        codes += _STATUSES["named"]
    if operation.takes_body:
        codes += (*_STATUSES["body"], "uncomputable")
    return codes


def _by_status(codes: Iterable[str]) -> list[tuple[ProblemType, ...]]:
    """Group types of problems by status, since a contract describes each status once."""
    wanted = set(codes)
    groups: dict[int, list[ProblemType]] = {}
    for kind in PROBLEMS.values():
        if kind.code in wanted:
            groups.setdefault(kind.status, []).append(kind)
    return [tuple(groups[status]) for status in sorted(groups)]


def _response_name(kinds: tuple[ProblemType, ...]) -> str:
    return "".join(word.capitalize() for word in re.split(r"-", kinds[0].code))


def _problem(kinds: tuple[ProblemType, ...]) -> Node:
    examples: Node = {
        kind.code: {
            "summary": kind.title,
            "value": {
                "type": kind.uri,
                "title": kind.title,
                "status": kind.status,
                "code": kind.code,
                "errors": [],
                "request_id": "3f1c9a02b7de4450",
            },
        }
        for kind in kinds
    }
    schema = {"$ref": "#/components/schemas/Problem"}
    return {
        "description": " Or: ".join(f"{kind.title} (`{kind.code}`)." for kind in kinds),
        "headers": {
            name: {"$ref": f"#/components/headers/{name}"}
            for name in ("X-Request-Id", *_HEADERS_OF.get(kinds[0].status, ()))
        },
        "content": {PROBLEM_JSON: {"schema": schema, "examples": examples}},
    }


def _headers(operations: Iterable[Operation]) -> Node:
    """Headers of the answers of these operations."""
    headers: Node = {
        "X-Request-Id": {
            "description": "Id of the request.",
            "required": True,
            "schema": {"type": "string", "minLength": 1, "maxLength": 64, "pattern": r"^[A-Za-z0-9._\-]+$"},
        },
        "ETag": {
            "description": "Digest of the request and its answer.",
            "required": True,
            "schema": {"type": "string", "maxLength": 64, "pattern": '^"[0-9a-f]+"$'},
        },
        "Link": {
            "description": "Where the service is described (RFC 8631): this document, and the page made of it.",
            "required": True,
            "schema": {"type": "string", "maxLength": 1000},
        },
    }
    if any(operation.retirement is not None for operation in operations):
        headers["Deprecation"] = {
            "description": "Since when the operation is no longer recommended (RFC 9745).",
            "schema": {"type": "string", "maxLength": 20, "pattern": "^@[0-9]+$"},
        }
        headers["Sunset"] = {
            "description": "From when it may be gone (RFC 8594).",
            "schema": {"type": "string", "maxLength": 29},
        }
    return headers


if __name__ == "__main__":
    sys.stdout.buffer.write(encoded_document())

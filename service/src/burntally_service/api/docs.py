"""The documentation page: the contract as one HTML page, readable without scripts and without the internet.

It is written from the OpenAPI document, so that it cannot say anything else. A small script adds forms that send a
request to this very service; nothing on the page is loaded from elsewhere.
"""

import re
from collections.abc import Iterable, Iterator
from functools import cache
from html import escape
from typing import Any, Final

import msgspec

from burntally.model.decode import JSON
from burntally_service.api import openapi
from burntally_service.api.problems import PROBLEM_JSON, ProblemType

__all__ = ["page", "problem_list"]

Node = dict[str, Any]

_ELSEWHERE: Final = (
    '<p>The same as a file: <a href="/openapi.json">openapi.json</a> (OpenAPI 3.1). '
    'What can go wrong: <a href="/problems">problems</a>.</p>'
)
_BOLD: Final = re.compile(r"\*\*(.+?)\*\*", re.DOTALL)
_CODE: Final = re.compile(r"`(.+?)`")
_TYPE_BOUNDS: Final = (
    ("minimum", "≥ {}"),
    ("exclusiveMinimum", "> {}"),
    ("maximum", "≤ {}"),
    ("exclusiveMaximum", "< {}"),
    ("minItems", "at least {} items"),
    ("maxItems", "at most {} items"),
    ("minLength", "at least {} characters"),
    ("maxLength", "at most {} characters"),
)


@cache
def page() -> bytes:
    """Return the page that documents the contract."""
    document = openapi.document()
    problems = document["components"]["responses"]
    parts = [
        f'<p class="lead">{_marked(document["info"]["summary"])}</p>',
        *(f"<p>{_marked(text)}</p>" for text in document["info"]["description"].split("\n\n")),
        _ELSEWHERE,
        '<h2 id="operations">Operations</h2>',
        *(_operation(path, method, node, problems=problems) for path, method, node in _operations(document)),
        '<h2 id="schemas">Schemas</h2>',
        *(_schema(name, node) for name, node in document["components"]["schemas"].items()),
    ]
    title = f"Burntally {document['info']['version']}"
    return _page(title=title, navigation=_navigation(document), main="\n".join(parts))


def problem_list(kinds: Iterable[ProblemType]) -> bytes:
    """Return a page that describes these types of problems."""
    parts = [
        f'<section id="{kind.code}"><h2>{escape(kind.title)}</h2>'
        f"<p><code>{kind.code}</code>, status {kind.status}</p><p>{_marked(kind.description)}</p></section>"
        for kind in kinds
    ]
    navigation = '<ul><li><a href="/problems">All problems</a></li><li><a href="/docs">Documentation</a></li></ul>'
    return _page(title="Problems", navigation=navigation, main="\n".join(parts))


def _page(*, title: str, navigation: str, main: str) -> bytes:
    return f"""<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>{escape(title)}</title>
<link rel="icon" href="/docs/icon.svg" type="image/svg+xml">
<link rel="stylesheet" href="/docs/docs.css">
<script src="/docs/docs.js" defer></script>
</head>
<body>
<a class="skip" href="#main">To the content</a>
<header><h1>{escape(title)}</h1></header>
<nav aria-label="Contents">{navigation}</nav>
<main id="main">
{main}
</main>
</body>
</html>
""".encode()


def _operations(document: Node) -> Iterator[tuple[str, str, Node]]:
    for path, methods in document["paths"].items():
        for method, node in methods.items():
            yield path, method.upper(), node


def _navigation(document: Node) -> str:
    operations = "".join(
        f'<li><a href="#{node["operationId"]}"><b>{method}</b> {escape(path)}</a></li>'
        for path, method, node in _operations(document)
    )
    schemas = "".join(f'<li><a href="#{name}">{name}</a></li>' for name in document["components"]["schemas"])
    return (
        f'<h2><a href="#operations">Operations</a></h2><ul>{operations}</ul>'
        f'<details><summary><a href="#schemas">Schemas</a></summary><ul>{schemas}</ul></details>'
    )


def _operation(path: str, method: str, node: Node, problems: Node) -> str:
    answer = node["responses"]["200"]["content"][JSON]
    parts = [
        f"<p>{_marked(node['description'])}</p>",
        _parameters(node.get("parameters", [])),
        _request(node["requestBody"]["content"][JSON]) if "requestBody" in node else "",
        _trial(path, method, node),
        f"<h4>Answer: {_type(answer['schema'])}</h4>{_examples(answer['examples'])}",
        f"<h4>Problems</h4>{_problems(node['responses'], problems)}",
    ]
    return (
        f'<section class="operation" id="{node["operationId"]}">'
        f'<h3><span class="method">{method}</span> <code>{escape(path)}</code></h3>'
        f"<p><strong>{escape(node['summary'])}</strong></p>{''.join(parts)}</section>"
    )


def _parameters(parameters: list[Node]) -> str:
    rows = "".join(
        f"<tr><th scope='row'><code>{node['name']}</code></th><td>{_type(node['schema'])}</td>"
        f"<td>{_marked(node['description'])}</td></tr>"
        for node in parameters
    )
    return _table("In the path", rows) if rows else ""


def _request(content: Node) -> str:
    return f"<h4>Request: {_type(content['schema'])}</h4>{_examples(content['examples'])}"


def _examples(examples: Node) -> str:
    return "".join(
        f"<details><summary>{escape(example['summary'])}</summary><pre>{escape(_pretty(example['value']))}</pre></details>"
        for example in examples.values()
    )


def _trial(path: str, method: str, node: Node) -> str:
    """A form that the script fills with life; without scripts it stays hidden."""
    identity = f"try-{node['operationId']}"
    fields = "".join(
        f'<label>{parameter["name"]} <input name="{parameter["name"]}" value="{escape(parameter["example"])}"></label>'
        for parameter in node.get("parameters", [])
    )
    if "requestBody" in node:
        example = next(iter(node["requestBody"]["content"][JSON]["examples"].values()))["value"]
        fields += (
            f'<label for="{identity}-body">Body (JSON)</label>'
            f'<textarea id="{identity}-body" rows="12" spellcheck="false">{escape(_pretty(example))}</textarea>'
        )
    return (
        f'<details class="trial" hidden><summary>Try it</summary>'
        f'<form data-method="{method}" data-path="{escape(path)}">{fields}<button type="submit">Send</button>'
        f'<output aria-live="polite"></output></form></details>'
    )


def _problems(responses: Node, problems: Node) -> str:
    named = ((status, node["$ref"].rpartition("/")[2]) for status, node in responses.items() if status != "200")
    items = "".join(f"<li>{status} {_codes(problems[name])}</li>" for status, name in named)
    return f'<ul class="problems">{items}</ul>'


def _codes(problem: Node) -> str:
    """Every code that a status may bear, each with the way to its description."""
    codes = problem["content"][PROBLEM_JSON]["examples"]
    return ", ".join(f'<a href="/problems/{code}">{code.replace("-", " ")}</a>' for code in codes)


def _schema(name: str, node: Node) -> str:
    required = set(node.get("required", []))
    rows = "".join(
        f"<tr><th scope='row'><code>{escape(field)}</code>{'' if field in required else ' <i>optional</i>'}</th>"
        f"<td>{_type(inner)}</td><td>{_marked(inner.get('description', ''))}{_default(inner)}</td></tr>"
        for field, inner in node.get("properties", {}).items()
    )
    body = _table("Fields", rows) if rows else f"<p>{_type(node)}</p>"
    return f'<section class="schema" id="{name}"><h3>{name}</h3><p>{_marked(node["description"])}</p>{body}</section>'


def _table(caption: str, rows: str) -> str:
    return (
        f'<div class="wide"><table><caption>{caption}</caption><thead><tr><th scope="col">Name</th>'
        f'<th scope="col">Type</th><th scope="col">Meaning</th></tr></thead><tbody>{rows}</tbody></table></div>'
    )


def _default(node: Node) -> str:
    default = node.get("default")
    return "" if default is None else f" Default: <code>{escape(_compact(default))}</code>."


def _type(node: Node) -> str:
    """Say what a schema allows, in a few words."""
    if "$ref" in node:
        name = node["$ref"].rpartition("/")[2]
        return f'<a href="#{name}">{name}</a>'
    options = node.get("anyOf") or node.get("oneOf")
    if options:
        return " or ".join(_type(option) for option in options)
    if "const" in node:
        return f"<code>{escape(_compact(node['const']))}</code>"
    if "enum" in node:
        return " or ".join(f"<code>{escape(_compact(value))}</code>" for value in node["enum"])
    return _plain_type(node)


def _plain_type(node: Node) -> str:
    kind = escape(node["type"])
    if kind == "array":
        kind = f"array of {_type(node['items'])}"
    elif isinstance(node.get("additionalProperties"), dict):
        kind = f"object of {_type(node['additionalProperties'])}"
    unit = f" in {escape(node['x-unit'])}" if node.get("x-unit", "1") != "1" else ""
    bounds = [text.format(f"{node[key]:g}") for key, text in _TYPE_BOUNDS if key in node]
    return kind + unit + (f" <small>({', '.join(bounds)})</small>" if bounds else "")


def _marked(text: str) -> str:
    """Set the two marks that descriptions use: strong words and code."""
    return _CODE.sub(r"<code>\1</code>", _BOLD.sub(r"<strong>\1</strong>", escape(text, quote=False)))


def _compact(value: object) -> str:
    return msgspec.json.encode(value).decode()


def _pretty(value: object) -> str:
    return msgspec.json.format(msgspec.json.encode(value), indent=2).decode()

"""Whether every value that fits one schema fits another, and where not: JSON Schema as far as the contract speaks it.

A `no` may be wrong (branches that cover one of the other side only together, a pattern that was merely rewritten);
a `yes` is not.
"""

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from typing import Any, Final

__all__ = ["Misfit", "Node", "SchemaPair", "resolved"]

Node = Mapping[str, Any]

_ANYTHING: Final[Node] = {}
_NOTHING: Final = "nothing"
# What bounds from below, and from above: the keywords of each, the closed end before the open one.
_FLOORS: Final = (("minimum", "exclusiveMinimum"), ("minLength",), ("minItems",), ("minProperties",))
_CEILINGS: Final = (("maximum", "exclusiveMaximum"), ("maxLength",), ("maxItems",), ("maxProperties",))
_NUMBERS: Final = ("integer", "number")
_INNER: Final = ("items", "propertyNames")
_UNIONS: Final = ("anyOf", "oneOf")
_JUDGED: Final = frozenset(
    {
        "const",
        "pattern",
        "properties",
        "required",
        "additionalProperties",
        "default",
        "type",
        "x-unit",
        *_INNER,
        *(key for keys in (*_FLOORS, *_CEILINGS) for key in keys),
    }
)
# These say nothing of values, or nothing that tags and patterns do not say as well.
_TELLING: Final = frozenset({"title", "description", "examples", "discriminator", "x-unit-or", "deprecated"})
_WORDS: Final = re.compile(r"(?P<before>.*)\((?P<words>[\w/|]+)\)(?P<after>[^()]*)", re.DOTALL)


@dataclass(frozen=True, slots=True, kw_only=True)
class Misfit:
    """Something that the inner schema allows and the outer one does not."""

    pointer: str
    what: str
    inner: str
    outer: str


@dataclass(frozen=True, slots=True, kw_only=True)
class SchemaPair:
    """Two documents; the schemas of the first are held against those of the second.

    Parameters
    ----------
    inner : Mapping
        Document of the schemas whose values should fit.
    outer : Mapping
        Document of the schemas that they should fit.
    """

    inner: Node
    outer: Node
    _seen: dict[tuple[str, str], list[Misfit]] = field(default_factory=dict, repr=False)

    def misfits(self, inner: Node, outer: Node, pointer: str = "") -> Iterator[Misfit]:
        """Tell what `inner` allows and `outer` does not.

        Parameters
        ----------
        inner, outer : Mapping
            Schemas of the two documents.
        pointer : str
            Where they are.

        Yields
        ------
        Misfit
            Each with its place below `pointer`; none: every value that fits `inner` fits `outer`.
        """
        # Not a matter of what fits, but of what a request says by leaving the field out.
        if inner.get("default") != outer.get("default"):
            yield _differing(pointer, "default", inner, outer)
        if "$ref" in inner and "$ref" in outer:
            for misfit in self._between_components(inner["$ref"], outer["$ref"]):
                yield replace(misfit, pointer=pointer + misfit.pointer)
        else:
            yield from self._between_unions(resolved(self.inner, inner), resolved(self.outer, outer), pointer)

    def _between_components(self, inner: str, outer: str) -> list[Misfit]:
        """Compare each pair of components once, however often the contract leads to them."""
        if (inner, outer) not in self._seen:
            self._seen[inner, outer] = []  # What leads back to itself breaks nothing by that.
            schemas = resolved(self.inner, {"$ref": inner}), resolved(self.outer, {"$ref": outer})
            self._seen[inner, outer] = list(self._between_unions(*schemas, ""))
        return self._seen[inner, outer]

    def _between_unions(self, inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
        targets = list(_branches(self.outer, outer))
        for branch in _branches(self.inner, inner):
            alike = [target for target in targets if len(targets) == 1 or _is_alike(branch, target)]
            if alike:
                # Told against the branch that it comes nearest to.
                yield from min((list(self._between(branch, target, pointer)) for target in alike), key=len)
            else:
                yield Misfit(pointer=pointer, what="branch", inner=_name(branch), outer=_NOTHING)

    def _between(self, inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
        """Compare schemas without unions."""
        yield from _kinds(inner, outer, pointer)
        yield from _units(inner, outer, pointer)
        if "const" not in inner:
            yield from _bounds(inner, outer, pointer)
            yield from _patterns(inner, outer, pointer)
        # Whatever is not judged here must be the same.
        for key in sorted((inner.keys() | outer.keys()) - _JUDGED - _TELLING):
            if inner.get(key) != outer.get(key):
                yield _differing(pointer, key, inner, outer)
        for key in _INNER:
            yield from self._field(inner.get(key, True), outer.get(key, True), f"{pointer}/{key}")
        yield from self._fields(inner, outer, pointer)

    def _fields(self, inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
        for name in sorted(set(outer.get("required", ())) - set(inner.get("required", ()))):
            yield Misfit(pointer=f"{pointer}/{name}", what="presence", inner="optional", outer="required")
        ours, theirs = inner.get("properties", {}), outer.get("properties", {})
        beyond = (inner.get("additionalProperties", True), outer.get("additionalProperties", True))
        for name in sorted(ours.keys() | theirs.keys()):
            yield from self._field(ours.get(name, beyond[0]), theirs.get(name, beyond[1]), f"{pointer}/{name}")
        yield from self._field(*beyond, f"{pointer}/*")

    def _field(self, inner: Node | bool, outer: Node | bool, pointer: str) -> Iterator[Misfit]:
        if inner is False or outer is True:
            return
        if isinstance(inner, bool) or isinstance(outer, bool):
            yield Misfit(pointer=pointer, what="values", inner=_extent(inner), outer=_extent(outer))
        else:
            yield from self.misfits(inner, outer, pointer)


def resolved(document: Node, node: Node) -> Node:
    """Follow a reference; what stands beside it counts as well."""
    while "$ref" in node:
        target: Any = document
        for step in node["$ref"].removeprefix("#/").split("/"):
            target = target[step.replace("~1", "/").replace("~0", "~")]
        node = {**target, **{key: value for key, value in node.items() if key != "$ref"}}
    return node


def _branches(document: Node, node: Node) -> Iterator[Node]:
    """Take unions apart, and enumerations into their members; what stands beside a union holds for each branch."""
    node = resolved(document, node)
    union = next((key for key in _UNIONS if key in node), None)
    if union is not None:
        beside = {key: value for key, value in node.items() if key not in {union, "title"}}
        for branch in node[union]:
            yield from _branches(document, {**beside, **resolved(document, branch)})
    elif "enum" in node:
        beside = {key: value for key, value in node.items() if key != "enum"}
        yield from ({**beside, "const": member} for member in node["enum"])
    else:
        yield node


def _is_alike(inner: Node, outer: Node) -> bool:
    """Tell whether two branches are of one kind: by their types, by the one value that they allow, or by their tags."""
    if any(_kinds(inner, outer, "")):
        return False
    ours, theirs = _tags(inner), _tags(outer)
    return all(ours[name] == theirs[name] for name in ours.keys() & theirs.keys())


def _tags(branch: Node) -> dict[str, Any]:
    return {name: field["const"] for name, field in branch.get("properties", {}).items() if "const" in field}


def _name(branch: Node) -> str:
    return repr(branch["const"]) if "const" in branch else str(branch.get("title", branch.get("type")))


def _extent(schema: Node | bool) -> str:
    return {True: "of any kind", False: _NOTHING}[schema] if isinstance(schema, bool) else "of a stated kind"


def _differing(pointer: str, key: str, inner: Node, outer: Node) -> Misfit:
    told = [repr(node[key]) if key in node else _NOTHING for node in (inner, outer)]
    return Misfit(pointer=pointer, what=key, inner=told[0], outer=told[1])


def _kinds(inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
    kinds = inner.get("type"), outer.get("type")
    if kinds[1] is not None and kinds[0] != kinds[1] and kinds != _NUMBERS:
        yield _differing(pointer, "type", inner, outer)
    if "const" in outer and inner.get("const", ...) != outer["const"]:
        yield _differing(pointer, "const", inner, outer)


def _units(inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
    # What stands beside a union may name the unit of its one number.
    if inner.get("type") in _NUMBERS and inner.get("x-unit") != outer.get("x-unit"):
        yield _differing(pointer, "x-unit", inner, outer)


def _bounds(inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
    for keys, sign in (*((keys, 1) for keys in _FLOORS), *((keys, -1) for keys in _CEILINGS)):
        held, wanted = _bound(inner, keys, sign), _bound(outer, keys, sign)
        if wanted is not None and (held is None or held < wanted):
            yield Misfit(pointer=pointer, what=keys[0], inner=_told(inner, keys), outer=_told(outer, keys))


def _bound(node: Node, keys: tuple[str, ...], sign: int) -> tuple[float, int] | None:
    """Give the strictest bound as something that orders: of two at one number, the open end is the stricter."""
    return max(((sign * node[key], place) for place, key in enumerate(keys) if key in node), default=None)


def _told(node: Node, keys: tuple[str, ...]) -> str:
    return ", ".join(f"{key} {node[key]}" for key in keys if key in node) or _NOTHING


def _patterns(inner: Node, outer: Node, pointer: str) -> Iterator[Misfit]:
    if "pattern" in outer and inner.get("pattern") != outer["pattern"]:
        ours, theirs = _WORDS.fullmatch(inner.get("pattern", "")), _WORDS.fullmatch(outer["pattern"])
        if not (ours and theirs and _has_the_words_of(theirs, ours)):
            yield _differing(pointer, "pattern", inner, outer)


def _has_the_words_of(outer: re.Match[str], inner: re.Match[str]) -> bool:
    """Tell whether two patterns differ in this alone, that `outer` knows more words, such as units."""
    same = [inner[group] == outer[group] for group in ("before", "after")]
    return all(same) and set(inner["words"].split("|")) <= set(outer["words"].split("|"))

"""Whether a contract breaks those who rely on an older one.

Requests may only widen: whatever was accepted stays accepted. Answers may only narrow, and learn fields: whatever is
told, a caller of the older contract knows how to read. So in an answer a new member of an enumeration or a new branch
of a union breaks, for generated clients refuse what they do not know; what is to grow is told as text without an
enumeration. Problems may come with statuses that were not listed before, since any client must read those by class.

Run as a module it holds the checkout's contract against the last release's, or the second of two files against the
first: ``python -m tests.contract.compatibility [OLD NEW]``.
"""

import json
import subprocess
import sys
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from packaging.version import Version

from tests.contract.subschema import Misfit, Node, SchemaPair, resolved

__all__ = ["Break", "Verdict", "breaks", "last_release", "main", "verdict"]

ROOT: Final = Path(__file__).parents[2]
CONTRACT: Final = Path("openapi/burntally.openapi.json")
RELEASED: Final = Path("openapi/released.openapi.json")
_METHODS: Final = frozenset({"get", "put", "post", "delete", "options", "head", "patch", "trace"})
_ERRORS: Final = ("4", "5")


@dataclass(frozen=True, slots=True, kw_only=True)
class Break:
    """One thing that callers of the old contract may rely on and the new one does not keep."""

    where: str
    what: str

    def __str__(self) -> str:
        return f"{self.where}: {self.what}"


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """What breaks between two versions, and whether the version's number owns up to it."""

    old: str
    new: str
    breaks: tuple[Break, ...]

    @property
    def is_owned_up_to(self) -> bool:
        """Whether nothing breaks, or the number says so: below 1.0 by its minor part, from there on by its major."""
        old, new = Version(self.old), Version(self.new)
        kept = 1 if old.major else 2
        return not self.breaks or new.release[:kept] > old.release[:kept]


def verdict(old: Node, new: Node) -> Verdict:
    """Judge a contract by an older one."""
    return Verdict(old=old["info"]["version"], new=new["info"]["version"], breaks=tuple(breaks(old, new)))


def breaks(old: Node, new: Node) -> Iterator[Break]:
    """Tell what breaks those who rely on an older contract.

    Parameters
    ----------
    old, new : Mapping
        OpenAPI 3.1 documents.

    Yields
    ------
    Break
        Each with the operation and the place in its request or answer.
    """
    yield from _lost("servers", _urls(old), _urls(new))
    asked, told = SchemaPair(inner=old, outer=new), SchemaPair(inner=new, outer=old)
    for path, methods in old["paths"].items():
        for method in sorted(methods.keys() & _METHODS):
            where = f"{method.upper()} {path}"
            successor = new["paths"].get(path, {}).get(method)
            if successor is None:
                yield Break(where=where, what="the operation is gone")
            else:
                yield from _Operations(asked=asked, told=told, where=where).breaks(methods[method], successor)


def _urls(document: Node) -> set[str]:
    return {server["url"] for server in document.get("servers", [{"url": "/"}])}


def _lost(where: str, old: set[str], new: set[str]) -> Iterator[Break]:
    for name in sorted(old - new):
        yield Break(where=where, what=f"{name} is gone")


@dataclass(frozen=True, slots=True, kw_only=True)
class _Operations:
    """One operation in two documents: requests of the old must fit the new, answers of the new must fit the old."""

    asked: SchemaPair
    told: SchemaPair
    where: str

    @property
    def old(self) -> Node:
        return self.asked.inner

    @property
    def new(self) -> Node:
        return self.asked.outer

    def breaks(self, old: Node, new: Node) -> Iterator[Break]:
        if old.get("operationId") != new.get("operationId"):
            yield Break(where=self.where, what=f"{old.get('operationId')} is called {new.get('operationId')} now")
        yield from self._security(old, new)
        yield from self._parameters(old, new)
        yield from self._request(old.get("requestBody"), new.get("requestBody"))
        yield from self._responses(old["responses"], new["responses"])

    def _asked(self, old: Node, new: Node, pointer: str) -> Iterator[Break]:
        for misfit in self.asked.misfits(old, new, pointer):
            yield self._broken(misfit, f"{misfit.inner} before, {misfit.outer} now")

    def _told(self, old: Node, new: Node, pointer: str) -> Iterator[Break]:
        for misfit in self.told.misfits(new, old, pointer):
            yield self._broken(misfit, f"{misfit.outer} before, {misfit.inner} now")

    def _broken(self, misfit: Misfit, change: str) -> Break:
        return Break(where=f"{self.where} {misfit.pointer}", what=f"{misfit.what}: {change}")

    def _security(self, old: Node, new: Node) -> Iterator[Break]:
        for way in old.get("security", self.old.get("security")) or [{}]:
            wanted = new.get("security", self.new.get("security")) or [{}]
            if not any(self._lets_in(other, way) for other in wanted):
                yield Break(where=self.where, what=f"security: {' and '.join(way) or 'nobody asked'} before, more now")

    def _lets_in(self, wanted: Mapping[str, list[str]], shown: Mapping[str, list[str]]) -> bool:
        schemes = [document.get("components", {}).get("securitySchemes", {}) for document in (self.old, self.new)]
        return all(
            name in shown
            and set(scopes) <= set(shown[name])
            and _untold(schemes[0].get(name)) == _untold(schemes[1].get(name))
            for name, scopes in wanted.items()
        )

    def _parameters(self, old: Node, new: Node) -> Iterator[Break]:
        ours, theirs = _parameters_of(self.old, old), _parameters_of(self.new, new)
        yield from _lost(self.where, {f"{place} {name}" for place, name in ours.keys() - theirs.keys()}, set())
        for (place, name), parameter in theirs.items():
            before = ours.get((place, name), {})
            if parameter.get("required") and not before.get("required"):
                yield Break(where=self.where, what=f"{place} {name} is required now")
            if before:
                yield from self._asked(before["schema"], parameter["schema"], f"{place} {name}")

    def _request(self, old: Node | None, new: Node | None) -> Iterator[Break]:
        old, new = resolved(self.old, old or {}), resolved(self.new, new or {})
        if new.get("required") and not old.get("required"):
            yield Break(where=self.where, what="a body is required now")
        yield from _lost(f"{self.where} request", set(old.get("content", {})), set(new.get("content", {})))
        for media_type, content in old.get("content", {}).items():
            if media_type in new.get("content", {}):
                schemas = content.get("schema", {}), new["content"][media_type].get("schema", {})
                yield from self._asked(*schemas, f"request {media_type} ")

    def _responses(self, old: Node, new: Node) -> Iterator[Break]:
        yield from _lost(f"{self.where} answers", set(old), set(new))
        for status in sorted(new):
            if status in old:
                yield from self._response(resolved(self.old, old[status]), resolved(self.new, new[status]), status)
            elif not status.startswith(_ERRORS):
                yield Break(where=self.where, what=f"{status} may be answered now")

    def _response(self, old: Node, new: Node, status: str) -> Iterator[Break]:
        yield from _lost(f"{self.where} {status}", set(old.get("content", {})), set(new.get("content", {})))
        for media_type, content in old.get("content", {}).items():
            if media_type in new.get("content", {}):
                schemas = content.get("schema", {}), new["content"][media_type].get("schema", {})
                yield from self._told(*schemas, f"{status} {media_type} ")
        for name, header in old.get("headers", {}).items():
            yield from self._header(resolved(self.old, header), new.get("headers", {}).get(name), f"{status} {name}")

    def _header(self, old: Node, new: Node | None, pointer: str) -> Iterator[Break]:
        header = resolved(self.new, new) if new else None
        if header is None or (old.get("required") and not header.get("required")):
            yield Break(where=f"{self.where} {pointer}", what="the header may be absent now")
        if header is not None:
            yield from self._told(old["schema"], header["schema"], pointer)


def _parameters_of(document: Node, operation: Node) -> dict[tuple[str, str], Node]:
    found = [resolved(document, parameter) for parameter in operation.get("parameters", [])]
    return {(parameter["in"], parameter["name"]): parameter for parameter in found}


def _untold(scheme: Node | None) -> Node | None:
    return scheme and {key: value for key, value in scheme.items() if key != "description"}


def last_release(root: Path) -> Node | None:
    """Find the contract of the last release before what is checked out.

    Parameters
    ----------
    root : Path
        Top of the checkout.

    Returns
    -------
    Mapping or None
        The contract as the newest reachable tag `v*` has it; without such a tag (a clone of the last commits alone
        has none) the copy that a release leaves in the checkout; None: nothing has been released.

    Raises
    ------
    ValueError
        If the copy says that it is what was tagged, and is not.
    """
    tags = _git(root, "tag", "--list", "v*", "--merged", "HEAD", "--no-contains", "HEAD", "--sort=-version:refname")
    tagged = _decoded(_git(root, "show", f"{tags.split()[0]}:{CONTRACT.as_posix()}")) if tags else None
    copied = _decoded((root / RELEASED).read_text(encoding="utf-8")) if (root / RELEASED).is_file() else None
    if tagged and copied and tagged["info"]["version"] == copied["info"]["version"] and tagged != copied:
        raise ValueError(f"{RELEASED} is not the contract that was tagged")
    return tagged or copied


def _decoded(text: str) -> Node:
    document: Node = json.loads(text)
    return document


def _git(root: Path, *arguments: str) -> str:
    return subprocess.run(["git", *arguments], cwd=root, check=True, capture_output=True, text=True).stdout


def main(arguments: list[str], root: Path = ROOT) -> int:
    """Print what breaks; 0: nothing, or the version says so, 1: something, 2: not called so."""
    if len(arguments) not in {0, 2}:
        sys.stderr.write("usage: python -m tests.contract.compatibility [OLD NEW]\n")
        return 2
    files = [Path(name) for name in arguments] or [root / CONTRACT]
    *older, new = [_decoded(file.read_text(encoding="utf-8")) for file in files]
    old = older[0] if older else last_release(root)
    if old is None:
        sys.stdout.write("nothing has been released: there is no contract to keep to\n")
        return 0
    found = verdict(old, new)
    sys.stdout.writelines(f"{line}\n" for line in (*found.breaks, _summary(found)))
    return 0 if found.is_owned_up_to else 1


def _summary(found: Verdict) -> str:
    told = f"{len(found.breaks)} breaks from {found.old} to {found.new}"
    return told if found.is_owned_up_to else f"{told}: raise the version, or mend them"


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))

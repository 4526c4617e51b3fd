"""Design files: JSON, TOML or YAML, with the vehicle, the mission or the rules in files of their own where wanted.

A file may put ``{ file = "path" }`` in place of one of these three. The path is relative to the file that says so, is
not followed any further, and may not lead out of the project: a design from a stranger's branch reads nothing else.
"""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from json import JSONDecodeError
from pathlib import Path
from typing import Any, Final, cast

from burntally.model.decode import decode_builtins, parse_json
from burntally.model.design import Design
from burntally.model.errors import ContractError, Violation

__all__ = ["DesignFile", "DesignFileError", "read_design", "read_design_file"]

_PARTS: Final = ("vehicle", "mission", "rules")
_REFERENCE: Final = "file"
_TOML_PLACE: Final = re.compile(r"line (\d+), column (\d+)")


class DesignFileError(ContractError):
    """A design file cannot be parsed, or what it refers to cannot be read.

    Parameters
    ----------
    path : Path
        The file at fault.
    message : str
        What is wrong with it.
    pointer : str, optional
        Where the design refers to it; absent: it is the design file itself.
    line, column : int, optional
        Place in the file, from 1; absent: the file as a whole.
    """

    def __init__(
        self, path: Path, message: str, *, pointer: str = "", line: int | None = None, column: int | None = None
    ) -> None:
        place = "" if line is None else f" (line {line}, column {column})"
        super().__init__([Violation(pointer=pointer, message=f"{path.name} {message}{place}")])
        self.path = path
        self.line = line
        self.column = column


@dataclass(frozen=True, kw_only=True, slots=True)
class DesignFile:
    """A design, and which file holds which part of it."""

    design: Design
    sources: Mapping[str, Path]
    """File by the JSON Pointer that it holds; the design file itself by the empty pointer."""

    def place_of(self, pointer: str) -> tuple[Path, str]:
        """Tell which file holds a field.

        Parameters
        ----------
        pointer : str
            JSON Pointer into the design.

        Returns
        -------
        tuple of Path and str
            The file, and the JSON Pointer into it.
        """
        part = "/" + pointer.split("/")[1] if pointer else ""
        if part in self.sources:
            return self.sources[part], pointer[len(part) :]
        return self.sources[""], pointer


def read_design(path: Path) -> Design:
    """Read a design file.

    Parameters
    ----------
    path : Path
        File; its suffix tells the language.

    Returns
    -------
    Design
        The design, whole.

    Raises
    ------
    OSError
        The file itself cannot be read.
    DesignFileError
        It cannot be parsed, or what it refers to cannot be read.
    ContractError
        It is no design; all its violations are told.
    """
    return read_design_file(path).design


def read_design_file(path: Path) -> DesignFile:
    """Read a design file, and keep which file holds which part of it.

    Parameters
    ----------
    path : Path
        File; its suffix tells the language.

    Returns
    -------
    DesignFile
        The design, and its files.

    Raises
    ------
    OSError
        The file itself cannot be read.
    DesignFileError
        It cannot be parsed, or what it refers to cannot be read.
    ContractError
        It is no design; all its violations are told.
    """
    parsed = _parsed(path, path.read_bytes(), "")
    sources = {"": path}
    for name in _PARTS:
        table = _table(parsed)
        reference = _reference(table.get(name))
        if reference is not None:
            source = _inside(path, reference, f"/{name}")
            table[name] = _referred(source, f"/{name}")
            sources[f"/{name}"] = source
    return DesignFile(design=decode_builtins(Design, parsed), sources=sources)


def _reference(part: object) -> str | None:
    table = _table(part)
    reference = table.get(_REFERENCE) if len(table) == 1 else None
    return reference if isinstance(reference, str) else None


def _table(parsed: object) -> dict[str, object]:
    return cast("dict[str, object]", parsed) if isinstance(parsed, dict) else {}


def _inside(path: Path, reference: str, pointer: str) -> Path:
    base = path.resolve().parent
    root = next((folder for folder in (base, *base.parents) if (folder / ".git").exists()), base)
    source = (base / reference).resolve()
    if Path(reference).is_absolute() or not source.is_relative_to(root):
        message = f"refers to {reference!r}, which is not a relative path within the project"
        raise DesignFileError(path, message, pointer=pointer)
    return source


def _referred(source: Path, pointer: str) -> object:
    try:
        parsed = _parsed(source, source.read_bytes(), pointer)
    except OSError as error:
        raise DesignFileError(source, f"cannot be read: {error.strerror or error}", pointer=pointer) from error
    if _reference(parsed) is not None:
        raise DesignFileError(source, "refers to yet another file, which is not followed", pointer=pointer)
    return parsed


def _parsed(path: Path, data: bytes, pointer: str) -> object:
    parse = _PARSERS.get(path.suffix.lower())
    if parse is None:
        raise DesignFileError(path, f"is none of {', '.join(_PARSERS)}", pointer=pointer)
    try:
        text = data.decode("utf-8-sig")
        return parse(text)
    except UnicodeDecodeError as error:
        raise DesignFileError(path, f"is not UTF-8, at byte {error.start}", pointer=pointer) from error
    except RecursionError as error:
        raise DesignFileError(path, "is nested too deep", pointer=pointer) from error
    except _SyntaxFaultError as error:
        raise DesignFileError(path, str(error), pointer=pointer, line=error.line, column=error.column) from error


class _SyntaxFaultError(Exception):
    def __init__(self, message: str, line: int | None = None, column: int | None = None) -> None:
        super().__init__(message)
        self.line = line
        self.column = column


def _json(text: str) -> object:
    try:
        return parse_json(text.encode())
    except ContractError as error:
        cause = error.__cause__
        if isinstance(cause, JSONDecodeError):
            raise _SyntaxFaultError(f"is not JSON: {cause.msg}", cause.lineno, cause.colno) from error
        raise _SyntaxFaultError(error.violations[0].message.removeprefix("the body ")) from error


def _toml(text: str) -> object:
    import tomllib  # one language for each command, and the others are not loaded

    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        found = _TOML_PLACE.search(str(error))
        # Else it says: at the end of the document.
        line, column = map(int, found.groups()) if found else (text.count("\n") + 1, len(text) - text.rfind("\n"))
        message = str(error).split(" (at ", maxsplit=1)[0]
        raise _SyntaxFaultError(f"is not TOML: {message}", line, column) from error


def _yaml(text: str) -> object:
    try:
        from ruamel.yaml import YAML
        from ruamel.yaml.error import MarkedYAMLError, YAMLError
    except ImportError as error:
        raise _SyntaxFaultError("is YAML, which needs `pip install burntally[cli]`") from error
    try:
        loader: Any = YAML(typ="safe", pure=True)
        parsed: object = loader.load(text)
    except MarkedYAMLError as error:
        mark: Any = getattr(error, "problem_mark", None)
        line, column = (mark.line + 1, mark.column + 1) if mark is not None else (None, None)
        raise _SyntaxFaultError(f"is not YAML: {getattr(error, 'problem', None)}", line, column) from error
    except (YAMLError, ValueError) as error:
        raise _SyntaxFaultError(f"is not YAML: {error}") from error
    return parsed


_PARSERS: Final[Mapping[str, Callable[[str], object]]] = {".json": _json, ".toml": _toml, ".yaml": _yaml, ".yml": _yaml}

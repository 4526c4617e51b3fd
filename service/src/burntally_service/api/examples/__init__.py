"""Examples of each operation, kept as files: requests as a person would write them, and what was answered.

The answers are a record, not a computation at start: so the contract is the same bytes on every machine. A test holds
them against what the service answers today; ``python -m burntally_service.api.examples`` writes them anew.
"""

from functools import cache
from importlib.resources import as_file, files
from typing import Any, Final

import msgspec

from burntally_service.operations import OPERATIONS, answer

__all__ = ["answer_of", "example_bytes", "requests_of", "rewrite_answers"]

_FOLDER: Final = files("burntally_service.api.examples")


@cache
def requests_of(operation_id: str) -> dict[str, Any]:
    """Return the operation's example requests, by name: each has a `summary` and a `value`."""
    path = _FOLDER / f"{operation_id}.requests.json"
    examples: dict[str, Any] = msgspec.json.decode(path.read_bytes()) if path.is_file() else {}
    return examples


@cache
def answer_of(operation_id: str) -> dict[str, Any]:
    """Return the answer to the operation's first example request, in the shape of the contract's examples."""
    summary = next((example["summary"] for example in requests_of(operation_id).values()), "The answer")
    value = msgspec.json.decode((_FOLDER / f"{operation_id}.answer.json").read_bytes())
    return {"answer": {"summary": summary, "value": value}}


def example_bytes(operation_id: str) -> bytes:
    """Return the first example request of the operation as a body; empty where it asks nothing."""
    examples = list(requests_of(operation_id).values())
    return msgspec.json.encode(examples[0]["value"]) if examples else b""


def rewrite_answers() -> None:
    """Answer every first example anew and write the answers beside the requests."""
    with as_file(_FOLDER) as folder:
        for operation_id in OPERATIONS:
            told = answer(operation_id, example_bytes(operation_id))
            (folder / f"{operation_id}.answer.json").write_bytes(msgspec.json.format(told, indent=1) + b"\n")

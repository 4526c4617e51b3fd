"""A worker: what it tells the server beside the answer."""

import logging

import pytest

from burntally.model.errors import UncomputableError, Violation
from burntally_service import worker


def test_what_is_logged_of_a_refusal_goes_to_the_server(monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object) -> bytes:
        logging.getLogger("burntally.operations").warning("arithmetic failed")
        raise UncomputableError([Violation(pointer="", message="no answer")])

    monkeypatch.setattr(worker, "answer", refuse)
    root = logging.getLogger()
    root.addHandler(worker._NOTEBOOK)
    try:
        asked = worker.Asked(operation_id="list_bodies", body=b"", media_type="", accept="", timeout_s=5.0)
        outcomes = [worker._outcome(worker._Desk(), asked) for _ in range(2)]
    finally:
        root.removeHandler(worker._NOTEBOOK)
    # Each is told of its own refusal alone.
    assert [isinstance(outcome, worker.Refused) and outcome.logged for outcome in outcomes] == [
        ["arithmetic failed"]
    ] * 2

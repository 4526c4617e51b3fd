"""Tokens: which one lets in, and what can be learned by trying."""

import hmac

import pytest

from burntally_service.api.tokens import Tokens

OLD, NEW = "an-old-token-of-ours", "a-new/token+of~ours=="
TOKENS = Tokens.read(f"{NEW}\n\n  {OLD}\n")


@pytest.mark.parametrize("token", [OLD, NEW])
def test_each_of_several_tokens_lets_in(token: str) -> None:
    assert TOKENS.match(token.encode()) is not None


@pytest.mark.parametrize("token", ["", OLD[:-1], OLD + "x", OLD.upper(), f"{NEW}\n{OLD}", "\x00" * 20], ids=repr)
def test_nothing_else_does(token: str) -> None:
    assert TOKENS.match(token.encode()) is None


def test_two_tokens_are_told_apart() -> None:
    assert TOKENS.match(OLD.encode()) != TOKENS.match(NEW.encode())


def test_without_tokens_nothing_lets_in() -> None:
    assert Tokens().match(b"") is None


@pytest.mark.parametrize("token", [OLD, NEW, "", "x", OLD[:-1]])
def test_every_try_compares_as_many_bytes(token: str, monkeypatch: pytest.MonkeyPatch) -> None:
    compared: list[tuple[int, int]] = []

    def compare(left: bytes, right: bytes) -> bool:
        compared.append((len(left), len(right)))
        return left == right

    monkeypatch.setattr(hmac, "compare_digest", compare)
    TOKENS.match(token.encode())
    assert compared == [(32, 32)] * 2


def test_no_token_is_kept() -> None:
    kept = repr(tuple(TOKENS)) + repr(TOKENS)
    assert [token for token in (OLD, NEW) if token in kept] == []

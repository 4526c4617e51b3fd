"""The guard: who is let in, and how often, before anything of a request is read."""

from typing import Final

from litestar.types import HTTPScope

from burntally_service.api.callers import neighbourhood
from burntally_service.api.problems import ProblemError
from burntally_service.api.quotas import Quotas
from burntally_service.api.settings import Settings

__all__ = ["Guard"]

# What is the same at every installation, and what has to be asked before anybody can know a token.
_OPEN: Final = frozenset({"/", "/healthz", "/readyz", "/openapi.json", "/docs", "/problems"})
_OPEN_BELOW: Final = ("/docs/", "/problems/")
# A machine asks these steadily, and they cost nothing.
_UNCOUNTED: Final = frozenset({"/healthz", "/readyz", "/metrics"})
_SCHEME: Final = b"bearer "


class Guard:
    """Asks for a token and counts requests, where the settings say so.

    Every path wants the token but those that are open by name, so that a new one is closed until it is opened.

    Parameters
    ----------
    settings : Settings
        `token` and `rate_per_minute`.
    """

    def __init__(self, settings: Settings) -> None:
        self._tokens = settings.token
        self._quotas = Quotas(settings.rate_per_minute) if settings.rate_per_minute else None

    def admit(self, scope: HTTPScope, caller: str | None) -> dict[str, str]:
        """Let a request in.

        Parameters
        ----------
        scope : HTTPScope
            The request.
        caller : str or None
            Address that it came from.

        Returns
        -------
        dict
            Header fields that its answer bears.

        Raises
        ------
        ProblemError
            The caller has shown no good token, or has no request left.
        """
        if not self._tokens and self._quotas is None:
            return {}
        sent = [value for name, value in scope["headers"] if name == b"authorization"]
        digest = self._tokens.match(_token_of(sent)) if self._tokens and sent else None
        headers: dict[str, str] = {}
        if self._quotas is not None and scope["path"] not in _UNCOUNTED:
            headers = self._charge(self._quotas, digest.hex() if digest else neighbourhood(caller))
        if self._tokens and digest is None and not _is_open(scope["path"]):
            raise _unauthorized(headers, was_sent=bool(sent))
        return headers

    @staticmethod
    def _charge(quotas: Quotas, caller: str) -> dict[str, str]:
        quota = quotas.charge(caller)
        if quota.is_spent:
            detail = f"no more than {quota.per_minute} requests a minute"
            raise ProblemError("rate-limited", detail, headers=quota.headers)
        return quota.headers


def _is_open(path: str) -> bool:
    return path in _OPEN or path.startswith(_OPEN_BELOW)


def _token_of(sent: list[bytes]) -> bytes:
    """Read the token out of the one field that should hold it; nothing where it does not."""
    if len(sent) != 1 or sent[0][: len(_SCHEME)].lower() != _SCHEME:
        return b""
    return sent[0][len(_SCHEME) :].strip()


def _unauthorized(headers: dict[str, str], *, was_sent: bool) -> ProblemError:
    """Ask for a token, by RFC 6750: section 3.1 has no error told to a caller who sent none."""
    challenge = 'Bearer realm="burntally"' + (', error="invalid_token"' if was_sent else "")
    detail = "the token is not one that lets in" if was_sent else "this service asks for a bearer token"
    return ProblemError("unauthorized", detail, headers={**headers, "WWW-Authenticate": challenge})

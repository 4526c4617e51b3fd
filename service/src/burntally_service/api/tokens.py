"""Bearer tokens: what a caller must show where the operator asks for one (RFC 6750)."""

import hashlib
import hmac
import re
from typing import Final, Self

__all__ = ["Tokens"]

_TOKEN_MIN_CHARACTERS: Final = 16
# The `b64token` of RFC 6750, section 2.1; the bound keeps a header's hashing short.
_TOKEN: Final = re.compile(r"[A-Za-z0-9._~+/\-]{1,512}=*\Z")


class Tokens(tuple[bytes, ...]):
    """Digests of the tokens that let a caller in; none: nobody is asked.

    Only digests are kept, so that no dump of the settings tells a token, and so that any two of them are compared over
    the same number of bytes, whatever was sent.
    """

    __slots__ = ()

    @classmethod
    def read(cls, text: str) -> Self:
        """Read tokens, one a line, so that an old one stays good until every caller has the new one.

        Parameters
        ----------
        text : str
            The setting's value.

        Returns
        -------
        Tokens
            Their digests.

        Raises
        ------
        ValueError
            There is none, or one is short or written in other characters; the message counts lines and quotes none.
        """
        lines = [line.strip() for line in text.splitlines() if line.strip()]
        if not lines:
            raise ValueError("there is no token in it")
        for number, line in enumerate(lines, start=1):
            if len(line) < _TOKEN_MIN_CHARACTERS:
                raise ValueError(f"token {number} has less than {_TOKEN_MIN_CHARACTERS} characters")
            if not _TOKEN.match(line):
                raise ValueError(f"token {number} holds more than letters, digits and -._~+/ with = at its end")
        return cls(_digest(line.encode("ascii")) for line in lines)

    def match(self, token: bytes) -> bytes | None:
        """Return the digest of a token that lets in, None for any other; the time taken tells nothing of either."""
        digest = _digest(token)
        found = [hmac.compare_digest(digest, known) for known in self]
        return digest if any(found) else None

    def __repr__(self) -> str:
        return f"<{len(self)} tokens>"


def _digest(token: bytes) -> bytes:
    return hashlib.sha256(token).digest()

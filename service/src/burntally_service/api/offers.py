"""Offers to go on in another protocol, which are not taken: the request is read as if it had made none.

Some clients offer HTTP/2 with their first request, whatever it is. The parser stops at an offer as if it were taken,
and leaves the body of the request to the other protocol. So another parser goes on where it stopped.
"""

from collections.abc import Iterable
from functools import partial
from typing import Final

from httptools import HttpRequestParser

__all__ = ["Declined"]

_OF_THE_HEAD: Final = ("on_message_begin", "on_url", "on_header", "on_headers_complete")
_OF_THE_BODY: Final = ("on_body", "on_message_complete")
# What says where a body ends.
_FRAMING: Final = frozenset({b"content-length", b"transfer-encoding"})


class Declined:
    """What a parser tells that goes on behind a head: nothing of that head, and all that follows.

    Parameters
    ----------
    connection : object
        Takes the parser's calls.
    """

    def __init__(self, connection: object) -> None:
        self._is_behind = False
        for name in _OF_THE_HEAD:
            setattr(self, name, partial(self._tell, getattr(connection, name)))
        for name in _OF_THE_BODY:
            setattr(self, name, getattr(connection, name))

    def go_on(self, parser: HttpRequestParser, headers: Iterable[tuple[bytes, bytes]]) -> None:
        """Take a new parser, which tells this object, to where the body of the request begins.

        Parameters
        ----------
        parser : HttpRequestParser
            The parser.
        headers : iterable of (bytes, bytes)
            Fields of the request, names in lower case.
        """
        fields = b"".join(b"%s: %s\r\n" % field for field in headers if field[0] in _FRAMING)
        parser.feed_data(b"POST / HTTP/1.1\r\n" + fields + b"\r\n")
        self._is_behind = True

    def _tell(self, call: partial[None], *told: bytes) -> None:
        if self._is_behind:
            call(*told)

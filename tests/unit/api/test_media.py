import pytest

from burntally.model.decode import JSON, MSGPACK
from burntally_service.api.media import body_media_type, chosen_media_type


@pytest.mark.parametrize(
    "content_type,read_as",
    [
        ("application/json", JSON),
        ("Application/JSON", JSON),
        ("application/json; charset=utf-8", JSON),
        ('application/json;charset="UTF-8"', JSON),
        ("application/json; profile=x", JSON),
        ("application/msgpack", MSGPACK),
        ("application/x-msgpack", MSGPACK),
        ("application/vnd.msgpack", MSGPACK),
        ("application/json; charset=utf-16", None),
        ("application/problem+json", None),
        ("application/json, application/json", None),
        ("text/json", None),
        ("", None),
    ],
)
def test_what_a_body_is_written_in(content_type: str, read_as: str | None) -> None:
    assert body_media_type(content_type) == read_as


@pytest.mark.parametrize(
    "accept,chosen",
    [
        ("", JSON),
        ("*/*", JSON),
        ("application/*", JSON),
        ("application/msgpack", MSGPACK),
        ("application/x-msgpack", MSGPACK),
        ("application/json;q=0.5, application/msgpack", MSGPACK),
        ("application/json;q=0.5, application/msgpack;q=0.5", JSON),
        ("application/json;q=0, */*", MSGPACK),
        ("*/*;q=0.1, application/msgpack;q=0", JSON),
        ("text/html, application/*;q=0.2", JSON),
        ("TEXT/HTML, Application/MsgPack", MSGPACK),
        ("text/html", None),
        ("*/*;q=0", None),
        ("application/json;q=high", None),
        ("application/json;q=7", None),
    ],
)
def test_what_an_answer_may_be_written_in(accept: str, chosen: str | None) -> None:
    assert chosen_media_type(accept) == chosen

"""What a client does when the network, the service or an answer fails; the same for both clients."""

import asyncio
import time
from collections.abc import AsyncIterator, Callable, Iterable, Iterator
from typing import Any

import httpx2
import msgspec
import pytest

from burntally.client import connect, connect_async, errors
from burntally.model.operations import Bodies, Problem

Ask = Callable[..., Any]

URL = "http://burntally.test"
BODIES = b'{"bodies":[]}'
TOKEN = "an-invented-token"  # noqa: S105 - invented


class Script:
    """A network that plays back replies and faults, and keeps what it was asked."""

    def __init__(self, *scenes: httpx2.Response | Exception | int) -> None:
        self._scenes = list(scenes)
        self.asked: list[httpx2.Request] = []

    def __call__(self, request: httpx2.Request) -> httpx2.Response:
        self.asked.append(request)
        scene = self._scenes.pop(0)
        if isinstance(scene, Exception):
            raise scene
        return httpx2.Response(scene) if isinstance(scene, int) else scene


def good() -> httpx2.Response:
    return httpx2.Response(200, content=BODIES)


def problem(status: int, code: str, **headers: str) -> httpx2.Response:
    body = Problem(
        type=f"/problems/{code}",
        title="A problem",
        status=status,
        code=code,
        errors=[errors.Violation(pointer="/vehicle/name", message="is missing")],
        request_id="abc",
    )
    return httpx2.Response(
        status,
        content=msgspec.json.encode(body),
        headers={name.replace("_", "-"): text for name, text in headers.items()},
    )


@pytest.mark.parametrize(
    "fault",
    [
        httpx2.ConnectError("refused"),
        httpx2.ConnectTimeout("no route"),
        httpx2.RemoteProtocolError("server disconnected without sending a response"),
        httpx2.ReadError("reset"),
        httpx2.WriteError("reset"),
        408,
        429,
        500,
        503,
    ],
    ids=repr,
)
def test_a_fault_that_may_pass_is_tried_again(fault: Any, ask: Ask, pauses: list[float]) -> None:
    assert ask(Script(fault, good()), "bodies") == Bodies(bodies=[])
    assert len(pauses) == 2


@pytest.mark.usefixtures("pauses")
@pytest.mark.parametrize(
    "fault,kind",
    [
        (httpx2.ConnectError("refused"), errors.ConnectionFailed),
        (httpx2.RemoteProtocolError("dropped"), errors.ConnectionFailed),
        (503, errors.Unavailable),
        (502, errors.ServerFault),
    ],
    ids=repr,
)
def test_a_fault_that_stays_is_raised_after_the_tries(fault: Any, kind: type[Exception], ask: Ask) -> None:
    script = Script(*[fault] * 3)
    with pytest.raises(kind):
        ask(script, "bodies", tries=3)
    assert len(script.asked) == 3


@pytest.mark.usefixtures("pauses")
def test_a_failed_connection_names_the_address(ask: Ask) -> None:
    with pytest.raises(errors.ConnectionFailed, match=r"^https?://[^/@]+: ConnectError: refused"):
        ask(Script(httpx2.ConnectError("refused")), "bodies", tries=1)


def test_a_timeout_is_not_tried_again(ask: Ask, pauses: list[float]) -> None:
    with pytest.raises(errors.TimedOut):
        ask(Script(httpx2.ReadTimeout("late")), "bodies")
    assert pauses == [0.0]


def test_a_client_without_time_does_not_send(ask: Ask) -> None:
    script = Script()
    with pytest.raises(errors.TimedOut):
        ask(script, "bodies", timeout_s=0.0)
    assert script.asked == []


def test_retry_after_is_honoured(ask: Ask, pauses: list[float]) -> None:
    ask(Script(httpx2.Response(429, headers={"Retry-After": "9"}), good()), "bodies")
    assert pauses == [0.0, 9.0]


def test_retry_after_beyond_the_deadline_is_not_waited_for(ask: Ask, pauses: list[float]) -> None:
    with pytest.raises(errors.RateLimited):
        ask(Script(httpx2.Response(429, headers={"Retry-After": "31"})), "bodies", timeout_s=30.0)
    assert pauses == [0.0]


@pytest.mark.parametrize(
    "content", [b"", b"{", b"[]", b"{}", b'{"bodies":[{}]}', b'{"bodies":0}', b"\xff\xfe", b"<html>"], ids=repr
)
def test_an_answer_that_cannot_be_read_says_so(content: bytes, ask: Ask) -> None:
    with pytest.raises(errors.DecodingError) as caught:
        ask(Script(httpx2.Response(200, content=content, headers={"X-Request-Id": "abc"})), "bodies")
    assert (caught.value.response.body, caught.value.request_id) == (content, "abc")


CLASSES: Iterable[tuple[int, str, type[errors.StatusError]]] = [
    (400, "invalid-request", errors.InvalidRequest),
    (422, "inconsistent-request", errors.InconsistentRequest),
    (422, "uncomputable", errors.Uncomputable),
    (401, "unauthorized", errors.Unauthorized),
    (429, "rate-limited", errors.RateLimited),
    (404, "not-found", errors.NotFound),
    (413, "payload-too-large", errors.TooLarge),
    # A code that this SDK does not know has the class of its status.
    (400, "of-a-newer-service", errors.InvalidRequest),
    (422, "of-a-newer-service", errors.Uncomputable),
    (418, "of-a-newer-service", errors.StatusError),
]


@pytest.mark.parametrize("status,code,kind", CLASSES)
def test_a_problem_has_its_class(status: int, code: str, kind: type[errors.StatusError], ask: Ask) -> None:
    with pytest.raises(errors.StatusError) as caught:
        ask(Script(problem(status, code)), "bodies", tries=1)
    assert type(caught.value) is kind


def test_an_error_holds_all_that_is_known(ask: Ask) -> None:
    with pytest.raises(errors.InvalidRequest) as caught:
        ask(Script(problem(400, "invalid-request")), "bodies")
    error = caught.value
    assert error.request is not None
    assert error.response is not None
    assert (
        error.status,
        error.problem_code,
        [row.pointer for row in error.violations],
        error.request_id,
        error.request.path,
        error.response.status,
    ) == (400, "invalid-request", ["/vehicle/name"], "abc", "/v1/bodies", 400)


@pytest.mark.usefixtures("pauses")
def test_a_page_of_a_proxy_in_place_of_a_problem_has_its_status(ask: Ask) -> None:
    page = httpx2.Response(504, content=b"<html>gateway</html>", headers={"X-Request-Id": "abc"})
    with pytest.raises(errors.ServerFault) as caught:
        ask(Script(page), "bodies", tries=1)
    assert (caught.value.status, caught.value.request_id) == (504, "abc")


def test_a_header_that_httpx_does_not_know_arrives(ask: Ask) -> None:
    answer = ask(Script(httpx2.Response(200, content=BODIES, headers={"ETag": '"1"'})), "call", "list_bodies")
    assert answer.headers["etag"] == '"1"'


def test_a_token_is_sent(ask: Ask) -> None:
    script = Script(good())
    ask(script, "bodies", token=TOKEN)
    assert script.asked[0].headers["authorization"] == f"Bearer {TOKEN}"


def test_without_a_token_none_is_sent(ask: Ask) -> None:
    script = Script(good())
    ask(script, "bodies")
    assert "authorization" not in script.asked[0].headers


@pytest.mark.usefixtures("pauses")
@pytest.mark.parametrize(
    "scene",
    [401, 403, 500, httpx2.ConnectError("refused"), httpx2.ReadTimeout("late")],
    ids=repr,
)
def test_no_error_tells_the_token(scene: Any, ask: Ask) -> None:
    with pytest.raises(errors.ClientError) as caught:
        ask(Script(*[scene] * 2), "bodies", token=TOKEN, tries=2)
    told = [repr(caught.value), str(caught.value), repr(caught.value.request), repr(vars(caught.value))]
    assert TOKEN not in "".join(told)


@pytest.mark.parametrize(
    "address", ["http://elsewhere.test/v1/bodies", "https://burntally.test/v1/bodies", "//x.test/"]
)
def test_a_token_goes_to_no_other_address(address: str, ask: Ask) -> None:
    script = Script(httpx2.Response(307, headers={"Location": address}), good())
    with pytest.raises(errors.StatusError):
        ask(script, "bodies", token=TOKEN)
    assert len(script.asked) == 1


@pytest.mark.parametrize("token", ["", "two words", "line\nend", "ünsafe", "tab\t"], ids=repr)
def test_a_token_that_no_header_holds_is_refused_unquoted(token: str, ask: Ask) -> None:
    with pytest.raises(ValueError, match=r"^a token is of visible ASCII characters, without spaces$"):
        ask(Script(), "bodies", token=token)


def test_no_client_tells_its_token() -> None:
    with connect(URL, token=TOKEN) as client:
        assert TOKEN not in repr(client) + repr(vars(client)) + repr(vars(client)["_sender"])


def test_one_in_ten_requests_may_fail(ask: Ask, pauses: list[float]) -> None:
    """Five tries of a network that drops one request in ten leave one failure in 10^5."""
    dropped = httpx2.RemoteProtocolError("dropped")
    for number in range(50):
        scenes: list[httpx2.Response | Exception | int] = [dropped] * (number % 10 == 0)
        assert ask(Script(*scenes, good()), "bodies") == Bodies(bodies=[])
    assert len([pause for pause in pauses if pause > 0.0]) == 5


def test_a_trickled_answer_is_cut_off() -> None:
    """Each piece comes in time, and the whole does not."""

    def trickle() -> Iterator[bytes]:
        for _ in range(100):
            time.sleep(0.02)
            yield b" "

    with (
        connect(URL, transport=httpx2.MockTransport(lambda _: httpx2.Response(200, content=trickle()))) as client,
        pytest.raises(errors.TimedOut),
    ):
        client.bodies(timeout_s=0.1)


def test_a_trickled_answer_is_cut_off_for_an_event_loop_too() -> None:
    async def trickle() -> AsyncIterator[bytes]:
        for _ in range(100):
            await asyncio.sleep(0.02)
            yield b" "

    async def ask() -> None:
        network = httpx2.MockTransport(lambda _: httpx2.Response(200, content=trickle()))
        async with connect_async(URL, transport=network) as client:
            await client.bodies(timeout_s=0.1)

    with pytest.raises(errors.TimedOut):
        asyncio.run(ask())

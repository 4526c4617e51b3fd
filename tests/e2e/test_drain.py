"""A server that is told to stop under load answers or refuses everyone whom it has taken."""

import http.client
import signal
import threading
import time
from collections import Counter
from concurrent.futures import ThreadPoolExecutor

import msgspec

from burntally_service.api.examples import example_bytes
from tests.e2e.serving import Served, head_of, long_design, reply_of, rest_of, serving

SMALL = example_bytes("create_budget")
CALLERS = 8
STOP_AFTER_S = 1.0


def drive(served: Served, outcomes: Counter[str]) -> None:
    """Ask again and again until nobody listens any more."""
    connection = http.client.HTTPConnection("127.0.0.1", served.port, timeout=20)
    while True:
        try:
            connection.connect()
        except ConnectionRefusedError:
            return
        try:
            while connection.sock is not None:
                connection.request("POST", "/v1/budgets", body=SMALL, headers={"Content-Type": "application/json"})
                reply = reply_of(connection.getresponse())
                outcomes[f"{reply.status} {reply.code or ''}".strip()] += 1
        except (ConnectionError, http.client.HTTPException) as error:
            outcomes[repr(error)] += 1
        connection.close()


def stopped(served: Served) -> float:
    """Tell a server to stop, and wait; how long it took [s]."""
    begins = time.monotonic()
    served.process.send_signal(signal.SIGTERM)
    assert served.process.wait(timeout=12) == 0
    return time.monotonic() - begins


def test_under_load_nobody_is_lost() -> None:
    outcomes: Counter[str] = Counter()
    with serving() as served:
        callers = [threading.Thread(target=drive, args=(served, outcomes)) for _ in range(CALLERS)]
        for caller in callers:
            caller.start()
        time.sleep(STOP_AFTER_S)
        took = stopped(served)
        for caller in callers:
            caller.join()
    assert outcomes.pop("200") > 0
    assert outcomes == {}
    assert took < 10


def test_it_says_that_it_is_not_ready_while_it_serves_on() -> None:
    with serving() as served:
        # A connection that is open keeps it from stopping at once.
        connection = http.client.HTTPConnection("127.0.0.1", served.port, timeout=20)
        connection.connect()
        served.process.send_signal(signal.SIGTERM)
        time.sleep(0.2)
        connection.request("GET", "/readyz")
        reply = reply_of(connection.getresponse())
        assert (reply.status, reply.code, reply.headers["connection"]) == (503, "not-ready", "close")
        assert served.process.wait(timeout=12) == 0


def test_what_is_in_flight_is_finished() -> None:
    asked = long_design(legs=60, splits=1)
    with serving() as served, ThreadPoolExecutor(1) as callers:
        answer = callers.submit(served.ask, asked)
        time.sleep(0.5)
        took = stopped(served)
        assert answer.result().status == 200
    assert took < 10


def test_what_cannot_be_finished_is_refused() -> None:
    with serving(compute_timeout_s=60, drain_timeout_s=2) as served, ThreadPoolExecutor(1) as callers:
        answer = callers.submit(served.ask, long_design())
        time.sleep(1.0)
        took = stopped(served)
        reply = answer.result()
    assert (reply.status, reply.code) == (503, "not-ready")
    assert msgspec.json.decode(reply.content)["detail"]
    assert took < 5


def test_whose_body_is_still_on_its_way_is_refused() -> None:
    with serving(body_timeout_s=60, drain_timeout_s=1) as served, served.connect() as connection:
        connection.sendall(head_of(SMALL) + SMALL[:-10])
        time.sleep(0.2)
        stopped(served)
        head, _, body = rest_of(connection).partition(b"\r\n\r\n")
    assert head.startswith(b"HTTP/1.1 503")
    assert msgspec.json.decode(body)["code"] == "not-ready"

"""A real server that is told to stop has not failed."""

import http.client
import signal
import subprocess
import time
from contextlib import closing
from urllib.parse import urlsplit

from tests.e2e.conftest import url_of


def test_a_server_that_is_told_to_stop_ends_in_time_with_zero(process: subprocess.Popen[str]) -> None:
    with closing(http.client.HTTPConnection(urlsplit(url_of(process)).netloc, timeout=30)) as connection:
        connection.request("GET", "/healthz")
        connection.getresponse().read()
    asked_at = time.monotonic()
    process.send_signal(signal.SIGTERM)
    assert process.wait(timeout=10) == 0
    assert time.monotonic() - asked_at < 10

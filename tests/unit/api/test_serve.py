"""Serving: what an operator is told before the first request."""

import logging
import subprocess
import sys

import pytest

from burntally_service.api import serve
from burntally_service.api.settings import Settings
from burntally_service.api.tokens import Tokens

TOKENS = Tokens.read("an-invented-token")


@pytest.mark.parametrize(
    "settings,warnings",
    [
        (Settings(), 0),
        (Settings(host="::1"), 0),
        (Settings(host="192.0.2.7"), 1),
        (Settings(host="192.0.2.7", token=TOKENS), 0),
        (Settings(token=TOKENS), 0),
    ],
)
def test_whoever_listens_to_all_without_a_token_is_warned(
    settings: Settings, warnings: int, caplog: pytest.LogCaptureFixture
) -> None:
    with caplog.at_level(logging.WARNING, logger="burntally.serve"):
        serve._warn(settings)
    assert len([record for record in caplog.records if "BURNTALLY_TOKEN" in record.getMessage()]) == warnings


def test_a_stop_that_comes_before_the_server_has_begun_is_no_failure() -> None:
    code = (
        "import os, signal; from burntally_service.api import serve; "
        "serve.create_app = lambda _: os.kill(os.getpid(), signal.SIGTERM); serve.serve(port=0)"
    )
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0

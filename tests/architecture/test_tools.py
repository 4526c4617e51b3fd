"""Each tool that reads the code finds nothing to say."""

import sys
from collections.abc import Callable
from pathlib import Path


def test_ruff_has_no_finding(passes: Callable[..., None]) -> None:
    passes("ruff", "check", "--no-cache")


def test_the_code_is_formatted(passes: Callable[..., None]) -> None:
    passes("ruff", "format", "--check", "--no-cache")


def test_mypy_accepts_both_packages(passes: Callable[..., None]) -> None:
    passes("mypy", "sdk/src", "service/src")


def test_mypy_accepts_the_tests(passes: Callable[..., None]) -> None:
    passes("mypy", "tests")


def test_pyright_accepts_both_packages(passes: Callable[..., None]) -> None:
    passes("basedpyright", "--pythonpath", sys.executable)


def test_imports_run_downhill(passes: Callable[..., None]) -> None:
    passes("lint-imports", "--no-cache")


def test_the_image_file_has_no_finding(passes: Callable[..., None]) -> None:
    passes("hadolint", "docker/Dockerfile")


def test_the_compose_file_fits_its_schema(passes: Callable[..., None]) -> None:
    passes("check-jsonschema", "--builtin-schema", "vendor.compose-spec", "docker/compose.yaml")


def test_the_scripts_have_no_finding(passes: Callable[..., None], root: Path, tracked: list[Path]) -> None:
    scripts = [str(path) for path in tracked if (root / path).read_bytes().startswith(b"#!/usr/bin/env bash")]
    assert {"docker/build", ".ci/run", ".ci/release"} <= set(scripts)
    passes("shellcheck", *scripts)

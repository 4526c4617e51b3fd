"""One surface: the two clients offer the same, and the package names what it offers."""

import inspect
from typing import Any

import pytest

import burntally
from burntally.client import AsyncClient, Client, connect, connect_async, errors

METHODS = {name for name in vars(Client) if not name.startswith("_")}


def shape(function: Any) -> list[tuple[str, Any, Any]]:
    """Names, kinds and defaults: what a caller writes, whatever comes back."""
    return [(row.name, row.kind, row.default) for row in inspect.signature(function).parameters.values()]


def test_the_clients_have_the_same_methods() -> None:
    assert {name for name in vars(AsyncClient) if not name.startswith("_")} == METHODS


@pytest.mark.parametrize("name", sorted(METHODS))
def test_a_method_takes_the_same_in_both(name: str) -> None:
    assert shape(getattr(AsyncClient, name)) == shape(getattr(Client, name))


@pytest.mark.parametrize("name", sorted(METHODS))
def test_a_method_gives_the_same_in_both(name: str) -> None:
    both = [inspect.signature(getattr(kind, name)).return_annotation for kind in (AsyncClient, Client)]
    assert both[0] == both[1]


@pytest.mark.parametrize("name", sorted(METHODS))
def test_every_method_of_the_asynchronous_client_is_awaited(name: str) -> None:
    assert inspect.iscoroutinefunction(getattr(AsyncClient, name))


def test_connecting_takes_the_same_for_both() -> None:
    assert shape(connect_async) == shape(connect)


@pytest.mark.parametrize("name", burntally.__all__)
def test_the_package_has_what_it_names(name: str) -> None:
    assert getattr(burntally, name) is not None


def test_the_package_has_nothing_else() -> None:
    with pytest.raises(AttributeError):
        _ = burntally.nothing  # type: ignore[attr-defined]


@pytest.mark.parametrize("url", ["burntally.test", "ftp://burntally.test", ""])
def test_an_address_is_one_of_http(url: str) -> None:
    with pytest.raises(ValueError, match="http"):
        connect(url)


def test_every_problem_of_the_service_has_its_class() -> None:
    from burntally_service.api.problems import PROBLEMS

    kinds = [errors.status_error(code=problem.code, status=problem.status) for problem in PROBLEMS.values()]
    assert [kind.code for kind in kinds] == list(PROBLEMS)


def test_every_error_is_of_one_tree() -> None:
    kinds = [kind for kind in map(vars(errors).get, errors.__all__) if inspect.isclass(kind)]
    raised = [kind for kind in kinds if issubclass(kind, Exception)]
    assert all(issubclass(kind, errors.BurntallyError) for kind in raised)


def test_every_error_has_a_code_of_its_own() -> None:
    # The border's own errors share their codes with the client's, which stand for the same faults.
    kinds = [kind for name in errors.__all__ if inspect.isclass(kind := getattr(errors, name))]
    codes = [kind.code for kind in kinds if issubclass(kind, errors.ClientError)]
    assert len(codes) == len(set(codes))

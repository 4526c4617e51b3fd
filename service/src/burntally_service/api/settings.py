"""The settings of the service: read once from the environment, and checked where they are read."""

import os
from collections.abc import Callable, Mapping
from difflib import get_close_matches
from pathlib import Path
from typing import Annotated, Any, Final, Literal, cast

import msgspec
from msgspec import Meta, Struct, inspect

from burntally_service.api.callers import Networks
from burntally_service.api.tokens import Tokens

__all__ = ["PREFIX", "Settings", "SettingsError", "settings_from"]

PREFIX: Final = "BURNTALLY_"

_FILE: Final = "_FILE"
# What is never told again, whatever is wrong with it.
_SECRET: Final = frozenset({"token"})
_READERS: Final[dict[type, Callable[[str], object]]] = {Networks: Networks.read, Tokens: Tokens.read}


class SettingsError(ValueError):
    """A setting cannot be read; the message names its variable."""


class Settings(Struct, frozen=True, kw_only=True):
    """What an operator may choose; the variable of a field is its name in capitals behind ``BURNTALLY_``."""

    host: Annotated[str, Meta(min_length=1, max_length=255, description="Address to listen on.")] = "127.0.0.1"
    port: Annotated[int, Meta(ge=0, le=65535, description="Port to listen on; 0: any free one.")] = 8463
    max_body_bytes: Annotated[int, Meta(ge=1024, le=2**30, description="Largest request body.")] = 4 * 2**20
    body_timeout_s: Annotated[float, Meta(gt=0, le=3600, description="Longest that a body may take to arrive.")] = 8.0
    head_timeout_s: Annotated[
        float, Meta(gt=0, le=3600, description="Longest that the head of a request may take to arrive.")
    ] = 8.0
    compute_timeout_s: Annotated[
        float, Meta(gt=0, le=3600, description="Longest that a request may compute, and wait for its turn.")
    ] = 6.0
    drain_timeout_s: Annotated[
        float, Meta(ge=0, le=3600, description="Longest that a stopping server waits for requests in flight.")
    ] = 8.0
    workers: Annotated[
        int, Meta(ge=1, le=256, description="Processes for requests that compute long, started when first needed.")
    ] = 2
    most_waiting: Annotated[
        int, Meta(ge=0, le=10_000, description="Requests that may wait for a worker; more are refused.")
    ] = 16
    most_in_flight: Annotated[
        int, Meta(ge=1, le=100_000, description="Requests that may be in flight; more are refused.")
    ] = 64
    most_connections: Annotated[
        int, Meta(ge=1, le=1_000_000, description="Connections that may be open; more are refused.")
    ] = 768
    log_level: Annotated[
        Literal["critical", "error", "warning", "info", "debug"], Meta(description="Least severity that is logged.")
    ] = "info"
    log_format: Annotated[
        Literal["auto", "json", "text"], Meta(description="Form of the log; auto: text at a terminal, else JSON.")
    ] = "auto"
    metrics: Annotated[bool, Meta(description="Whether `/metrics` is there.")] = True
    token: Annotated[Tokens, Meta(description="Tokens that let a caller in, one a line; none: nobody is asked.")] = (
        Tokens()
    )
    rate_per_minute: Annotated[
        int, Meta(ge=0, le=1_000_000, description="Requests that a caller may make in a minute; 0: any number.")
    ] = 0
    trusted_proxies: Annotated[
        Networks,
        Meta(description="Addresses or networks of proxies whose `X-Forwarded-For` and `-Proto` are believed."),
    ] = Networks()


_INFO: Final = cast("inspect.StructType", inspect.type_info(Settings))
_NAMES: Final = [name.upper() for name in Settings.__struct_fields__]


def settings_from(environment: Mapping[str, str] | None = None, **flags: object) -> Settings:
    """Read the settings: a flag beats the environment, which beats the default.

    Parameters
    ----------
    environment
        Variables; None: the process's own. A variable that ends in ``_FILE`` names a file that holds the value.
    flags
        Fields that were given on the way in; None counts as not given.

    Returns
    -------
    Settings
        The settings.

    Raises
    ------
    SettingsError
        A value cannot be read, or a variable of our prefix is none of ours; the message names the variable. A
        mistyped name would otherwise leave a door open that its owner believes shut.
    """
    variables = os.environ if environment is None else environment
    _check_names(variables)
    given: dict[str, Any] = {name: value for name, value in flags.items() if value is not None}
    for name in Settings.__struct_fields__:
        if name not in given and (text := _text_of(PREFIX + name.upper(), variables)) is not None:
            given[name] = text
    for name, value in given.items():
        _check(name, value)
    return _converted(given)


def _check_names(variables: Mapping[str, str]) -> None:
    for variable in variables:
        name = variable.removeprefix(PREFIX).removesuffix(_FILE)
        if variable.startswith(PREFIX) and name not in _NAMES:
            near = get_close_matches(name.upper(), _NAMES, n=1)
            hint = f"; did you mean {PREFIX}{near[0]}?" if near else ""
            raise SettingsError(f"{variable}: there is no such setting{hint}")


def _text_of(variable: str, variables: Mapping[str, str]) -> str | None:
    path = variables.get(variable + _FILE)
    if path is None:
        return variables.get(variable)
    if variable in variables:
        raise SettingsError(f"{variable} and {variable}{_FILE} are both set; set one of them")
    try:
        return Path(path).read_text(encoding="utf-8").strip()
    except (OSError, UnicodeDecodeError) as error:
        raise SettingsError(f"{variable}{_FILE}: {path} cannot be read: {error}") from error


def _check(name: str, value: object) -> None:
    try:
        _converted({name: value})
    except msgspec.ValidationError as error:
        variable = f"{PREFIX}{name.upper()}"
        if name in _SECRET:
            # A reader of our own says what is wrong, without what was read.
            raise SettingsError(f"{variable}: {str(error).partition(' - at ')[0]}") from None
        raise SettingsError(f"{variable}: read {value!r}; expected {_wanted(name, error)}") from None


def _wanted(name: str, error: msgspec.ValidationError) -> str:
    """Say what a setting may be, in the words of the contract's own refusals."""
    kind = next(field.type for field in _INFO.fields if field.name == name)
    if isinstance(kind, inspect.Metadata):
        kind = kind.type
    match kind:
        case inspect.IntType(ge=least, le=most):
            return f"a whole number from {least} to {most}"
        case inspect.FloatType(gt=above, ge=least, le=most):
            return f"a number from {least} to {most}" if above is None else f"a number above {above}, to {most}"
        case inspect.LiteralType(values=values):
            return " or ".join(map(str, values))
        case inspect.BoolType():
            return "true or false"
        case inspect.StrType(min_length=shortest, max_length=longest):
            return f"text of {shortest} to {longest} characters"
        case _:
            return str(error).partition(" - at ")[0]


def _converted(given: dict[str, Any]) -> Settings:
    return msgspec.convert(given, Settings, strict=False, dec_hook=_read)


def _read(type_: type, value: object) -> object:
    """Read a value of a type of our own out of its text; what was made before is taken as it is."""
    return value if isinstance(value, type_) else _READERS[type_](str(value))

"""The settings of the service: read once from the environment, and checked where they are read."""

import os
from collections.abc import Mapping
from pathlib import Path
from typing import Annotated, Any, Final, Literal

import msgspec
from msgspec import Meta, Struct

__all__ = ["PREFIX", "Settings", "SettingsError", "settings_from"]

PREFIX: Final = "BURNTALLY_"


class SettingsError(ValueError):
    """A setting cannot be read; the message names its variable."""


class Settings(Struct, frozen=True, kw_only=True):
    """What an operator may choose; the variable of a field is its name in capitals behind ``BURNTALLY_``."""

    host: Annotated[str, Meta(min_length=1, max_length=255, description="Address to listen on.")] = "127.0.0.1"
    port: Annotated[int, Meta(ge=0, le=65535, description="Port to listen on; 0: any free one.")] = 8463
    max_body_bytes: Annotated[int, Meta(ge=1024, le=2**30, description="Largest request body.")] = 4 * 2**20
    body_timeout_s: Annotated[float, Meta(gt=0, le=3600, description="Longest that a body may take to arrive.")] = 8.0
    drain_timeout_s: Annotated[
        float, Meta(ge=0, le=3600, description="Longest that a stopping server waits for requests in flight.")
    ] = 8.0
    log_level: Annotated[
        Literal["critical", "error", "warning", "info", "debug"], Meta(description="Least severity that is logged.")
    ] = "info"


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
        A value cannot be read; the message names its variable.
    """
    variables = os.environ if environment is None else environment
    given: dict[str, Any] = {name: value for name, value in flags.items() if value is not None}
    for name in Settings.__struct_fields__:
        if name not in given and (text := _text_of(PREFIX + name.upper(), variables)) is not None:
            given[name] = text
    for name, value in given.items():
        _check(name, value)
    return msgspec.convert(given, Settings, strict=False)


def _text_of(variable: str, variables: Mapping[str, str]) -> str | None:
    path = variables.get(variable + "_FILE")
    if path is None:
        return variables.get(variable)
    if variable in variables:
        raise SettingsError(f"{variable} and {variable}_FILE are both set; set one of them")
    try:
        return Path(path).read_text(encoding="utf-8").strip()
    except (OSError, UnicodeDecodeError) as error:
        raise SettingsError(f"{variable}_FILE: {path} cannot be read: {error}") from error


def _check(name: str, value: object) -> None:
    try:
        msgspec.convert({name: value}, Settings, strict=False)
    except msgspec.ValidationError as error:
        raise SettingsError(f"{PREFIX}{name.upper()}: {value!r}: {error}") from error

"""Settings: where they come from, that a bad one names its variable, and that no secret is told."""

import re
from pathlib import Path
from typing import Any

import pytest

from burntally_service.api.callers import Networks
from burntally_service.api.settings import PREFIX, Settings, SettingsError, settings_from
from burntally_service.api.tokens import Tokens

README = Path(__file__).parents[3] / "service" / "README.md"
NAMES = Settings.__struct_fields__
SECRET = "a-secret-of-the-house"  # noqa: S105 - invented


def variable_of(name: str) -> str:
    return PREFIX + name.upper()


def documented() -> dict[str, str]:
    """Variables of the README's table, each with its default."""
    rows = re.findall(r"^\| `(BURNTALLY_\w+)` \| (.*?) \|", README.read_text(encoding="utf-8"), flags=re.MULTILINE)
    return {variable: default.strip("`") for variable, default in rows}


def told(default: Any) -> str:
    """A default as the README tells it."""
    if isinstance(default, tuple):
        return ", ".join(map(str, default))
    return f"{default:g}" if isinstance(default, float) else str(default).lower()


def test_without_a_word_the_defaults_hold() -> None:
    assert settings_from({}) == Settings()


def test_by_default_this_machine_alone_is_listened_to() -> None:
    assert Settings().host == "127.0.0.1"


def test_a_variable_is_read_as_what_the_setting_is() -> None:
    read = settings_from({"BURNTALLY_PORT": "9000", "BURNTALLY_BODY_TIMEOUT_S": "2.5", "BURNTALLY_LOG_LEVEL": "debug"})
    assert (read.port, read.body_timeout_s, read.log_level) == (9000, 2.5, "debug")


def test_a_switch_a_list_and_a_secret_are_read() -> None:
    read = settings_from(
        {"BURNTALLY_METRICS": "false", "BURNTALLY_TRUSTED_PROXIES": "10.0.0.0/8, ::1", "BURNTALLY_TOKEN": SECRET}
    )
    assert (read.metrics, read.trusted_proxies, read.token) == (
        False,
        Networks.read("10.0.0.0/8,::1"),
        Tokens.read(SECRET),
    )


def test_a_flag_beats_the_environment() -> None:
    assert settings_from({"BURNTALLY_PORT": "9000"}, port=9001, host=None) == Settings(port=9001)


@pytest.mark.parametrize(
    "name,value,told",
    [
        ("port", "abc", "read 'abc'; expected a whole number from 0 to 65535"),
        ("body_timeout_s", "0", "read '0'; expected a number above 0, to 3600"),
        ("drain_timeout_s", "8 s", "read '8 s'; expected a number from 0 to 3600"),
        ("log_format", "xml", "read 'xml'; expected auto or json or text"),
        ("metrics", "maybe", "read 'maybe'; expected true or false"),
        ("host", "", "read ''; expected text of 1 to 255 characters"),
    ],
)
def test_a_bad_value_is_told_with_what_was_expected(name: str, value: str, told: str) -> None:
    with pytest.raises(SettingsError) as caught:
        settings_from({variable_of(name): value})
    assert str(caught.value) == f"{variable_of(name)}: {told}"


@pytest.mark.parametrize("name", NAMES)
def test_every_value_may_stand_in_a_file(name: str, tmp_path: Path) -> None:
    values = {"log_level": "error", "log_format": "text", "metrics": "false", "token": SECRET, "host": "::1"}
    values |= {"trusted_proxies": "10.1.2.3", "max_body_bytes": "2048"}
    value = values.get(name, "7")
    (tmp_path / name).write_text(value + "\n", encoding="utf-8")
    read = settings_from({variable_of(name) + "_FILE": str(tmp_path / name)})
    assert read == settings_from({variable_of(name): value})
    assert read != Settings()


BAD: list[tuple[str, str]] = [
    ("host", ""),
    ("host", "a" * 256),
    ("port", "http"),
    ("port", "65536"),
    ("port", "-1"),
    ("port", ""),
    ("port", "8 0"),
    ("max_body_bytes", "10"),
    ("max_body_bytes", "4 MiB"),
    ("max_body_bytes", "4e9"),
    ("body_timeout_s", "0"),
    ("body_timeout_s", "nan"),
    ("body_timeout_s", "8 s"),
    ("head_timeout_s", "0"),
    ("compute_timeout_s", "0"),
    ("compute_timeout_s", "inf"),
    ("workers", "0"),
    ("most_waiting", "-1"),
    ("most_in_flight", "0"),
    ("most_connections", "0"),
    ("drain_timeout_s", "-1"),
    ("drain_timeout_s", "inf"),
    ("log_level", "loud"),
    ("log_level", "INFO "),
    ("log_format", "xml"),
    ("metrics", "maybe"),
    ("metrics", "on"),
    ("token", ""),
    ("token", "short"),
    ("token", "long enough but with spaces"),
    ("token", "long-enough-but-ünsafe"),
    ("token", f"{SECRET}\nshort"),
    ("rate_per_minute", "-1"),
    ("rate_per_minute", "1.5"),
    ("rate_per_minute", "plenty"),
    ("trusted_proxies", "10.0.0.1/8"),
    ("trusted_proxies", "proxy.example"),
    ("trusted_proxies", "*"),
]


@pytest.mark.parametrize("name,value", BAD)
def test_a_bad_value_names_its_variable(name: str, value: str) -> None:
    with pytest.raises(SettingsError, match=f"^{variable_of(name)}: "):
        settings_from({variable_of(name): value})


@pytest.mark.parametrize("name", NAMES)
def test_a_file_that_is_not_there_names_its_variable(name: str) -> None:
    with pytest.raises(SettingsError, match=f"^{variable_of(name)}_FILE: /nowhere/value "):
        settings_from({variable_of(name) + "_FILE": "/nowhere/value"})


@pytest.mark.parametrize("name", NAMES)
def test_a_value_and_its_file_are_one_too_many(name: str, tmp_path: Path) -> None:
    with pytest.raises(SettingsError, match=f"^{variable_of(name)} and {variable_of(name)}_FILE "):
        settings_from({variable_of(name): "7", variable_of(name) + "_FILE": str(tmp_path / name)})


@pytest.mark.parametrize(
    "variable,hint",
    [
        ("BURNTALLY_TOKENS", "BURNTALLY_TOKEN"),
        ("BURNTALLY_TOKENS_FILE", "BURNTALLY_TOKEN"),
        ("BURNTALLY_RATE_LIMIT_PER_MINUTE", "BURNTALLY_RATE_PER_MINUTE"),
        ("BURNTALLY_port", "BURNTALLY_PORT"),
    ],
)
def test_a_variable_that_is_none_of_ours_is_told_the_nearest(variable: str, hint: str) -> None:
    with pytest.raises(SettingsError, match=rf"^{variable}: .* did you mean {hint}\?$"):
        settings_from({variable: "7"})


def test_a_variable_that_is_like_none_of_ours_is_refused_too() -> None:
    with pytest.raises(SettingsError, match=r"^BURNTALLY_ZZZ: there is no such setting$"):
        settings_from({"BURNTALLY_ZZZ": "7"})


def test_what_others_read_is_left_alone() -> None:
    assert settings_from({"PATH": "x", "BURNTALLYPORT": "7"}) == Settings()


@pytest.mark.parametrize(
    "value", [SECRET + " ", f"{SECRET}\nshort", f"x {SECRET}", f"{SECRET}\n{SECRET[:12]} {SECRET}"]
)
def test_a_bad_secret_is_not_told(value: str) -> None:
    try:
        read = repr(settings_from({"BURNTALLY_TOKEN": value}))
    except SettingsError as error:
        read = f"{error!r} {error.__cause__!r}"
    assert SECRET not in read


def test_settings_that_are_printed_tell_no_secret() -> None:
    assert SECRET not in f"{settings_from({'BURNTALLY_TOKEN': SECRET})!r}"


def test_the_process_is_asked_where_nothing_is_given(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("BURNTALLY_PORT", "9003")
    assert settings_from().port == 9003


def test_a_dimensional_setting_ends_in_its_unit() -> None:
    plain = {"host", "port", "log_level", "log_format", "metrics", "token", "trusted_proxies"}
    plain |= {"workers", "most_waiting", "most_in_flight", "most_connections"}
    units = ("_s", "_bytes", "_per_minute")
    assert [name for name in NAMES if name not in plain and not name.endswith(units)] == []


def test_every_setting_is_documented_with_its_default() -> None:
    assert documented() == {variable_of(name): told(getattr(Settings(), name)) for name in NAMES}


def test_every_setting_has_a_bad_value_above() -> None:
    assert {name for name, _ in BAD} == set(NAMES)

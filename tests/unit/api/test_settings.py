from pathlib import Path

import pytest

from burntally_service.api.settings import Settings, SettingsError, settings_from


def test_without_a_word_the_defaults_hold() -> None:
    assert settings_from({}) == Settings()


def test_by_default_this_machine_alone_is_listened_to() -> None:
    assert Settings().host == "127.0.0.1"


def test_a_variable_is_read_as_what_the_setting_is() -> None:
    read = settings_from({"BURNTALLY_PORT": "9000", "BURNTALLY_BODY_TIMEOUT_S": "2.5", "BURNTALLY_LOG_LEVEL": "debug"})
    assert (read.port, read.body_timeout_s, read.log_level) == (9000, 2.5, "debug")


def test_a_flag_beats_the_environment() -> None:
    assert settings_from({"BURNTALLY_PORT": "9000"}, port=9001, host=None) == Settings(port=9001)


def test_a_value_may_stand_in_a_file(tmp_path: Path) -> None:
    file = tmp_path / "port"
    file.write_text("9002\n", encoding="utf-8")
    assert settings_from({"BURNTALLY_PORT_FILE": str(file)}).port == 9002


@pytest.mark.parametrize(
    "variable,value",
    [
        ("BURNTALLY_PORT", "http"),
        ("BURNTALLY_PORT", "65536"),
        ("BURNTALLY_HOST", ""),
        ("BURNTALLY_MAX_BODY_BYTES", "10"),
        ("BURNTALLY_BODY_TIMEOUT_S", "0"),
        ("BURNTALLY_BODY_TIMEOUT_S", "nan"),
        ("BURNTALLY_DRAIN_TIMEOUT_S", "-1"),
        ("BURNTALLY_LOG_LEVEL", "loud"),
        ("BURNTALLY_PORT_FILE", "/nowhere/port"),
    ],
)
def test_a_bad_value_names_its_variable(variable: str, value: str) -> None:
    with pytest.raises(SettingsError, match=variable):
        settings_from({variable: value})


def test_a_value_and_its_file_are_one_too_many(tmp_path: Path) -> None:
    with pytest.raises(SettingsError, match="BURNTALLY_PORT_FILE"):
        settings_from({"BURNTALLY_PORT": "9000", "BURNTALLY_PORT_FILE": str(tmp_path / "port")})


def test_the_process_is_asked_where_nothing_is_given(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("BURNTALLY_PORT", "9003")
    assert settings_from().port == 9003


def test_a_dimensional_setting_ends_in_its_unit() -> None:
    plain = {"host", "port", "log_level"}
    assert all(name.endswith(("_s", "_bytes")) for name in set(Settings.__struct_fields__) - plain)

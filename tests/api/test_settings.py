"""Settings: read once from the environment, wrong ones named."""

import pytest
from pydantic import ValidationError

from forebay.settings import Settings, SettingsError


def test_defaults_need_no_environment():
    settings = Settings.from_environment({})
    assert settings.host == "127.0.0.1"
    assert settings.workers >= 1


def test_environment_sets_them():
    variables = {
        "FOREBAY_PORT": "9000",
        "FOREBAY_DEADLINE": "2.5",
        "FOREBAY_CORS_ORIGINS": "https://a, https://b",
        "PATH": "/",
    }
    settings = Settings.from_environment(variables)
    assert (settings.port, settings.deadline) == (9000, 2.5)
    assert settings.cors_origins == ("https://a", "https://b")


@pytest.mark.parametrize(
    ("name", "value"),
    [
        ("PORT", "eighty"),
        ("PORT", "70000"),
        ("WORKERS", "0"),
        ("DEADLINE", "0"),
        ("MAX_BODY", "-1"),
        ("QUEUE", "many"),
        ("ROOT_PATH", "no-slash"),
        ("HOTS", "127.0.0.1"),
    ],
)
def test_wrong_setting_is_named(name, value):
    with pytest.raises(SettingsError, match=f"FOREBAY_{name}: "):
        Settings.from_environment({f"FOREBAY_{name}": value})


def test_settings_do_not_change():
    with pytest.raises(ValidationError):
        Settings().port = 1  # type: ignore[misc]

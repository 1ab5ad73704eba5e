"""Settings: read once from the environment, wrong ones named."""

import pytest
from fastapi import FastAPI
from opentelemetry import trace
from pydantic import ValidationError
from starlette.testclient import TestClient

from forebay.app import create_app
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
        ("TOKENS", "short"),
        ("TOKENS", "with a space in it"),
        ("TOKENS_FILE", "/no/such/file"),
        ("WORKER_MEMORY", "1"),
        ("DRAIN", "-1"),
    ],
)
def test_wrong_setting_is_named(name, value):
    with pytest.raises(SettingsError, match=f"FOREBAY_{name}: ") as raised:
        Settings.from_environment({f"FOREBAY_{name}": value})
    assert value not in str(raised.value) or name != "TOKENS"


class Recorder:
    """Stands for a tracer provider that somebody has configured."""

    def __init__(self):
        self.asked = 0

    def get_tracer(self, *_arguments, **_options):
        self.asked += 1
        return trace.NoOpTracer()


@pytest.mark.parametrize(("make", "asked"), [(FastAPI, 1), (lambda: create_app(Settings(workers=1)), 0)])
def test_nothing_is_told_to_a_tracer(make, asked, monkeypatch):
    # the framework alone would tell it, as the first of the two shows
    recorder = Recorder()
    monkeypatch.setattr("fastapi.telemetry._asgi.trace.get_tracer_provider", lambda: recorder)
    monkeypatch.setenv("FASTAPI_OTEL_AUTO_CONFIGURE", "true" if asked == 0 else "")
    TestClient(make()).get("/livez")
    assert min(recorder.asked, 1) == asked


def test_settings_do_not_change():
    with pytest.raises(ValidationError):
        Settings().port = 1  # type: ignore[misc]


TOKEN = "a-token-of-sixteen"  # noqa: S105  (of nothing)


@pytest.mark.parametrize("host", ["127.0.0.1", "127.9.9.9", "::1", "localhost"])
def test_loopback_needs_no_token(host):
    Settings().check_access(host)


EVERYWHERE = "0.0.0.0"  # noqa: S104  (nothing listens)


@pytest.mark.parametrize("host", [EVERYWHERE, "::", "192.168.1.5", "intake.example"])
def test_address_that_others_reach_needs_a_token_or_a_word(host, tmp_path):
    with pytest.raises(SettingsError, match="no token is asked for"):
        Settings().check_access(host)
    Settings(anonymous=True).check_access(host)
    Settings(tokens=(TOKEN,)).check_access(host)
    (tmp_path / "tokens").write_text(TOKEN, encoding="utf-8")
    Settings(tokens_file=tmp_path / "tokens").check_access(host)


def test_tokens_are_not_shown():
    assert TOKEN not in repr(Settings(tokens=(TOKEN,)))

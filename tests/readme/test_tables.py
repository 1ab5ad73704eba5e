"""The tables of the README agree with the program."""

import pytest

from forebay.cli import build_parser
from forebay.settings import PREFIX, Settings
from support.readme import rows

SETTINGS = {row[0]: row for row in rows("Settings")}


def test_settings_table_names_every_setting():
    assert set(SETTINGS) == {PREFIX + name.upper() for name in Settings.model_fields}


@pytest.mark.parametrize(
    "name", [name for name, field in Settings.model_fields.items() if field.default_factory is None]
)
def test_settings_table_gives_the_default(name):
    default = Settings.model_fields[name].default
    text = ",".join(default) if isinstance(default, tuple) else str(default).lower()
    assert SETTINGS[PREFIX + name.upper()][1] == (text or "(none)")


def test_commands_table_names_every_command():
    (commands,) = [set(action.choices) for action in build_parser()._actions if action.choices is not None]
    assert {row[0].split()[1] for row in rows("Commands")} == commands

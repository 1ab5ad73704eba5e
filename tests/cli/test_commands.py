"""The commands: what they print, what they return, what they say when a file is wrong."""

import json

import pytest

from forebay.cli import WRONG_REQUEST, build_parser, main
from support.tree import ROOT

DEMO = ROOT / "service" / "forebay" / "demo" / "layout.json"


def written(folder, content):
    path = folder / "site.json"
    path.write_text(content if isinstance(content, str) else json.dumps(content), encoding="utf-8")
    return path


def demo_layout(**changes):
    return {**json.loads(DEMO.read_text(encoding="utf-8")), **changes}


def test_assess_prints_the_table(capsys):
    assert main(["assess", str(DEMO)]) == 0
    text = capsys.readouterr().out
    for part in (
        "station screens",
        "town intake",
        "farm intake",
        "STAGNATION POINTS",
        "WARNINGS",
        "CAUTIONS",
    ):
        assert part in text


def test_assess_takes_the_body_of_an_assessment(tmp_path, capsys):
    body = {"layout": demo_layout(), "transects": [{"name": "weir", "polyline": [[-150, 0], [-150, 110]]}]}
    assert main(["assess", str(written(tmp_path, body))]) == 0
    (line,) = [line for line in capsys.readouterr().out.splitlines() if line.strip().startswith("weir")]
    # depth 4 m x width 110 m x 0.07 m/s
    assert "30.8" in line


@pytest.mark.parametrize(
    ("content", "reason"),
    [
        ("{not json", "not JSON"),
        ("[1, 2]", "a JSON object was expected"),
        (demo_layout(depth=0), "#/layout/depth"),
        (demo_layout(depht=4), "#/layout/depht"),
        (demo_layout(shore={"kind": "fjord"}), "#/layout/shore"),
        ({"layout": demo_layout(), "transect": []}, "#/transect"),
    ],
    ids=["broken", "list", "no-depth", "misspelt", "unknown-shore", "unknown-field"],
)
def test_assess_says_what_is_wrong(content, reason, tmp_path, capsys):
    path = written(tmp_path, content)
    assert main(["assess", str(path)]) == WRONG_REQUEST
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith(str(path))
    assert reason in captured.err


def test_assess_points_at_an_element_on_land(tmp_path, capsys):
    layout = demo_layout()
    layout["elements"][2]["at"] = [190, 140]
    assert main(["assess", str(written(tmp_path, layout))]) == WRONG_REQUEST
    assert "#/layout/elements/2/at" in capsys.readouterr().err


def test_assess_misses_a_file_politely(tmp_path, capsys):
    assert main(["assess", str(tmp_path / "none.json")]) == WRONG_REQUEST
    assert "No such file" in capsys.readouterr().err


def test_openapi_prints_the_committed_document(capsys):
    assert main(["openapi"]) == 0
    assert capsys.readouterr().out == (ROOT / "openapi" / "openapi.json").read_text(encoding="utf-8")


def test_a_wrong_setting_stops_with_a_sentence(monkeypatch, capsys):
    monkeypatch.setenv("FOREBAY_PORT", "harbour")
    assert main(["serve"]) == WRONG_REQUEST
    assert "FOREBAY_PORT" in capsys.readouterr().err


@pytest.mark.parametrize(
    "arguments", [[], ["fly"], ["serve", "--port", "x"]], ids=["none", "unknown", "no-number"]
)
def test_wrong_command_lines_end_with_two(arguments):
    with pytest.raises(SystemExit) as ending:
        main(arguments)
    assert ending.value.code == WRONG_REQUEST


def test_serve_takes_host_and_port(monkeypatch):
    seen: dict[str, object] = {}
    monkeypatch.setattr(
        "forebay.server.Server.run", lambda self: seen.update(host=self.config.host, port=self.config.port)
    )
    assert main(["serve", "--host", "127.0.0.2", "--port", "9000"]) == 0
    assert (seen["host"], seen["port"]) == ("127.0.0.2", 9000)


def test_demo_leaves_its_picture_in_the_current_folder():
    assert str(build_parser().parse_args(["demo"]).output) == "demo-output"

"""A general linter finds nothing in the contract, under its strictest published rules."""

from support.node import CLIENTS, needs_node, run_node
from support.tree import ROOT


@needs_node
def test_contract_is_clean():
    document = str(ROOT / "openapi" / "openapi.json")
    report = run_node(
        "redocly", "lint", "--config", "redocly.yaml", "--format=stylish", document, folder=CLIENTS
    )
    assert "problem" not in report


@needs_node
def test_linter_can_complain(tmp_path):
    document = tmp_path / "openapi.json"
    document.write_text(
        '{"openapi": "3.1.0", "info": {"title": "x", "version": "1"}, "paths": {}}', encoding="utf-8"
    )
    try:
        run_node("redocly", "lint", "--config", "redocly.yaml", str(document), folder=CLIENTS)
    except AssertionError:
        return
    raise AssertionError("a document without servers and licence was accepted")

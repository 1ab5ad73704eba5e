"""Two general linters find nothing in the contract, not even a hint, under their published rules."""

import pytest

from support.node import CLIENTS, needs_node, run_node
from support.tree import ROOT

pytestmark = needs_node

CONTRACT = ROOT / "openapi" / "openapi.json"

LINTERS = {
    "redocly": ("lint", "--config", "redocly.yaml", "--format=stylish"),
    "spectral": ("lint", "--ruleset", "spectral.yaml", "--fail-severity=hint"),
}
"""Arguments of each linter, before the document."""


def lint(linter, document):
    """Report of a linter that finds nothing; an AssertionError holds that of one that does."""
    return run_node(linter, *LINTERS[linter], str(document), folder=CLIENTS)


@pytest.mark.parametrize("linter", LINTERS)
def test_contract_is_clean(linter):
    assert "problem" not in lint(linter, CONTRACT)


@pytest.mark.parametrize("linter", LINTERS)
def test_linter_can_complain(linter, tmp_path):
    document = tmp_path / "openapi.json"
    # it says neither where it is served nor under which licence or by whom
    document.write_text(
        '{"openapi": "3.1.0", "info": {"title": "x", "version": "1"}, "paths": {}}', encoding="utf-8"
    )
    with pytest.raises(AssertionError, match="problem"):
        lint(linter, document)

"""What every file owes to its reader: docstrings, one thing per workflow, no output, no loose ends."""

import ast
import re

import pytest

from support.tree import PACKAGE, modules, relative, syntax, written_files

PRINTING = {PACKAGE / "cli.py", *(PACKAGE / "demo").glob("*.py")}
"""Files of the command line, the only part that writes to the terminal."""

BANNED_NAMES = {"utils", "helpers", "manager", "base", "misc"}

TREE_ONLY = {
    "a package registry's host": re.compile(
        r"py[p]i\.org|pyt[h]onhosted|np[m]js|jsde[l]ivr|unp[k]g|regi[s]try\.npm"
    ),
    "a path of one machine": re.compile(r"/(?:work|home|root|Users)/\w+"),
    "a folder beside the repository": re.compile(r"\.\./shar[e]d"),
    "a marker of unfinished work": re.compile(r"\b(?:TO[D]O|FIX[M]E|XX[X])\b"),
}
"""What no file may name, written so that the patterns do not find themselves."""

PUBLISHED = modules("flow", "workflows", "charts")


def public(tree: ast.Module) -> list[ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef]:
    kinds = ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef
    return [node for node in tree.body if isinstance(node, kinds) and not node.name.startswith("_")]


@pytest.mark.parametrize("path", modules(), ids=relative)
def test_module_says_what_it_is_for(path):
    assert ast.get_docstring(syntax(path))


@pytest.mark.parametrize("path", PUBLISHED, ids=relative)
def test_public_names_have_docstrings(path):
    silent = [node.name for node in public(syntax(path)) if not ast.get_docstring(node)]
    assert not silent


@pytest.mark.parametrize("path", PUBLISHED, ids=relative)
def test_public_functions_are_typed(path):
    untyped = [
        node.name
        for node in public(syntax(path))
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef) and node.returns is None
    ]
    assert not untyped


@pytest.mark.parametrize("path", [p for p in modules("workflows") if p.name != "__init__.py"], ids=relative)
def test_workflow_has_one_public_function(path):
    functions = [node.name for node in public(syntax(path)) if isinstance(node, ast.FunctionDef)]
    assert len(functions) == 1


@pytest.mark.parametrize("path", [p for p in modules() if p not in PRINTING], ids=relative)
def test_nothing_prints(path):
    calls = [
        node.lineno
        for node in ast.walk(syntax(path))
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == "print"
    ]
    assert not calls


@pytest.mark.parametrize("path", modules(), ids=relative)
def test_no_exception_is_swallowed(path):
    empty = [
        node.lineno
        for node in ast.walk(syntax(path))
        if isinstance(node, ast.ExceptHandler) and all(isinstance(step, ast.Pass) for step in node.body)
    ]
    assert not empty


@pytest.mark.parametrize("path", modules(), ids=relative)
def test_name_says_what_is_inside(path):
    assert path.stem not in BANNED_NAMES


@pytest.mark.parametrize("path", written_files(), ids=relative)
def test_file_stands_alone(path):
    text = path.read_text(encoding="utf-8")
    found = {what: match.group() for what, pattern in TREE_ONLY.items() if (match := pattern.search(text))}
    assert not found

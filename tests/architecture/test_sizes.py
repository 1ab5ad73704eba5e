"""Nothing gets long: modules, functions, handlers, parameter lists."""

import ast
from collections.abc import Iterator

import pytest

from support.tree import modules, relative, syntax

MODULE_LINES = 400
FUNCTION_LINES = 50
HANDLER_LINES = 7
PARAMETERS = 6

Function = ast.FunctionDef | ast.AsyncFunctionDef


def functions(tree: ast.AST) -> Iterator[Function]:
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            yield node


def body_lines(function: Function) -> int:
    """Lines from the first statement after the docstring to the last."""
    body = function.body[1:] if ast.get_docstring(function, clean=False) is not None else function.body
    if not body:
        return 0
    return (body[-1].end_lineno or body[-1].lineno) - body[0].lineno + 1


def is_handler(function: Function) -> bool:
    """Whether a router serves a function."""
    targets = [node.func for node in function.decorator_list if isinstance(node, ast.Call)]
    return any(
        isinstance(target, ast.Attribute)
        and isinstance(target.value, ast.Name)
        and target.value.id == "router"
        for target in targets
    )


@pytest.mark.parametrize("path", modules(), ids=relative)
def test_module_is_short(path):
    assert len(path.read_text(encoding="utf-8").splitlines()) <= MODULE_LINES


@pytest.mark.parametrize("path", modules(), ids=relative)
def test_functions_are_short(path):
    long = {f.name: body_lines(f) for f in functions(syntax(path)) if body_lines(f) > FUNCTION_LINES}
    assert not long


@pytest.mark.parametrize("path", modules("api"), ids=relative)
def test_handlers_only_pass_on(path):
    long = {
        f.name: body_lines(f)
        for f in functions(syntax(path))
        if is_handler(f) and body_lines(f) > HANDLER_LINES
    }
    assert not long


@pytest.mark.parametrize("path", modules("flow", "trade", "charts", "workflows"), ids=relative)
def test_parameter_lists_are_short(path):
    long = {}
    for function in functions(syntax(path)):
        names = [*function.args.posonlyargs, *function.args.args, *function.args.kwonlyargs]
        count = len([name for name in names if name.arg not in {"self", "cls"}])
        if count > PARAMETERS and not is_compiled(function):
            long[function.name] = count
    assert not long


def is_compiled(function: Function) -> bool:
    """Whether a function is a compiled loop, which takes arrays one by one since it cannot take objects."""
    return any("njit" in ast.unparse(decorator) for decorator in function.decorator_list)

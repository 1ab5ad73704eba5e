"""Arrows point inwards only: cli -> app -> api -> workflows -> charts -> trade -> flow."""

import ast
import sys
from graphlib import TopologicalSorter

import pytest

from support.tree import imports, module_name, modules, relative, syntax

LAYERS = ("flow", "trade", "charts", "workflows", "api", "app", "cli")
"""From the inside out; a module imports from its own layer and from those before it."""

OUTERMOST = {"__main__", "assess", "demo", "report", "server"}
"""Parts of the command line that have files of their own."""

THIRD_PARTY = {
    "flow": {"numpy", "scipy", "numba"},
    "trade": {"numpy", "scipy", "gsw", "pyproj", "shapely"},
    "charts": {"numpy", "scipy", "matplotlib", "contourpy"},
    "workflows": {"numpy", "scipy"},
}
"""What the layers without HTTP may import from outside; the layers above are free."""

LEAVES = {"settings"}
"""Modules that import nothing of ours and may be imported from `api` outwards."""

FILES = modules()


def layer_of(name: str) -> str:
    """Layer of a dotted name in the package; the package itself, which holds the version, counts as `api`."""
    parts = name.split(".")
    part = parts[1] if len(parts) > 1 else "api"
    if part in OUTERMOST:
        return "cli"
    return "api" if part in LEAVES or part not in LAYERS else part


def ours(names: set[str]) -> set[str]:
    return {name for name in names if name.split(".")[0] == "forebay"}


@pytest.mark.parametrize("path", FILES, ids=relative)
def test_imports_point_inwards(path):
    here = layer_of(module_name(path))
    outward = {
        name for name in ours(imports(syntax(path))) if LAYERS.index(layer_of(name)) > LAYERS.index(here)
    }
    assert not outward, f"{relative(path)} ({here}) imports outwards: {sorted(outward)}"


@pytest.mark.parametrize("path", modules(*THIRD_PARTY), ids=relative)
def test_inner_layers_import_only_their_libraries(path):
    layer = layer_of(module_name(path))
    allowed = THIRD_PARTY[layer] | set(sys.stdlib_module_names) | {"forebay"}
    foreign = {name for name in imports(syntax(path)) if name.split(".")[0] not in allowed}
    assert not foreign, (
        f"{relative(path)} imports {sorted(foreign)}; {layer} may use {sorted(THIRD_PARTY[layer])}"
    )


@pytest.mark.parametrize("path", FILES, ids=relative)
def test_imports_are_absolute(path):
    relative_imports = [
        node.lineno for node in ast.walk(syntax(path)) if isinstance(node, ast.ImportFrom) and node.level > 0
    ]
    assert not relative_imports


def import_graph() -> dict[str, set[str]]:
    """Modules that each module needs in order to be imported (imports inside functions left out)."""
    names = {module_name(path) for path in FILES}
    return {
        module_name(path): needed_at_import(syntax(path)) & names - {module_name(path)}
        for path in FILES
        if path.name != "__init__.py"
    }


def needed_at_import(tree: ast.Module) -> set[str]:
    top = [node for node in tree.body if isinstance(node, (ast.Import, ast.ImportFrom))]
    return ours(imports(ast.Module(body=list(top), type_ignores=[])))


def depths(graph: dict[str, set[str]]) -> dict[str, int]:
    """Length of the longest chain of imports downwards from each module; a cycle raises CycleError."""
    found: dict[str, int] = {}
    for name in TopologicalSorter(graph).static_order():
        found[name] = 1 + max((found[needed] for needed in graph.get(name, ())), default=0)
    return found


def within(layer: str, graph: dict[str, set[str]]) -> dict[str, set[str]]:
    """Part of the import graph inside one layer."""
    inside = {name for name in graph if layer_of(name) == layer}
    return {name: graph[name] & inside for name in inside}


def test_imports_have_no_cycle():
    assert set(depths(import_graph())) >= set(import_graph())


DEEPER = {"flow": 23, "api": 13}
"""Longest chains of the layers that hold several storeys.

flow : maps, poles, solved walls and what they join, up to the model (13); the algorithms that stand on it
and what surrounds them (18); what is made of several: where water comes from, what becomes of a spill (23)
api : problems and what an answer carries (6), encoders and the operation that uses them (8), the routes and
the assessment, which asks other routes (12), and the registry of all of them (13)
"""


@pytest.mark.parametrize("layer", LAYERS)
def test_layer_is_shallow(layer):
    chains = depths(within(layer, import_graph()))
    assert max(chains.values()) <= DEEPER.get(layer, 10), max(chains, key=chains.__getitem__)


def test_layers_are_all_there():
    seen = {layer_of(module_name(path)) for path in FILES}
    assert seen == set(LAYERS)

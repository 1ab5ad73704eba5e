"""The repository as files, for tests about the code itself."""

import ast
from functools import cache
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "service" / "forebay"

GENERATED = {"__pycache__", "build", "dist", "htmlcov", "demo-output", "node_modules"}


def modules(*layers: str) -> list[Path]:
    """Python files of the package, or of some of its folders, in a stable order."""
    folders = [PACKAGE / layer for layer in layers] or [PACKAGE]
    return sorted(path for folder in folders for path in folder.rglob("*.py"))


def module_name(path: Path) -> str:
    """Dotted name under which a file is imported."""
    parts = path.relative_to(PACKAGE.parent).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def relative(path: Path) -> str:
    """Name of a file in a test's id."""
    return path.relative_to(ROOT).as_posix()


@cache
def syntax(path: Path) -> ast.Module:
    """Syntax tree of a file."""
    return ast.parse(path.read_text(encoding="utf-8"), filename=str(path))


def imports(tree: ast.AST) -> set[str]:
    """Dotted names that a syntax tree imports, wherever it does; relative imports do not occur here."""
    names: set[str] = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            names.update(alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module is not None:
            names.add(node.module)
            names.update(f"{node.module}.{alias.name}" for alias in node.names)
    return names


def written_files() -> list[Path]:
    """Every text file that people wrote: no hidden folders but .ci, nothing generated, no vendored pages."""
    found = []
    for path in ROOT.rglob("*"):
        parts = path.relative_to(ROOT).parts
        hidden = any(part.startswith(".") and part != ".ci" for part in parts[:-1])
        made = any(part in GENERATED or part.endswith(".egg-info") for part in parts)
        vendored = parts[:4] == ("service", "forebay", "api", "pages")
        if path.is_file() and not (hidden or made or vendored) and is_text(path):
            found.append(path)
    return sorted(found)


def is_text(path: Path) -> bool:
    """Whether a file holds text: no NUL byte near its beginning."""
    return b"\0" not in path.read_bytes()[:4096]

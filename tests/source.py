"""The source of the project as the tests on its form read it: files, imports, circles."""

import ast
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent


@dataclass(frozen=True)
class Import:
    """One imported name and where it stands."""

    importer: str
    imported: str
    name: str
    path: Path
    line: int
    is_relative: bool = False

    @property
    def place(self) -> str:
        """File and line, as a person looks it up."""
        return f"{self.path.name}:{self.line} ({self.importer})"


def modules(package: Path) -> dict[str, Path]:
    """Every module below a package's folder, by its dotted name."""
    found = {}
    for path in sorted(package.rglob("*.py")):
        parts = path.relative_to(package.parent).with_suffix("").parts
        found[".".join(parts[:-1] if parts[-1] == "__init__" else parts)] = path
    return found


def imports(package: Path) -> list[Import]:
    """Every import of every module below a package's folder, wherever in the module it stands."""
    known = modules(package)
    return [found for name, path in known.items() for found in _imports_of(name, path, known)]


def _imports_of(module: str, path: Path, known: dict[str, Path]) -> Iterator[Import]:
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            for alias in node.names:
                yield Import(module, alias.name, "", path, node.lineno)
        elif isinstance(node, ast.ImportFrom):
            for alias in node.names:
                whole = f"{node.module}.{alias.name}"
                imported = whole if whole in known else node.module or ""
                yield Import(module, imported, alias.name, path, node.lineno, node.level > 0)


def circles(edges: dict[str, set[str]]) -> list[list[str]]:
    """Groups of modules that lead back to themselves through what they import (Tarjan 1972)."""
    order: dict[str, int] = {}
    low: dict[str, int] = {}
    stack: list[str] = []
    found: list[list[str]] = []

    def visit(node: str) -> None:
        order[node] = low[node] = len(order)
        stack.append(node)
        for target in sorted(edges.get(node, ())):
            if target not in order:
                visit(target)
                low[node] = min(low[node], low[target])
            elif target in stack:
                low[node] = min(low[node], order[target])
        if low[node] == order[node]:
            group = stack[stack.index(node) :]
            del stack[stack.index(node) :]
            if len(group) > 1 or node in edges.get(node, ()):
                found.append(sorted(group))

    for node in sorted(edges):
        if node not in order:
            visit(node)
    return found

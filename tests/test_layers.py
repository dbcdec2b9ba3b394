"""The layering, read from the imports themselves.

Every import counts, also one inside a function: a layer is crossed whenever it runs.
"""

from __future__ import annotations

import ast
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
PACKAGE = ROOT / "lpview"

OUTER = ("lpview.__main__", "lpview.cli", "lpview.progress")
OUTER_PACKAGES = ("lpview.commands", "lpview.options", "lpview.report", "lpview.screen")
"""What talks to people. Every other module is numeric, a new one too."""

RUNTIME = {"numpy", "scipy", "highspy", "textual", "rich"}
"""What is installed with the package; rich is the part of textual that draws lines."""

TOP_LEVEL = {"README.md", "DEVELOPERS.md", "pyproject.toml", "lpview", "tests", "models"}
BUILD_PRODUCTS = {"build", "dist", "lpview.egg-info"}


def module_name(path: Path, root: Path = ROOT) -> str:
    parts = path.relative_to(root).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def imported(source: str, module: str, is_package: bool = False) -> set[str]:
    """Full names that a module imports; ``from a import b`` counts as ``a`` and ``a.b``."""
    names: set[str] = set()
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = node.module or ""
            if node.level:
                parts = module.split(".")
                stem = parts[: len(parts) - node.level + is_package]
                base = ".".join([*stem, *([node.module] if node.module else [])])
            names |= {base, *(f"{base}.{alias.name}" for alias in node.names)}
    return names


def imports_of(path: Path) -> set[str]:
    source = path.read_text(encoding="utf-8")
    return imported(source, module_name(path), path.name == "__init__.py")


IMPORTS = {module_name(path): imports_of(path) for path in sorted(PACKAGE.rglob("*.py"))}


def within(name: str, *packages: str) -> bool:
    return any(name == package or name.startswith(package + ".") for package in packages)


def is_outer(module: str) -> bool:
    return module in OUTER or within(module, *OUTER_PACKAGES)


def reach(*modules: str) -> set[str]:
    """Everything that running these modules may import, theirs and others'."""
    seen: set[str] = set()
    left = list(modules)
    while left:
        module = left.pop()
        if module in seen:
            continue
        seen.add(module)
        left += _with_parents(IMPORTS.get(module, set()))
    return seen


def _with_parents(names: set[str]) -> Iterator[str]:
    """Importing ``a.b.c`` runs ``a`` and ``a.b`` first."""
    for name in names:
        parts = name.split(".")
        yield from (".".join(parts[:end]) for end in range(1, len(parts) + 1))


def test_every_form_of_import_is_read() -> None:
    source = """
import a.b as c
from . import near
from ..up import one
from pkg.mod import two
def later():
    from textual.app import App
    import highspy
"""
    assert imported(source, "lpview.report.json") == {
        "a.b",
        "lpview.report", "lpview.report.near",
        "lpview.up", "lpview.up.one",
        "pkg.mod", "pkg.mod.two",
        "textual.app", "textual.app.App",
        "highspy",
    }  # fmt: skip
    assert "lpview.blocks.cells" in imported("from . import cells", "lpview.blocks", True)


def test_the_package_was_read() -> None:
    """Guards the tests below against passing on nothing."""
    assert {"lpview", "lpview.kkt", "lpview.blocks", "lpview.report.json"} <= set(IMPORTS)
    assert "lpview.accurate" in IMPORTS["lpview.kkt"]
    assert {"lpview.blocks.cells", "lpview.decimals", "numpy"} <= reach("lpview.blocks")


def test_only_the_solver_module_imports_the_solver() -> None:
    users = {
        module for module, names in IMPORTS.items() if any(within(n, "highspy") for n in names)
    }
    files = ("highs", "mps_file", "once", "warm")
    assert users == {f"lpview.solver.{file}" for file in files}


def test_only_the_screen_imports_the_terminal_library() -> None:
    users = {
        module
        for module, names in IMPORTS.items()
        if any(within(n, "textual", "rich") for n in names)
    }
    assert not {module for module in users if not within(module, "lpview.screen")}


@pytest.mark.parametrize("module", [module for module in IMPORTS if not is_outer(module)])
def test_a_numeric_module_never_imports_what_talks_to_people(module: str) -> None:
    assert not {name for name in reach(module) if is_outer(name) or within(name, "textual")}


@pytest.mark.parametrize("module", ["lpview.kkt", "lpview.verdict", "lpview.marks"])
def test_the_check_knows_no_solver(module: str) -> None:
    solvers = ("lpview.solver", "lpview.run", "highspy", "scipy.optimize")
    assert not {name for name in reach(module) if within(name, *solvers)}


def test_the_dual_is_algebra_only() -> None:
    solvers = ("lpview.solver", "lpview.run", "highspy", "scipy.optimize")
    assert not {name for name in reach("lpview.dual") if within(name, *solvers)}


def test_reports_never_reach_the_solver_module() -> None:
    reports = [module for module in IMPORTS if within(module, "lpview.report")]
    assert not {name for name in reach(*reports) if within(name, "lpview.solver", "highspy")}


def test_an_examination_takes_its_solver_as_an_argument() -> None:
    assert not {name for name in reach("lpview.examination") if within(name, "lpview.solver")}


def test_blocks_know_what_they_read_only() -> None:
    own = {
        name for module in IMPORTS if within(module, "lpview.blocks") for name in IMPORTS[module]
    }
    ours = {name for name in own if within(name, "lpview")}
    allowed = (
        *("lpview.blocks", "lpview.model", "lpview.decimals"),
        *("lpview.reading", "lpview.labels", "lpview.given"),
    )
    assert not {name for name in ours if not within(name, *allowed)}


def test_the_screen_is_opened_by_the_command_line_alone() -> None:
    users = {
        module
        for module, names in IMPORTS.items()
        if any(within(name, "lpview.screen") for name in names)
    }
    assert not {m for m in users - {"lpview.cli"} if not within(m, "lpview.screen")}


def test_nothing_is_imported_that_is_not_a_runtime_dependency() -> None:
    tops = {name.split(".")[0] for names in IMPORTS.values() for name in names}
    assert not tops - RUNTIME - {"lpview"} - set(sys.stdlib_module_names)


MODEL = """[c],maximize
column,cost
x,1
[A]
row,column,coefficient
r,x,2
[b]
row,relation,rhs
r,<=,3
"""

RUN = """
import sys
from lpview.cli import main
status = main(["check", sys.argv[1], "--format", sys.argv[2]])
assert "highspy" in sys.modules
print(status, *sorted(m for m in sys.modules if m.split(".")[0] in ("textual", "rich")))
"""


def printed_last(*command: str) -> str:
    done = subprocess.run(
        [sys.executable, "-c", *command], cwd=ROOT, capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stderr
    return done.stdout.splitlines()[-1]


@pytest.mark.parametrize("form", ["text", "markdown", "json"])
def test_check_never_loads_the_terminal_library(form: str, tmp_path: Path) -> None:
    model = tmp_path / "model.csv"
    model.write_text(MODEL, encoding="utf-8")
    assert printed_last(RUN, str(model), form) == "0"


def test_the_check_is_imported_without_solver_and_screen() -> None:
    code = """
import sys, lpview.commands.check, lpview.report.check, lpview.report.json, lpview.report.markdown
print("loaded", *sorted({"textual", "rich", "highspy"} & sys.modules.keys()))
"""
    assert printed_last(code) == "loaded"


def top_level() -> set[str]:
    """Names at the top of the repository; without git those that no build left behind."""
    listed = subprocess.run(
        ["git", "ls-files", "-z"], cwd=ROOT, capture_output=True, text=True, check=False
    )
    names = {name.split("/")[0] for name in listed.stdout.split("\0") if name}
    return names or {path.name for path in ROOT.iterdir()} - BUILD_PRODUCTS


def test_the_top_level_holds_nothing_else() -> None:
    found = {name for name in top_level() if not name.startswith(".") and name != "__pycache__"}
    assert found - TOP_LEVEL == set()
    assert {"pyproject.toml", "lpview"} <= found

"""The house: who may import whom, and where each heavy dependency lives."""

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import surfdisp

PACKAGE = Path(surfdisp.__file__).parent
TESTS = Path(__file__).parents[1]

MAY_IMPORT = {
    "core": set(),
    "kernels": set(),
    "earth": {"core", "kernels"},
    "records": {"core"},
    "project": {"core"},
    "site": {"core"},
    "dispersion": {"core", "kernels"},
    "inversion": {"core", "earth"},
    "survey": {"core", "records", "dispersion", "earth", "inversion", "site", "project"},
    "report": {"core", "project", "site", "earth"},
}
MAY_IMPORT["cli"] = set(MAY_IMPORT)

HOME_OF = {
    "numba": {"kernels"},
    "obspy": {"records"},
    "h5py": {"project"},
    "matplotlib": {"report"},
    "typst": {"report"},
    "pydantic": {"survey"},
    "typer": {"cli"},
    "rich": {"cli"},
}

HEAVY = ("numba", "scipy", "obspy", "matplotlib", "h5py", "pydantic")


def imports_of(path: Path) -> set[tuple[str, ...]]:
    """Every import in the file, lazy ones included, as absolute dotted names split at the dots."""
    here = ("surfdisp", *path.relative_to(PACKAGE).with_suffix("").parts)
    found = set()
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.Import):
            found |= {tuple(alias.name.split(".")) for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = here[: -node.level] if node.level else ()
            module = (*base, *(node.module.split(".") if node.module else ()))
            found |= {(*module, alias.name) for alias in node.names}
    return found


def sources():
    return sorted(path for path in PACKAGE.rglob("*.py") if path.parent != PACKAGE)


@pytest.mark.parametrize("path", sources(), ids=lambda p: str(p.relative_to(PACKAGE)))
def test_imports_between_folders_follow_the_table(path):
    folder = path.relative_to(PACKAGE).parts[0]
    ours = {name[1] for name in imports_of(path) if name[0] == "surfdisp" and len(name) > 1}
    ours &= set(MAY_IMPORT)
    assert ours - {folder} <= MAY_IMPORT[folder]


@pytest.mark.parametrize("path", sources(), ids=lambda p: str(p.relative_to(PACKAGE)))
def test_heavy_dependencies_are_imported_only_at_home(path):
    folder = path.relative_to(PACKAGE).parts[0]
    strays = {name[0] for name in imports_of(path) if folder not in HOME_OF.get(name[0], {folder})}
    assert not strays


def test_every_folder_of_the_package_is_in_the_table():
    folders = {path.name for path in PACKAGE.iterdir() if path.is_dir() and path.name != "__pycache__"}
    assert folders == set(MAY_IMPORT)


@pytest.mark.parametrize("command", ["import surfdisp", "from surfdisp.core import LayeredEarth"])
def test_import_loads_nothing_heavy(command):
    code = f"import sys; {command}; print([name for name in {HEAVY!r} if name in sys.modules])"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


@pytest.mark.parametrize("path", sorted(TESTS.rglob("test_*.py")), ids=lambda p: str(p.relative_to(TESTS)))
def test_every_test_function_asserts_something(path):
    tree = ast.parse(path.read_text())
    functions = {node.name: node for node in ast.walk(tree) if isinstance(node, ast.FunctionDef)}
    checking = {name for name, node in functions.items() if asserts(node, set())}
    for _ in functions:  # helpers that assert may call helpers that assert
        checking |= {name for name, node in functions.items() if asserts(node, checking)}
    idle = [name for name in functions if name.startswith("test") and name not in checking]
    assert not idle


def asserts(function: ast.FunctionDef, checking: set[str]) -> bool:
    """Whether the function has an assert, an assert_* call, raises or warns, or calls one that does."""
    for node in ast.walk(function):
        if isinstance(node, ast.Assert):
            return True
        if isinstance(node, ast.Call):
            callee = node.func
            name = callee.attr if isinstance(callee, ast.Attribute) else getattr(callee, "id", "")
            if name.startswith("assert_") or name in {"raises", "warns"} or name in checking:
                return True
    return False

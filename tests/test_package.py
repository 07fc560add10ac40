"""The package as a whole: light to import, complete, honest about its errors."""

from __future__ import annotations

import ast
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

import knought as kn

ROOT = Path(__file__).parent.parent
SOURCES = sorted(Path(kn.__file__).parent.rglob("*.py"))


def test_importing_the_package_loads_nothing_heavy() -> None:
    heavy = ("numpy", "scipy", "pandas", "matplotlib", "lmfit", "pydantic", "openpyxl", "jinja2")
    code = f"import sys, knought; print([m for m in {heavy!r} if m in sys.modules])"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_the_help_loads_nothing_heavy() -> None:
    heavy = ("numpy", "scipy", "pandas", "matplotlib", "lmfit", "pydantic")
    code = (
        "import sys; from knought.cli import main\n"
        "try:\n    main(['--help'])\nexcept SystemExit:\n    pass\n"
        f"print([m for m in {heavy!r} if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip().endswith("[]")


def test_a_fit_from_python_does_without_scipy_stats_pandas_and_matplotlib() -> None:
    code = (
        "import sys, knought as kn\n"
        "kn.assess(kn.RateTable.from_arrays([288.15, 298.15, 308.15], [1.0, 2.1, 4.0]))\n"
        "print([m for m in ('scipy.stats', 'pandas', 'matplotlib', 'lmfit') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


@pytest.mark.parametrize("name", kn.__all__)
def test_every_public_name_is_there_and_documented(name: str) -> None:
    found = getattr(kn, name)
    assert isinstance(found, str) or (found.__doc__ and len(found.__doc__) > 20)
    assert name in dir(kn)


def test_a_name_that_is_not_there_says_so() -> None:
    with pytest.raises(AttributeError, match="no attribute 'fitt'"):
        kn.fitt  # noqa: B018


def test_the_version_stands_in_one_place_twice_the_same() -> None:
    if not (ROOT / "pyproject.toml").exists():
        pytest.skip("the tests run without the source tree")
    declared = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]["version"]
    assert kn.__version__ == declared


def public_functions(tree: ast.Module) -> list[ast.FunctionDef]:
    """Functions of a module and methods of its public classes whose names are public."""
    found = []
    for node in tree.body:
        if isinstance(node, ast.FunctionDef):
            found.append(node)
        elif isinstance(node, ast.ClassDef) and not node.name.startswith("_"):
            found += [each for each in node.body if isinstance(each, ast.FunctionDef)]
    return [each for each in found if not each.name.startswith("_")]


@pytest.mark.parametrize("path", SOURCES, ids=lambda path: path.stem)
def test_public_functions_that_raise_say_so(path: Path) -> None:
    """Every public function or method with a ``raise`` of its own has a Raises section."""
    missing = []
    for node in public_functions(ast.parse(path.read_text(encoding="utf-8"))):
        raised = [each for each in ast.walk(node) if isinstance(each, ast.Raise) and each.exc]
        if raised and "Raises\n" not in (ast.get_docstring(node) or ""):
            missing.append(node.name)
    assert not missing


@pytest.mark.parametrize("path", SOURCES, ids=lambda path: path.stem)
def test_modules_stay_within_four_hundred_lines(path: Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 400


def test_no_module_evaluates_text_or_unpickles() -> None:
    for path in SOURCES:
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and isinstance(node.func, ast.Name):
                assert node.func.id not in {"eval", "exec"}, path
            if isinstance(node, ast.Import | ast.ImportFrom):
                names = [alias.name for alias in node.names]
                assert "pickle" not in names, path

"""Imports point down: cli, web, records, counsel, optics, then errors and resources; third parties by layer."""

import ast
import sys
from pathlib import Path

import pytest

import advisor

PACKAGE = Path(advisor.__file__).parent
ORDER = ["__main__", "cli", "commands", "web", "records", "counsel", "optics", "resources", "errors"]
THIRD_PARTIES = {
    "__main__": set(),
    "cli": {"click"},
    "commands": {"click", "tqdm"},
    "web": {"flask", "werkzeug", "jinja2", "markupsafe", "babel", "weasyprint", "PIL", "cheroot", "pydantic"},
    "records": {"sqlalchemy", "alembic", "platformdirs"},
    "counsel": {"numpy", "pydantic", "pydantic_core", "tomlkit"},
    "optics": {"numpy"},
    "resources": set(),
    "errors": set(),
}
MODULES = sorted(PACKAGE.rglob("*.py"))


def layer_of(module: Path) -> str:
    first = module.relative_to(PACKAGE).parts[0]
    return first.removesuffix(".py")


def imported(module: Path) -> set[str]:
    names: set[str] = set()
    for node in ast.walk(ast.parse(module.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{module} uses a relative import"
            assert node.module is not None
            names |= {f"{node.module}.{alias.name}" for alias in node.names}
    return names


def test_every_module_belongs_to_a_layer() -> None:
    assert len(MODULES) > 20
    assert {layer_of(module) for module in MODULES} - {"__init__"} <= set(ORDER)


@pytest.mark.parametrize("module", MODULES, ids=lambda path: str(path.relative_to(PACKAGE)))
def test_a_module_imports_only_from_its_layer_and_below(module: Path) -> None:
    layer = layer_of(module)
    for name in imported(module):
        parts = name.split(".")
        if parts[0] == "advisor":
            if parts[1] in ORDER:
                assert layer != "__init__", f"{module.name} imports {name}"
                assert ORDER.index(parts[1]) >= ORDER.index(layer), f"{layer} imports {name}, which stands above it"
            else:
                assert parts[1] == "__version__", f"{name} belongs to no layer"
        elif parts[0] not in sys.stdlib_module_names and layer != "__init__":
            assert parts[0] in THIRD_PARTIES[layer], f"{layer} must not import {parts[0]}"


@pytest.mark.parametrize(("party", "only"), [("weasyprint", "pdf.py"), ("PIL", "logo.py")])
def test_what_is_slow_to_load_is_imported_in_one_module_only_and_when_first_used(party: str, only: str) -> None:
    importers = [module for module in MODULES if any(name.split(".")[0] == party for name in imported(module))]
    assert [module.name for module in importers] == [only]
    top_level = ast.parse(importers[0].read_text(encoding="utf-8")).body
    assert not [n for n in top_level if isinstance(n, ast.Import | ast.ImportFrom) and party in ast.unparse(n)]

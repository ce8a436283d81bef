"""Imports point one way, so that physics can be read and used without files or figures."""

import ast
from pathlib import Path

import pytest

import strata

PACKAGE = Path(strata.__file__).parent

SMALL = {"errors", "ranges", "compiled", "constants", "species", "randomness"}
PHYSICS = {"water", "gas", "lake", "column", "plant"}
DERIVED = {"gradients", "margins", "variables", "limits", "results"}

#: Room or module -> the rooms and modules it may import, besides itself.
ALLOWED = {
    "errors": set(),
    "caution": set(),
    "constants": set(),
    "compiled": set(),
    "randomness": set(),
    "ranges": {"errors"},
    "species": {"constants", "errors", "ranges"},
    "water": SMALL,
    "gas": SMALL | {"water"},
    "lake": SMALL | {"water", "gas", "randomness"},
    "column": SMALL | {"water", "gas", "lake"},
    "plant": SMALL | {"water", "gas", "lake.site"},
    "gradients": SMALL | {"water"},
    "variables": SMALL,
    "margins": SMALL | {"water", "gas", "lake", "column", "gradients"},
    "limits": SMALL | {"margins"},
    "results": SMALL
    | {
        "caution",
        "gradients",
        "margins",
        "variables",
        "water",
        "lake",
        "plant.plan",
    },
    "clock": SMALL,
    "fingerprint": SMALL,
    "checkpoint": SMALL | {"results"},
    "coupling": SMALL | PHYSICS | {"clock"},
    "projection": SMALL
    | PHYSICS
    | {"checkpoint", "clock", "coupling", "fingerprint", "results"},
    "inputs": SMALL | PHYSICS | {"fingerprint", "limits", "margins", "gradients"},
    "studies": SMALL | PHYSICS | DERIVED | {"clock", "coupling", "projection"},
    "report": SMALL | PHYSICS | DERIVED | {"caution"},
    "cli": SMALL | DERIVED | {"caution", "inputs", "projection", "studies", "report"},
    "__main__": {"cli"},
}
#: Third-party packages that belong to one room alone.
AT_HOME = {
    "matplotlib": {"report"},
    "jinja2": {"report"},
    "pydantic": {"inputs"},
    "pydantic_core": {"inputs"},
    "click": {"cli"},
    "netCDF4": {"results"},
    "numba": {"compiled"},
    "xarray": DERIVED | {"projection", "studies", "report", "cli"},
}
#: Modules that touch files or the network; physics does without.
FILES = {
    "pathlib",
    "os",
    "io",
    "tempfile",
    "shutil",
    "csv",
    "json",
    "tomllib",
    "socket",
    "urllib",
}

MODULES = sorted(PACKAGE.rglob("*.py"))


def name_of(path):
    parts = path.relative_to(PACKAGE).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def imports_of(path):
    """Return the dotted names a module imports, wherever in it the import stands."""
    found = set()
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: imports are absolute"
            found |= {f"{node.module}.{alias.name}" for alias in node.names}
    return found


def rooms_of(path):
    """Return what a module imports of the package, without the package's own name."""
    inner = (name.split(".", 1) for name in imports_of(path) if name.startswith("strata."))
    return {tail for _, tail in inner}


def covered(name, allowed):
    return any(name == room or name.startswith(room + ".") for room in allowed)


@pytest.mark.parametrize("path", [p for p in MODULES if name_of(p)], ids=name_of)
def test_a_module_imports_only_what_its_room_may_know(path):
    room = name_of(path).split(".")[0]
    allowed = ALLOWED[room] | {room, "__version__"}
    strangers = sorted(name for name in rooms_of(path) if not covered(name, allowed))
    assert strangers == [], f"{room} may not import {strangers}"


@pytest.mark.parametrize("path", MODULES, ids=lambda p: name_of(p) or "strata")
def test_a_third_party_package_stays_in_its_room(path):
    room = name_of(path).split(".")[0]
    guests = {name.split(".")[0] for name in imports_of(path)}
    assert {g for g in guests & set(AT_HOME) if room not in AT_HOME[g]} == set()


@pytest.mark.parametrize(
    "path", [p for p in MODULES if name_of(p).split(".")[0] in PHYSICS], ids=name_of
)
def test_physics_touches_no_file(path):
    assert {name.split(".")[0] for name in imports_of(path)} & FILES == set()
    calls = [node.func for node in ast.walk(ast.parse(path.read_text()))
             if isinstance(node, ast.Call)]  # fmt: skip
    assert not [call for call in calls if isinstance(call, ast.Name) and call.id == "open"]


def test_every_room_is_in_the_table():
    rooms = {name_of(path).split(".")[0] for path in MODULES} - {""}
    assert rooms <= set(ALLOWED)


def test_the_package_itself_imports_nothing_until_a_name_is_used():
    tree = ast.parse((PACKAGE / "__init__.py").read_text())
    at_once = [node for node in tree.body if isinstance(node, ast.Import | ast.ImportFrom)]
    assert at_once == []


def test_the_table_catches_a_wrong_arrow(tmp_path):
    wrong = tmp_path / "wrong.py"
    wrong.write_text("def late():\n    from strata.plant.operate import operate\n")
    assert rooms_of(wrong) == {"plant.operate.operate"}
    assert not covered("plant.operate.operate", ALLOWED["column"])
    assert not covered("lake.basin.Basin", ALLOWED["plant"])
    assert covered("lake.site.Lake", ALLOWED["plant"])

"""The order of the house: data goes one way, and imports go with it."""

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
# A module imports only from what stands before it here (and from its own room).
ORDER = (
    "errors",
    "estimate",
    "units",
    "channels",
    "case",
    "tables",
    "logs",
    "well",
    "mechanics",
    "rig",
    "loads",
    "friction",
    "replay",
    "episodes",
    "findings",
    "report",
    "exports",
)
MODULES = sorted((ROOT / "forensics").rglob("*.py"))
JOBS = sorted((ROOT / "pipelines").rglob("*.py"))


def imported(path):
    """Give the dotted names a module imports, wherever in it the import stands."""
    names = []
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names += [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: relative import"
            names += [f"{node.module}.{alias.name}" for alias in node.names]
    return names


def room(path):
    """Give the room of a module of the library: its folder, or its own name beside the folders."""
    parts = path.relative_to(ROOT / "forensics").with_suffix("").parts
    return parts[0]


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_imports_only_what_stands_above(path):
    own = room(path)
    if own == "__init__":
        assert imported(path) == []
        return
    above = set(ORDER[: ORDER.index(own) + 1])
    for name in imported(path):
        top, _, rest = name.partition(".")
        assert top != "pipelines", f"{path} imports {name}: the library never imports the jobs"
        if top == "forensics" and rest != "__version__":
            assert rest.partition(".")[0] in above, f"{path} imports {name}, which stands below it"


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_library_prints_nothing_and_writes_only_in_two_rooms(path):
    tree = ast.parse(path.read_text(encoding="utf-8"))
    for node in ast.walk(tree):
        if not isinstance(node, ast.Call):
            continue
        called = node.func.attr if isinstance(node.func, ast.Attribute) else getattr(node.func, "id", "")
        assert called != "print", f"{path}:{node.lineno} prints"
        if room(path) not in {"report", "exports"}:
            assert called not in {"write_text", "write_bytes", "savefig", "to_csv", "write_table"}, (
                f"{path}:{node.lineno} writes a file"
            )


@pytest.mark.parametrize("path", MODULES + JOBS, ids=lambda p: str(p.relative_to(ROOT)))
def test_modules_fit_a_screenful_of_ideas(path):
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 400


def test_every_room_is_in_the_order():
    rooms = {room(path) for path in MODULES} - {"__init__"}
    assert rooms <= set(ORDER)

"""The rules of the house that a machine can check: who imports whom, how long a file is, what lies where."""

import ast
import re
import subprocess
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest
from packaging.requirements import Requirement

ROOT = Path(__file__).resolve().parent.parent
SOURCES = sorted([*ROOT.glob("service/**/*.py"), *ROOT.glob("diagrams/**/*.py"), *ROOT.glob("tests/**/*.py")])
WEB = {"fastapi", "starlette", "uvicorn", "httpx", "anyio"}
WEB_FILES = {"__main__", "app", "middleware", "problems", "docs_page"}
TOP_LEVEL = {
    "README.md", "DEVELOPERS.md", "CHANGELOG.md", "LICENSE", "openapi-notes.md", "pyproject.toml",
    "service", "diagrams", "tests", "docker",
}  # fmt: skip
MOST_LINES = 300

# The layers of diagrams/, lowest first; a file may import from its own layer and those below.
LAYERS = [
    {"elements", "units", "sources", "errors", "tolerances", "reference"},
    {"gibbs", "tie", "events", "equilibrium", "trace"},
    {
        "diagram",
        "linework",
        "reactions",
        "close",
        "borders",
        "section",
        "fillers",
        "alloy_text",
        "alloys",
        "density",
    },
    {
        "comparison",
        "files",
        "many",
        "sections",
        "solidification",
        "questions",
        "figure",
        "figure_labels",
        "figure_mark",
        "figure_scales",
        "figure_sheet",
        "figure_style",
        "melting_figure",
    },
    {"fitting", "from_parameters", "from_points", "rebuild"},  # make what is stored; not needed to answer
]


def imports(path: Path) -> Iterator[str]:
    """Yield the full names of the modules a file imports, wherever in the file."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: write imports in full"
            yield from (f"{node.module}.{alias.name}" for alias in node.names)


def tracked() -> list[Path]:
    """Return the files under version control, or all that are not ignored where there is no history."""
    command = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
    listed = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True).stdout
    return [ROOT / line for line in listed.splitlines() if (ROOT / line).is_file()]


def layer_of(module: str) -> int | None:
    """Return the layer of `diagrams.<name>…`, None for the package itself."""
    parts = module.split(".")
    if len(parts) < 2:
        return None
    return next((rank for rank, names in enumerate(LAYERS) if parts[1] in names), None)


def relative(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


@pytest.mark.parametrize("path", SOURCES, ids=relative)
def test_no_source_file_is_too_long(path):
    assert len(path.read_text(encoding="utf-8").splitlines()) <= MOST_LINES


@pytest.mark.parametrize("path", sorted(ROOT.glob("diagrams/**/*.py")), ids=relative)
def test_the_metallurgy_knows_no_web_and_imports_downwards(path):
    found = set(imports(path))
    assert not {name.split(".")[0] for name in found} & (WEB | {"service", "pydantic"})
    own = layer_of(".".join(path.relative_to(ROOT).with_suffix("").parts))
    if path.parent == ROOT / "diagrams" and path.stem != "__init__":
        assert own is not None, f"{path.stem} stands in no layer; put it into LAYERS"
    for name in found:
        rank = layer_of(name) if name.startswith("diagrams.") else None
        assert rank is None or own is None or rank <= own, f"{relative(path)} imports {name} from above"


@pytest.mark.parametrize("path", sorted(ROOT.glob("service/**/*.py")), ids=relative)
def test_web_imports_stay_where_the_web_is(path):
    local = path.relative_to(ROOT / "service")
    may = local.parts[0] == "routes" or (len(local.parts) == 1 and local.stem in WEB_FILES)
    found = {name.split(".")[0] for name in imports(path)} & WEB
    assert may or not found, f"{relative(path)} imports {sorted(found)}"


@pytest.mark.parametrize("path", sorted(ROOT.glob("service/**/*.py")), ids=relative)
def test_the_service_imports_one_way(path):
    parts = path.relative_to(ROOT / "service").with_suffix("").parts
    above = {
        "schemas": ("routes", "process", "records", "app", "middleware", "problems", "docs_page"),
        "process": ("routes", "records", "app", "middleware", "problems", "docs_page"),
        "records": ("routes", "app", "middleware", "problems", "docs_page"),
        "routes": ("app", "middleware"),
    }.get(parts[0], ("app",) if parts[0] != "__main__" else ())
    for name in imports(path):
        pieces = name.split(".")
        assert pieces[0] != "service" or len(pieces) < 2 or pieces[1] not in above, f"{parts} imports {name}"


def test_no_import_goes_in_a_circle():
    modules = {
        ".".join(p.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__"): p for p in SOURCES
    }
    needs = {
        name: {m for found in imports(path) for m in (found, found.rpartition(".")[0]) if m in modules}
        - {name}
        for name, path in modules.items()
    }
    while leaves := {name for name, wanted in needs.items() if not wanted}:
        needs = {name: wanted - leaves for name, wanted in needs.items() if name not in leaves}
    assert not needs, f"in a circle: {sorted(needs)}"


def test_the_top_level_is_fixed():
    top = {path.relative_to(ROOT).parts[0] for path in tracked()}
    assert {name for name in top if not name.startswith(".")} <= TOP_LEVEL
    assert {"pyproject.toml", "LICENSE", "service", "diagrams", "tests", "docker"} <= top
    assert not list(ROOT.glob("**/utils.py")) or all(
        ".venv" in path.parts for path in ROOT.glob("**/utils.py")
    )


def forbidden() -> list[re.Pattern[str]]:
    """Return what no file may hold, written so that this file does not hold it either."""
    hosts = [
        "pypi" + r"\.org",
        "pythonhosted" + r"\.org",
        "npmjs" + r"\.(?:org|com)",
        "deb" + r"\.debian\.org",
    ]
    places = [
        "/" + "work/",
        "/" + "tmp/",
        "/" + "root/",
        "/" + "home/",
        r"\.\./" + "shared",
        "brief" + r"\.md",
    ]
    return [re.compile(text) for text in hosts + places]


def test_no_file_names_a_registry_or_a_place_on_some_machine():
    own_folders = re.compile(r"MPLCONFIGDIR=/" + "tmp|WORKDIR /" + "tmp")
    for path in tracked():
        if "swagger-ui-" in relative(path):
            continue  # the work of others, shipped unchanged
        text = path.read_text(encoding="utf-8")
        for pattern in forbidden():
            for line in text.splitlines():
                assert not pattern.search(line) or own_folders.search(line), (
                    f"{relative(path)}: {line.strip()}"
                )


def test_lock_files_hold_no_addresses_and_agree():
    pins = {}
    for name in ("docker/requirements.lock", "tests/requirements.lock"):
        text = (ROOT / name).read_text(encoding="utf-8")
        assert "://" not in text
        pins[name] = set(re.findall(r"^([a-z0-9-]+==[^ ]+(?: ; [^\\]+)?)", text, re.MULTILINE))
    assert len(pins["docker/requirements.lock"]) > 20
    assert pins["docker/requirements.lock"] <= pins["tests/requirements.lock"]


def test_lock_files_answer_to_what_the_project_asks_for():
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    extras = project["optional-dependencies"]
    for name, wanted in (
        ("docker/requirements.lock", [*project["dependencies"], *extras["build"]]),
        ("tests/requirements.lock", [*project["dependencies"], *extras["build"], *extras["test"]]),
    ):
        text = (ROOT / name).read_text(encoding="utf-8")
        for requirement in map(Requirement, wanted):
            pinned = re.findall(rf"^{re.escape(requirement.name)}==([^ ]+)", text, re.MULTILINE)
            assert pinned, f"{name} lacks {requirement.name}; make it anew as its head says"
            assert all(version in requirement.specifier for version in pinned), f"{name}: {requirement}"


def test_everything_left_undone_is_done():
    unfinished = re.compile(r"\b(?:TO" + "DO|FIX" + r"ME|X" + "XX)\b")
    unreasoned = re.compile(r"#\s*(?:type: ignore(?:\[[a-z-, ]+\])?|noqa(?:: [A-Z0-9, ]+)?)\s*$")
    for path in SOURCES:
        for number, line in enumerate(path.read_text(encoding="utf-8").splitlines(), 1):
            assert not unfinished.search(line), f"{relative(path)}:{number}"
            assert not unreasoned.search(line), f"{relative(path)}:{number} needs its reason beside it"


def test_vendored_files_are_unchanged():
    for record in ROOT.glob("service/static/swagger-ui-*/VERSION.txt"):
        listed = [
            line.split("  ") for line in record.read_text(encoding="utf-8").splitlines() if "  " in line
        ]
        assert len(listed) == 5
        subprocess.run(
            ["sha256sum", "--check", "--strict", "--quiet"],
            input="\n".join("  ".join(pair) for pair in listed) + "\n",
            cwd=record.parent,
            text=True,
            check=True,
        )

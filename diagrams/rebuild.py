"""Rebuilds stored diagrams, then sections, from what describes them: `python -m diagrams.rebuild [ID …]`."""

import sys
from collections.abc import Callable
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

from diagrams.diagram import Diagram
from diagrams.files.assessments import assessment_ids, read_assessment
from diagrams.files.points import point_ids, read_points
from diagrams.files.store import FOLDER, to_text
from diagrams.from_parameters import diagram_from_parameters
from diagrams.from_points import diagram_from_points
from diagrams.sections import shelf, store


def buildable_ids() -> tuple[str, ...]:
    """Ids of all diagrams that parameter or point files describe."""
    return tuple(sorted({*assessment_ids(), *point_ids()}))


def build(diagram_id: str) -> Diagram:
    """Compute one diagram from its file."""
    if diagram_id in point_ids():
        return diagram_from_points(read_points(diagram_id))
    return diagram_from_parameters(read_assessment(diagram_id))


def build_text(diagram_id: str) -> str:
    """The text one diagram is stored as, computed anew."""
    return to_text(build(diagram_id))


def main(ids: list[str]) -> None:
    """Rebuild the named diagrams and sections, or all."""
    diagrams = [i for i in buildable_ids() if i in ids or not ids]
    sections = [name for name in shelf.lines() if name in ids or not ids]
    unknown = [i for i in ids if i not in diagrams and i not in sections]
    if unknown:
        sys.exit(f"Nothing stored is called {', '.join(unknown)}.")
    _write(Path(str(FOLDER)), diagrams, build_text)
    _write(Path(str(store.FOLDER)), sections, shelf.build_text)


def _write(folder: Path, names: list[str], text_of: Callable[[str], str]) -> None:
    folder.mkdir(parents=True, exist_ok=True)
    with ProcessPoolExecutor() as pool:
        for name, text in zip(names, pool.map(text_of, names), strict=True):
            (folder / f"{name}.json").write_text(text, encoding="utf-8")
            sys.stdout.write(f"{name}: {len(text.splitlines())} lines\n")


if __name__ == "__main__":
    main(sys.argv[1:])

"""Rebuilds every stored diagram from its parameters or points: `python -m diagrams.rebuild [ID …]`."""

import sys
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

from diagrams.diagram import Diagram
from diagrams.files.assessments import assessment_ids, read_assessment
from diagrams.files.points import point_ids, read_points
from diagrams.files.store import FOLDER, to_text
from diagrams.from_parameters import diagram_from_parameters
from diagrams.from_points import diagram_from_points


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
    """Rebuild the named diagrams, or all."""
    wanted = ids or list(buildable_ids())
    folder = Path(str(FOLDER))
    folder.mkdir(parents=True, exist_ok=True)
    with ProcessPoolExecutor() as pool:
        for diagram_id, text in zip(wanted, pool.map(build_text, wanted), strict=True):
            (folder / f"{diagram_id}.json").write_text(text, encoding="utf-8")
            sys.stdout.write(f"{diagram_id}: {len(text.splitlines())} lines\n")


if __name__ == "__main__":
    main(sys.argv[1:])

"""`python -m diagrams.fitting ID [--write]`: repeat a fit, show what it reaches, and store it if asked."""

import argparse
import json
import sys
from pathlib import Path

from diagrams.files import assessments
from diagrams.fitting.fit import Fit, Outcome, fit_ids, fitted_document, read_fit, run_fit
from diagrams.fitting.layout import parameter_text
from diagrams.fitting.targets import Point


def main(arguments: list[str]) -> int:
    """Run the fits named; 0 if every stored file equals its fit (after writing, if asked), else 1."""
    parser = argparse.ArgumentParser(prog="python -m diagrams.fitting", description=__doc__)
    parser.add_argument("id", nargs="+", choices=fit_ids())
    parser.add_argument("--write", action="store_true", help="store the coefficients in the parameter file")
    options = parser.parse_args(arguments)
    same = True
    for diagram_id in options.id:
        path = Path(str(assessments.FOLDER)) / f"{diagram_id}.json"
        stored = path.read_text(encoding="utf-8")
        fit = read_fit(diagram_id)
        document = json.loads(stored)
        outcome = run_fit(fit, document)
        sys.stdout.write(_report(fit, outcome))
        text = parameter_text(fitted_document(fit, document, outcome))
        if options.write:
            path.write_text(text, encoding="utf-8", newline="\n")
        elif text != stored:
            sys.stdout.write(f"{diagram_id}: the stored file differs from this fit\n")
            same = False
    return 0 if same else 1


def _report(fit: Fit, outcome: Outcome) -> str:
    lines = [fit.id]
    for c, value in zip(fit.coefficients, outcome.values, strict=True):
        lines.append(f"  {c.model} {c.part} {c.key} [{c.term}]: {c.start} -> {value}")
    for target, before, after in zip(fit.targets, outcome.before, outcome.after, strict=True):
        aim = [None if pair is None else pair[0] for pair in (target.temperature_c, *target.wt)]
        lines.append(f"  {target.name}: aim {aim}, before {_shown(before)}, after {_shown(after)}")
    return "\n".join(lines) + "\n"


def _shown(point: Point | None) -> str:
    return "none" if point is None else str([round(value, 2) for value in (point.temperature_c, *point.wt)])


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))

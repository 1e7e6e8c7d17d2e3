"""`python -m diagrams.fitting ID [--write]`: repeat a fit, show what it reaches, and store it if asked."""

import argparse
import json
import sys
from pathlib import Path

from diagrams.files import assessments
from diagrams.fitting.fit import Fit, Outcome, fit_ids, fitted_document, read_fit, run_fit
from diagrams.fitting.layout import parameter_text
from diagrams.fitting.systems import fitted_system, read_system_fit, run_system_fit, system_fit_ids
from diagrams.fitting.targets import Point
from diagrams.many import reading


def main(arguments: list[str]) -> int:
    """Run the fits named; 0 if every stored file equals its fit (after writing, if asked), else 1."""
    parser = argparse.ArgumentParser(prog="python -m diagrams.fitting", description=__doc__)
    parser.add_argument("id", nargs="+", choices=[*fit_ids(), *system_fit_ids()])
    parser.add_argument("--write", action="store_true", help="store the coefficients in the parameter file")
    options = parser.parse_args(arguments)
    same = True
    for diagram_id in options.id:
        if diagram_id in system_fit_ids():
            same = _system(diagram_id, options.write) and same
            continue
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


def _system(system_id: str, write: bool) -> bool:
    """Repeat the fit of a system of many elements, which takes some minutes; whether the file equals it."""
    path = Path(str(reading.FOLDER)) / f"{system_id}.json"
    document = json.loads(path.read_text(encoding="utf-8"))
    fit = read_system_fit(system_id)
    found = run_system_fit(fit, document)
    new = fitted_system(fit, document, found)
    for term, value in zip(fit.terms, found, strict=True):
        sys.stdout.write(f"  {'-'.join(term.elements)} {term.model} {term.corner}: {value}\n")
    for reached in new["reached"]:
        sys.stdout.write(f"  {reached['name']}: before {reached['before_c']}, after {reached['after_c']}\n")
    if write:
        path.write_text(parameter_text(new), encoding="utf-8", newline="\n")
    elif new != document:
        sys.stdout.write(f"{system_id}: the stored file differs from this fit\n")
        return False
    return True


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

"""Values from outside, each row with its source; rows made by our own code are no truth and stay out."""

import csv
from pathlib import Path


def truth(name: str) -> list[dict[str, str]]:
    """All rows of `name`.csv in this folder, as text; lines starting with # say what the file is."""
    text = (Path(__file__).parent / f"{name}.csv").read_text(encoding="utf-8")
    lines = [line for line in text.splitlines() if not line.startswith("#")]
    return list(csv.DictReader(lines, strict=True))

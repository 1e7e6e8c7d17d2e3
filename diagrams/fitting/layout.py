"""The text form of a parameter file: plain lists and terms stand on one line, the rest is indented."""

import json
from typing import Any


def parameter_text(document: dict[str, Any]) -> str:
    """JSON text of a parameter file, the same for the same content, ending with a newline."""
    return _text(document, "") + "\n"


def _text(value: Any, indent: str) -> str:
    deeper = indent + " "
    if isinstance(value, dict) and value:
        rows = [f"{deeper}{_plain(key)}: {_member(key, item, deeper)}" for key, item in value.items()]
        return "{\n" + ",\n".join(rows) + f"\n{indent}}}"
    if isinstance(value, list) and any(isinstance(item, dict | list) for item in value):
        rows = [deeper + _text(item, deeper) for item in value]
        return "[\n" + ",\n".join(rows) + f"\n{indent}]"
    return _plain(value)


def _member(key: str, value: Any, indent: str) -> str:
    return _plain(value) if key == "terms" else _text(value, indent)


def _plain(value: Any) -> str:
    return json.dumps(value, ensure_ascii=False)

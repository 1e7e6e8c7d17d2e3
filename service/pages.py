"""The HTML of the few pages meant for people; every one of them shows the cautions."""

from html import escape
from string import Template

from service.schemas.base import Safety

_PAGE = Template("""\
<!DOCTYPE html>
<html lang="en-GB">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>$title</title>
<link rel="icon" type="image/svg+xml" href="$icon">
$head
</head>
<body>
<header class="top"><div class="wide"><a href="$home">Meltband</a><p>$tagline</p></div></header>
<main class="wide">
$body
$safety
$after
</main>
</body>
</html>
""")
_TAGLINE = "Temperature windows of soldered and brazed joints"


def page(
    *,
    title: str,
    body: str,
    safety: Safety,
    icon: str,
    styles: list[str],
    home: str,
    scripts: str = "",
    after: str = "",
) -> str:
    """Return a whole page; `body` and `after` are HTML, set above and below the cautions."""
    head = "".join(f'<link rel="stylesheet" href="{escape(href)}">\n' for href in styles) + scripts
    return _PAGE.substitute(
        title=escape(title), icon=escape(icon), head=head, home=escape(home), tagline=_TAGLINE,
        body=body, safety=safety_section(safety), after=after,
    )  # fmt: skip


def safety_section(safety: Safety) -> str:
    """Return the cautions as a section of a page."""
    notes = "\n".join(
        f'<li><span class="topic">{escape(note.topic.capitalize())}:</span> {escape(note.text)}</li>'
        for note in safety.notes
    )
    rules = "\n".join(
        f"<li>{escape(rule.region)}: {escape(rule.pointer)}</li>" for rule in safety.regulations
    )
    return (
        '<section class="safety" id="safety"><h2>Before you heat anything</h2>\n'
        f"<p><strong>{escape(safety.reminder)}</strong></p>\n<ul>\n{notes}\n</ul>\n"
        f"<details><summary>Where the rules are found</summary>\n<ul>\n{rules}\n</ul></details></section>"
    )


def problem_list(kinds: list[tuple[str, int, str, str]]) -> str:
    """Return the kinds of problems, given as code, status, title and meaning, as a list of terms."""
    rows = "\n".join(
        f'<dt id="{escape(code)}">{escape(title)} <code>{escape(code)}</code></dt>'
        f"<dd>{escape(meaning)} Status {status}.</dd>"
        for code, status, title, meaning in kinds
    )
    return f"<dl>\n{rows}\n</dl>"

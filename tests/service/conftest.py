"""The published diagrams, drawn by hand."""

import pytest

from tests.service.by_hand import Drawing


@pytest.fixture(scope="session")
def draw(ask):
    """Return a function that fetches a diagram over HTTP and makes it a drawing."""
    drawn = {}

    def fetch(diagram):
        if diagram not in drawn:
            answer = ask("GET", f"/v1/diagrams/{diagram}")
            assert answer.status_code == 200
            drawn[diagram] = Drawing(answer.json())
        return drawn[diagram]

    return fetch

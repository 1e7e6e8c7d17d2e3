"""Where borders meet in a point (melting points, congruent ones): read alike alone and in columns."""

import numpy as np
import pytest

from diagrams.files.catalog import catalog
from diagrams.files.store import stored_ids
from diagrams.questions.lever import equilibrium
from diagrams.questions.locate import locate
from diagrams.questions.locate_many import locate_many


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_at_a_melting_point_liquid_lies_above_and_solid_below(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    points = [i for i in diagram.invariants if i.kind.startswith(("melting", "congruent"))]
    assert points
    for point in points:
        found = equilibrium(diagram, point.compositions_wt["L"], point.temperature_c)
        assert (found.field, found.on_boundary) == ("L", True), point
        assert found.below is not None
        assert found.below.liquid_mass_fraction == 0.0
        assert set(found.coexisting) <= set(point.compositions_wt) | {"L", found.below.field}
        assert len(found.coexisting) == 2


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_near_every_invariant_columns_read_as_single_points_do(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    wt, t = np.array(
        [
            (wt + by_wt, invariant.temperature_c + by_c)
            for invariant in diagram.invariants
            for wt in set(invariant.compositions_wt.values())
            for by_wt in (0.0, -5e-5, 5e-5, -2e-4, 2e-4)
            for by_c in (0.0, -0.003, 0.003, -0.006, 0.006)
        ]
    ).T
    (west, east), (south, north) = diagram.composition_range_wt, diagram.temperature_range_c
    inside = (wt >= west) & (wt <= east) & (t >= south) & (t <= north)
    together = locate_many(diagram, wt[inside], t[inside]).fields
    alone = [locate(diagram, x, y).field for x, y in zip(wt[inside], t[inside], strict=True)]
    assert together == alone

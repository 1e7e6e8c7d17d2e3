"""Random points of a stored diagram, grouped by temperature so that one minimisation serves several."""

from collections.abc import Iterator

import numpy as np

from diagrams.diagram import Diagram

TEMPERATURES = 200
COMPOSITIONS = 10


def random_points(diagram: Diagram) -> Iterator[tuple[float, list[float]]]:
    """Temperatures (°C) with compositions (wt% of the second element): 2,000 points, always the same."""
    seed = sum(ord(c) * 257**k for k, c in enumerate(diagram.id)) % 2**32
    rng = np.random.default_rng(seed)
    (t_low, t_high), (wt_low, wt_high) = diagram.temperature_range_c, diagram.composition_range_wt
    for t in rng.uniform(t_low, t_high, TEMPERATURES).tolist():
        yield t, rng.uniform(wt_low, wt_high, COMPOSITIONS).tolist()

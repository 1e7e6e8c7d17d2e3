"""The minimiser: against a linear programme over dense grids, itself reordered, the binaries, its laws."""

from functools import cache
from itertools import combinations, permutations

import numpy as np
import pytest
from scipy.optimize import linprog

from diagrams.errors import NotConverged, OutsideData
from diagrams.files.catalog import catalog
from diagrams.many.equilibrium import stable
from diagrams.many.newton import States
from diagrams.many.reading import read_system, some_elements
from diagrams.many.sample import Sample, lattice
from diagrams.many.stretch import liquid_fraction
from diagrams.many.system import Fixed, ManySystem, Mixed
from diagrams.questions.lever import equilibrium
from diagrams.questions.many_place import check_served, prepared
from diagrams.units import at_to_wt, wt_to_at

TRIPLES = [("Ag", "Cu", "Sn"), ("Ag", "Pb", "Sn"), ("Bi", "Pb", "Sn"), ("Ag", "Cu", "Zn"), ("Cu", "Pb", "Sn")]
STEPS = 60  # of the dense grid


@cache
def system_of(elements: tuple[str, ...]) -> tuple[Sample, tuple[float, float]]:
    place = prepared(elements)
    return place.sample, place.temperature_range_c


def compositions(elements: tuple[str, ...], count: int, seed: int) -> list[np.ndarray]:
    """Mole fractions in the middle and near the edges, that the system serves."""
    random = np.random.default_rng(seed)
    found: list[np.ndarray] = []
    file = prepared(elements).file
    while len(found) < count:
        x = random.dirichlet(np.full(len(elements), random.choice([0.3, 1.0, 3.0])))
        if x.min() < 1e-4:
            continue
        try:
            check_served(file, at_to_wt(dict(zip(elements, (100 * x).tolist(), strict=True))))
        except OutsideData:
            continue
        found.append(x)
    return found


def gibbs(sample: Sample, states: States) -> float:
    """Energy of a state, J/mol."""
    return float(
        states.mu[0]
        @ sum(states.amounts[0, k] * states.composition(sample.system, k)[0] for k in range(len(states.sets)))
    )


@cache
def grid(elements: tuple[str, ...]) -> list[np.ndarray]:
    """Dense compositions for every solution of a system of three elements, over its own members."""
    system = system_of(elements)[0].system
    step = np.array([(i, j, STEPS - i - j) for i in range(STEPS + 1) for j in range(STEPS + 1 - i)]) / STEPS
    found = []
    for phase in system.mixed:
        if phase.size == 3:
            points = np.vstack([step, lattice(3)])
        elif phase.size == 2:
            points = np.stack([np.linspace(0, 1, 601), np.linspace(1, 0, 601)], axis=1)
        else:
            points = np.ones((1, 1))
        found.append(points[phase.inside(points)])
    return found


def by_linear_programme(
    elements: tuple[str, ...], overall: np.ndarray, temperature_k: float, windowed: set[int]
) -> tuple[float, float]:
    """Lowest energy over the grid (J/mol), and the shares of it that are liquid (moles).

    A phase that is described for some compositions only would come in at the edge of these, where it has no
    lowest point of its own and does not count: such phases take part only if they are in `windowed`.
    """
    sample, _ = system_of(elements)
    system: ManySystem = sample.system
    at = system.at(np.array([temperature_k]))
    energies, columns, liquid = [], [], []
    for number, (phase, points) in enumerate(zip(system.mixed, grid(elements), strict=True)):
        if len(phase.windows) and number not in windowed:
            continue
        weights = np.concatenate([at.mixed[number][0], at.rt])
        energies.append(phase.basis(points) @ weights)
        x = np.zeros((len(points), len(elements)))
        x[:, phase.index] = points
        columns.append(x)
        liquid.append(np.full(len(points), phase.kind == "liquid"))
    energies.append(at.fixed[0])
    columns.append(system.fixed_x)
    liquid.append(np.zeros(len(system.fixed)))
    found = linprog(np.concatenate(energies), A_eq=np.vstack(columns).T, b_eq=overall, method="highs")
    assert found.status == 0
    return float(found.fun), float(found.x @ np.concatenate(liquid))


@pytest.mark.parametrize("elements", TRIPLES, ids="-".join)
def test_against_a_linear_programme_over_a_dense_grid(elements: tuple[str, ...]) -> None:
    """40 random points of each of five systems: never above the grid, and never much below it."""
    sample, (low, high) = system_of(elements)
    random = np.random.default_rng(23)
    for overall in compositions(elements, 40, 23):
        t = float(random.uniform(low + 5, high - 5)) + 273.15
        ours = stable(sample, overall, t)
        energy, liquid = by_linear_programme(elements, overall, t, set(ours.sets))
        assert gibbs(sample, ours) <= energy + 1e-6
        assert (
            gibbs(sample, ours) >= energy - 60.0
        )  # what straight lines between grid points can be off, J/mol
        moles = sum(
            float(ours.amounts[0, k])
            for k, s in enumerate(ours.sets)
            if sample.system.phase(s).kind == "liquid"
        )
        assert moles == pytest.approx(liquid, abs=0.12), (overall, t)


@pytest.mark.parametrize("elements", TRIPLES[:4], ids="-".join)
def test_the_order_of_the_elements_does_not_matter(elements: tuple[str, ...]) -> None:
    sample, (low, high) = system_of(elements)
    file = prepared(elements).file
    random = np.random.default_rng(5)
    others = [p for p in permutations(range(3)) if p != (0, 1, 2)]
    for overall in compositions(elements, 6, 5):
        t = float(random.uniform(low + 5, high - 5)) + 273.15
        ours = stable(sample, overall, t)
        order = others[int(random.integers(len(others)))]
        turned = Sample(some_elements(file, tuple(elements[k] for k in order)))
        again = stable(turned, overall[list(order)], t)
        assert gibbs(turned, again) == pytest.approx(gibbs(sample, ours), abs=1e-5)
        assert again.mu[0] == pytest.approx(ours.mu[0][list(order)], abs=1e-4)
        named = [
            sorted(
                (s.system.phase(n).model, round(float(st.amounts[0, k]), 7)) for k, n in enumerate(st.sets)
            )
            for s, st in ((sample, ours), (turned, again))
        ]
        assert named[0] == named[1]


EDGES = [
    (system, pair)
    for system in ("ag-bi-cu-pb-sn", "ag-cu-zn", "ag-cu-p")
    for pair in read_system(system).binaries
]


@pytest.mark.parametrize(("system", "pair"), EDGES, ids=lambda v: "-".join(v) if isinstance(v, tuple) else v)
def test_every_binary_edge_is_the_stored_diagram(system: str, pair: tuple[str, str]) -> None:
    """Pairs of the systems against the polygons: the same liquid, wherever the point is not on a border."""
    diagram = catalog().get("-".join(pair).lower())
    sample = Sample(some_elements(read_system(system), pair))
    low, high = diagram.temperature_range_c
    west, east = diagram.composition_range_wt
    random = np.random.default_rng(29)
    off = 0
    for _ in range(30):
        second_wt, t = float(random.uniform(west + 0.2, east - 0.2)), float(random.uniform(low, high))
        read = equilibrium(diagram, second_wt, t)
        first, second = pair

        at = wt_to_at({first: 100 - second_wt, second: second_wt})
        overall = np.array([at[first], at[second]]) / 100.0
        ours = stable(sample, overall, t + 273.15)
        off += abs(float(liquid_fraction(sample, ours)[0]) - read.liquid_mass_fraction) > 2e-3
        if len(read.phases) == len(ours.sets):
            continue
        assert read.on_boundary or min(p.mass_fraction for p in read.phases) < 0.01
    assert off <= 1


@pytest.mark.parametrize("elements", [*TRIPLES, ("Ag", "Bi", "Cu", "Pb", "Sn")], ids="-".join)
def test_laws(elements: tuple[str, ...]) -> None:
    sample, (low, high) = system_of(elements)
    system = sample.system
    random = np.random.default_rng(31)
    for overall in compositions(elements, 12, 31):
        t = float(random.uniform(low + 5, high - 5)) + 273.15
        found = stable(sample, overall, t)
        rt = 8.314462618 * t
        assert found.amounts.min() >= -1e-9
        assert len(found.sets) <= len(elements)  # Gibbs: at a temperature and pressure
        balance = sum(found.amounts[0, k] * found.composition(system, k)[0] for k in range(len(found.sets)))
        assert np.abs(balance - overall).max() < 1e-9
        at = system.at(np.array([t]))
        for k, number in enumerate(found.sets):
            phase = system.phase(number)
            if isinstance(phase, Fixed):
                energy = float(at.fixed[0, number - len(system.mixed)])
                assert abs(energy - float(phase.x @ found.mu[0])) < 1e-8 * rt
                continue
            assert isinstance(phase, Mixed)
            potentials, _, x = phase.potentials(at.mixed[number], at.rt, found.logs[k])
            held = x[0] > 1e-12
            assert np.abs((potentials[0] - found.mu[0][phase.index])[held]).max() < 1e-8 * rt
            assert abs(float(x.sum()) - 1.0) < 1e-9
        # nothing under the plane, anywhere on the sample
        for number in range(len(system.mixed)):
            if not len(system.mixed[number].windows):
                assert sample.heights(at, found.mu, number).min() > -1e-8


def test_what_cannot_be_made_up_fails_loudly() -> None:
    """A system of compounds alone cannot hold what lies outside them."""
    sample, _ = system_of(("Ag", "Cu", "Sn"))
    bare = ManySystem(sample.system.elements, (), sample.system.fixed)
    with pytest.raises(NotConverged):
        stable(Sample(bare), np.array([0.9, 0.05, 0.05]), 400.0)


def test_sub_systems_agree_where_a_third_element_fades() -> None:
    """Three elements with a trace of one against the two alone."""
    for elements in TRIPLES[:3]:
        sample, (low, high) = system_of(elements)
        for pair in combinations(range(3), 2):
            two = tuple(elements[k] for k in pair)
            if two not in read_system(prepared(elements).file.id).binaries:
                continue
            alone = Sample(some_elements(prepared(elements).file, two))
            overall = np.full(3, 1e-7)
            overall[list(pair)] = (0.3, 0.7 - 1e-7)
            for t in np.linspace(low + 20, high - 20, 3) + 273.15:
                three = float(liquid_fraction(sample, stable(sample, overall, float(t)))[0])
                pure = float(liquid_fraction(alone, stable(alone, np.array([0.3, 0.7]), float(t)))[0])
                assert three == pytest.approx(pure, abs=1e-3)

"""What becomes of a joint into which a finish or base metal dissolves, step by step."""

from diagrams.elements import symbol
from diagrams.errors import NotCovered, OutsideData
from diagrams.questions.mixing import Portion, mixed
from service.process.dissolution_limits import limits_of
from service.process.dissolved import RATE_CONDITION, Amount, amount_of, solder_g, thickness_of
from service.process.mixtures import Mixture, Part, mixture, mixture_shown
from service.process.placed import placed_alloy, placed_or_known
from service.safety import safety_for
from service.schemas.alloy import AlloyAsked
from service.schemas.dissolution import DissolutionAnswer, DissolutionQuestion, Dissolved, PathPoint, Rate
from service.schemas.source import reference_shown

STEPS = 10
WHERE = "metal"  # the field that errors about the whole name: it is what makes the joint another alloy


def dissolution_of(question: DissolutionQuestion) -> DissolutionAnswer:
    """The joint asked for; InvalidInput, NotCovered, OutsideData name the field that is wrong."""
    metal = symbol(question.metal, "metal")
    subject, alloy = placed_or_known(question.alloy, "alloy")
    mass_g = solder_g(question, alloy)
    amount = amount_of(question, metal, alloy)
    pure, of_metal = placed_or_known(AlloyAsked(composition_wt={metal: 100.0}), WHERE)
    parts = (Part(alloy, mass_g, subject), Part(of_metal, amount.mass_g, pure))
    mix = mixture(parts, WHERE, question.leave_out_traces_below_wt)
    shown = mixture_shown(mix, question.temperature_c)
    hottest_c = max((c for c in (shown.liquidus_c, question.temperature_c) if c is not None), default=None)
    return DissolutionAnswer(
        **dict(shown),
        dissolved=_dissolved(amount, metal),
        path=_path(question, metal, amount, mix),
        limits=limits_of(metal, amount, alloy, mass_g),
        safety=safety_for(mix.elements, mix.process, hottest_c),
    )


def _dissolved(amount: Amount, metal: str) -> Dissolved:
    rate = amount.rate
    return Dissolved(
        metal=metal,
        mass_g=amount.mass_g,
        thickness_um=amount.thickness_um,
        by=amount.by,
        used_up=amount.used_up,
        rate=None
        if rate is None
        else Rate(
            um_per_s=rate.limit,
            conditions=f"60Sn–40Pb, {RATE_CONDITION}",
            reference=reference_shown(rate.source),
            edition=rate.edition,
        ),
    )


def _path(question: DissolutionQuestion, metal: str, amount: Amount, mix: Mixture) -> list[PathPoint]:
    """Each step starts its search from the one before; the first and the last are those of the answer."""
    solder = mix.parts[0]
    points: list[PathPoint] = []
    near_c: tuple[float, float] | None = None
    for step in range(STEPS + 1):
        share = step / STEPS
        part_g = amount.mass_g * share
        metal_g = [Portion(mix.parts[1].alloy, part_g)] if step else []
        whole = mix.alloy if step == STEPS else mixed([solder.portion, *metal_g], WHERE, least_wt=0.0)
        range_c, unknown = None, None
        try:
            found = placed_alloy(whole, WHERE, question.leave_out_traces_below_wt).melter
            by_itself = near_c is None or step == STEPS
            range_c = found.range_c if by_itself else found.range_near(near_c or found.range_c)
        except (NotCovered, OutsideData) as error:
            unknown = str(error)
        near_c = range_c or near_c
        points.append(
            PathPoint(
                share=share,
                mass_g=part_g,
                thickness_um=thickness_of(amount, metal, part_g),
                composition_wt=dict(whole.composition_wt),
                solidus_c=None if range_c is None else range_c[0],
                liquidus_c=None if range_c is None else range_c[1],
                unknown=unknown,
            )
        )
    return points

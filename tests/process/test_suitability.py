"""Rules of practice: which filler goes with which base metal."""

import pytest

from diagrams.errors import InvalidInput
from diagrams.fillers import fillers, find_filler
from service.process.suitability import KINDS, base_metal, family_of, rules, suits
from service.process.upper_limits import BASE_METAL, upper_limits

BASES = [limit for limit in upper_limits().values() if limit.kind == BASE_METAL]


def verdicts(filler, *keys):
    found = suits(find_filler(filler), [base_metal(key, "base_metals.0") for key in keys])
    return {one.verdict for one in found}


@pytest.mark.parametrize("base", BASES, ids=lambda base: base.key)
def test_every_base_metal_of_the_table_has_a_family(base):
    assert family_of(base)


def test_the_families_are_the_right_ones():
    families = {base.key: family_of(base) for base in BASES}
    assert families["cu-ni-c70600-90-10"] == "copper-nickel"
    assert families["n04400-ni-30cu"] == families["ni-200-n02200"] == "nickel"
    assert families["nickel-silver-c75200"] == "copper-nickel"  # with zinc; no silver in it
    assert families["al-6061"] == "aluminium"
    assert families["ag-fine"] == "silver"


@pytest.mark.parametrize("rule", rules(), ids=lambda rule: f"{'-'.join(sorted(rule.bases))} {rule.kind}")
def test_every_rule_speaks_of_something(rule):
    assert any(family_of(base) in rule.bases for base in BASES)
    held = [filler.name for filler in fillers() if KINDS[rule.kind](filler)]
    assert held
    base = next(base for base in BASES if family_of(base) in rule.bases)
    assert rule.verdict in {one.verdict for one in suits(find_filler(held[0]), [base])}


@pytest.mark.parametrize(
    ("filler", "bases", "expected"),
    [
        ("CuP 182", ["cu-c12200-dhp"], {"for"}),
        ("CuP 182", ["low-carbon-steel-1010-1020"], {"barred"}),
        ("CuP 182", ["cu-c12200-dhp", "stainless-304"], {"for", "barred"}),
        ("BNi-7", ["stainless-304"], {"for"}),  # nickel–phosphorus is no copper–phosphorus
        ("BAlSi-4", ["al-3003"], {"for"}),
        ("BAg-8", ["al-3003"], {"barred"}),
        ("BAlSi-4", ["cu-c12200-dhp"], {"barred"}),
        ("Sn63Pb37", ["cu-c12200-dhp"], {"for"}),
        ("Sn91Zn9", ["cu-c12200-dhp"], {"against"}),
        ("Zn98Al2", ["al-3003"], {"for"}),
        ("BAg-24", ["stainless-304"], set()),  # with nickel
        ("BAg-28", ["stainless-304"], {"against"}),
        ("CuP 182", ["nickel-silver-c75200"], {"barred"}),
        ("CuP 182", ["ti-grade-2"], {"barred", "against"}),
        ("BAlSi-4", ["ti-grade-2"], {"against"}),
        ("Au80Sn20", ["ti-grade-2"], {"barred"}),
        ("Zn98Al2", ["stainless-304"], {"against"}),
        ("BAlSi-4", ["al-5052"], {"against"}),
        ("Sn63Pb37", ["beryllium-copper-c17200"], {"against"}),
        ("BAg-8", [], set()),
    ],
)
def test_rules_say_what_the_trade_says(filler, bases, expected):
    assert verdicts(filler, *bases) == expected


def test_a_component_is_no_base_metal():
    with pytest.raises(InvalidInput) as refused:
        base_metal("flux-FH10", "base_metals.2")
    assert refused.value.field == "base_metals.2"

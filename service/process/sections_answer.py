"""Sections as answered."""

from functools import lru_cache

from shapely import LinearRing, Polygon
from shapely.geometry.polygon import orient

from diagrams.sections.section import Contour, Section
from diagrams.sections.shelf import stored_sections
from service.safety import safety_for
from service.schemas.diagrams import Geometry
from service.schemas.sections import (
    LineShown,
    LiquidContour,
    SectionAnswer,
    SectionLevel,
    SectionRegion,
    SectionsAnswer,
    SectionShown,
)
from service.schemas.source import SourceUsed, reference_shown


def section_shown(section: Section) -> SectionAnswer:
    """All of a section."""
    return SectionAnswer(
        **dict(_summary(section)),
        regions=[
            SectionRegion(
                field=region.name,
                phases=list(region.phases),
                geometry=Geometry(
                    coordinates=[[list(point) for point in ring.coords] for ring in _rings(region.polygon)]
                ),
            )
            for region in section.regions
        ],
        liquid_contours=[_contour(contour) for contour in section.contours],
        levels=[
            SectionLevel(
                temperature_c=level.temperature_c,
                under=level.under,
                over=level.over,
                from_share=level.from_share,
                to_share=level.to_share,
            )
            for level in section.invariants
        ],
        compounds={name: share for share, name in section.compounds.items()},
        figure=f"/v1/sections/{section.id}/figure",
        sources=[reference_shown(source) for source in section.sources],
        notes=list(section.notes),
        safety=safety_for(section.elements),
    )


@lru_cache(maxsize=64)
def section_json(section: Section) -> bytes:
    """The same as it goes over the wire: large, and asked for again and again."""
    return section_shown(section).model_dump_json().encode()


def sections_shown() -> SectionsAnswer:
    """The stored ones."""
    stored = sorted(stored_sections().values(), key=lambda section: section.name)
    elements = frozenset(element for section in stored for element in section.elements)
    return SectionsAnswer(sections=[_summary(section) for section in stored], safety=safety_for(elements))


def _summary(section: Section) -> SectionShown:
    return SectionShown(
        id=section.id,
        from_name=section.from_name,
        to_name=section.to_name,
        from_wt=dict(section.from_wt),
        to_wt=dict(section.to_wt),
        to_share_max=section.to_share_max,
        temperature_range_c=list(section.temperature_range_c),
        source=SourceUsed(diagram=section.data_id, edition=section.edition, method="section"),
    )


def _rings(polygon: Polygon) -> list[LinearRing]:
    """The outer ring, anticlockwise, then those of fields inside."""
    turned = orient(polygon)
    return [turned.exterior, *turned.interiors]


def _contour(contour: Contour) -> LiquidContour:
    return LiquidContour(
        liquid_mass_fraction=contour.liquid_mass_fraction,
        geometry=LineShown(coordinates=[[list(point) for point in line] for line in contour.lines]),
    )

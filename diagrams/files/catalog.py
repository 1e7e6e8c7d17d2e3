"""All stored diagrams, read and gate-checked once."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType

from diagrams.diagram import Diagram
from diagrams.errors import DataFault, NotCovered, UnknownDiagram
from diagrams.files.assessments import melting_points_c
from diagrams.files.check import check_diagram
from diagrams.files.store import from_text, stored_ids, stored_text


@dataclass(frozen=True)
class Catalog:
    """Diagrams by id, in alphabetical order."""

    diagrams: Mapping[str, Diagram]

    @property
    def edition(self) -> str:
        """The newest edition among the diagrams."""
        return max(d.edition for d in self.diagrams.values())

    def get(self, diagram_id: str) -> Diagram:
        """A diagram by id; raises UnknownDiagram."""
        try:
            return self.diagrams[diagram_id]
        except KeyError:
            raise UnknownDiagram(
                f"There is no diagram “{diagram_id[:40]}”.",
                field="id",
                remedy="Use one of: " + ", ".join(self.diagrams) + ".",
            ) from None

    def for_elements(self, elements: Iterable[str]) -> Diagram:
        """The diagram that covers one or two elements; raises NotCovered.

        A pure element is answered from the first diagram that reaches its pure end.
        """
        wanted = sorted(set(elements))
        if len(wanted) == 2 and "-".join(wanted).lower() in self.diagrams:
            return self.diagrams["-".join(wanted).lower()]
        if len(wanted) == 1:
            for diagram in self.diagrams.values():
                ends = dict(zip(diagram.elements, diagram.composition_range_wt, strict=True))
                pure = {diagram.elements[0]: 0.0, diagram.elements[1]: 100.0}
                if wanted[0] in ends and ends[wanted[0]] == pure[wanted[0]]:
                    return diagram
        raise NotCovered(
            f"No stored data cover {', '.join(wanted)} together.",
            field="alloy",
            remedy="Covered pairs: " + ", ".join("–".join(d.elements) for d in self.diagrams.values()) + ".",
        )


@cache
def catalog() -> Catalog:
    """Read and check every stored diagram; raises DataFault if one does not pass the gate."""
    melting = melting_points_c()
    diagrams = {}
    for diagram_id in stored_ids():
        diagram = from_text(stored_text(diagram_id))
        if diagram.id != diagram_id:
            raise DataFault(f"{diagram_id}.json holds the diagram {diagram.id}")
        check_diagram(diagram, melting)
        diagrams[diagram_id] = diagram
    return Catalog(MappingProxyType(diagrams))

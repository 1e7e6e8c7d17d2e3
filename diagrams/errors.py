"""What can go wrong in the metallurgy, each kind with the field it is about and the remedy."""

TRY_BESIDE = "Ask for a slightly different composition or temperature, and report this one."


class DiagramsError(Exception):
    """Base of all errors raised on purpose; the text is written for the person asking.

    `field` names the input it is about (dotted path, "" if none), `remedy` says what would be right.
    """

    code = "diagrams-error"

    def __init__(self, message: str, *, field: str = "", remedy: str = "") -> None:
        super().__init__(message)
        self.field = field
        self.remedy = remedy


class InvalidInput(DiagramsError):
    """A value that no data could make sense of."""

    code = "invalid-input"


class InvalidComposition(DiagramsError):
    """A composition that does not describe an alloy."""

    code = "invalid-composition"


class UnknownAlloy(DiagramsError):
    """A designation that no table here holds."""

    code = "unknown-alloy"


class UnknownDiagram(DiagramsError):
    """A diagram id that is not stored."""

    code = "unknown-diagram"


class NotCovered(DiagramsError):
    """Elements that no stored data cover together."""

    code = "not-covered"


class OutsideData(DiagramsError):
    """A temperature or composition outside the range the data are good for."""

    code = "outside-data"


class DataFault(DiagramsError):
    """Stored data that do not pass the gate."""

    code = "data-fault"


class NotConverged(DiagramsError):
    """A computation that did not reach its tolerance."""

    code = "not-converged"

    def __init__(self, message: str, *, field: str = "alloy", remedy: str = TRY_BESIDE) -> None:
        super().__init__(message, field=field, remedy=remedy)

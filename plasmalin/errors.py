"""The errors a user can meet. Each is also a builtin, so generic handlers keep working.

Every message says what was given, what was needed, and what to do.
"""


class PlasmalinError(Exception):
    """Base of every error that plasmalin raises on purpose."""


class DeclarationError(PlasmalinError, ValueError):
    """A field, parameter or law is declared in a way that cannot be meant."""


class RankError(DeclarationError, TypeError):
    """A scalar stands where a vector is needed, or the other way round."""


class ReadError(DeclarationError):
    """A law written as text cannot be read.

    Parameters
    ----------
    message : str
        What is wrong and what to do.
    text : str
        The whole text.
    position : int
        Index of the character at fault.
    """

    def __init__(self, message: str, text: str = "", position: int = 0) -> None:
        super().__init__(message, text, position)
        self.message, self.text, self.position = message, text, position

    def __str__(self) -> str:
        if not self.text:
            return self.message
        start = max(0, self.position - 40)
        shown = self.text[start : self.position + 30].replace("\n", " ")
        return f"{self.message}\n  {shown}\n  {' ' * (self.position - start)}^"


class AmbiguousText(ReadError):
    """Typed mathematics that can be read in two ways, such as ``a/b c``.

    Parameters
    ----------
    message : str
        What is ambiguous.
    text : str
        The whole text.
    position : int
        Index of the character at fault.
    readings : tuple of str
        The two readings, each written so that it can be read one way only.
    """

    def __init__(
        self, message: str, text: str = "", position: int = 0, readings: tuple[str, ...] = ()
    ) -> None:
        advice = f"{message}; write {' or '.join(readings)}" if readings else message
        super().__init__(advice, text, position)
        self.args = (message, text, position, readings)
        self.readings = readings


class ModelFileError(PlasmalinError, ValueError):
    """A model file cannot be read or does not describe a model."""


class BackgroundError(PlasmalinError, ValueError):
    """A law that the declared background contradicts, or values that break a condition."""


class ConstraintError(PlasmalinError, ValueError):
    """A constraint that the laws do not preserve.

    Parameters
    ----------
    message : str
        What is left of its time derivative, and what to do.
    constraint : str
        The constraint's name.
    laws : tuple of str
        The laws that break it.
    """

    def __init__(self, message: str, constraint: str = "", laws: tuple[str, ...] = ()) -> None:
        super().__init__(message, constraint, laws)
        self.message, self.constraint, self.laws = message, constraint, laws

    def __str__(self) -> str:
        return self.message


class UndeterminedError(PlasmalinError, ValueError):
    """Too few or too many laws, or laws that do not determine the unknowns."""


class NonPolynomialError(PlasmalinError, ValueError):
    """The frequency enters in a way that is not polynomial (nor a ratio of polynomials)."""


class ValuesError(PlasmalinError, ValueError):
    """Numbers that are missing, unknown, not finite, or of the wrong shape."""


class UnitError(PlasmalinError, ValueError):
    """Units that do not match, or a unit that cannot be read."""

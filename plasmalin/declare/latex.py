r"""Formulas of a manuscript: LaTeX as the typed mathematics that `typed` reads.

Only the notation is exchanged, nothing is interpreted: ``\frac{a}{b}`` becomes ``(a)/(b)``, ``\omega_{pe}^2`` becomes
``omega_pe^2``, and letters side by side, which LaTeX sets as a product, are parted by spaces. What could be read in
two ways stays so and is refused by the reader behind.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass

from ..errors import ReadError
from .fields import GREEK

TOKEN = re.compile(r"\\(?:[A-Za-z]+\*?|.)|%[^\n]*\n?|\s+|\d+\.?\d*|\.\d+|.", re.DOTALL)

SIGNS = {
    "cdot": "·", "times": "×", "approx": "≈", "simeq": "≈", "sim": "~", "equiv": "≡", "propto": "∝",
    "ll": "<<", "gg": ">>", "to": "->", "rightarrow": "->", "longrightarrow": "->", "infty": "∞", "pm": "±", "mp": "∓",
    "le": "≤", "leq": "≤", "ge": "≥", "geq": "≥", "lvert": "|", "rvert": "|", "vert": "|", "mid": "|", "{": "(",
    "}": ")", "lbrack": "[", "rbrack": "]", "lbrace": "(", "rbrace": ")", "ast": "*", "div": "/", "nabla": "∇",
    "partial": "∂", "imath": "i", "hbar": "hbar", "ell": "ell", "prime": "'",
}  # fmt: skip
LETTERS = {name: name for name in GREEK} | {
    "varepsilon": "epsilon", "varphi": "phi", "vartheta": "theta", "varrho": "rho", "varkappa": "kappa",
}  # fmt: skip
FUNCTIONS = (
    "sin cos tan cot sec csc sinh cosh tanh coth exp ln log arcsin arccos arctan det".split()
)
UPRIGHT = ("mathrm", "text", "operatorname", "textrm", "mathit", "textit", "mbox", "rm")
PLAIN = ("mathbf", "boldsymbol", "vec", "bm", "mathsf", "mathcal", "symbf", "bf")
"""What is set in another face has the name of its letter."""
SPACES = (
    *(",", ";", ":", "!", " ", ">", "\\", "[", "]", "(", ")", "quad", "qquad", "left", "right"),
    *("big", "Big", "bigg", "Bigg", "bigl", "bigr", "Bigl", "Bigr", "biggl", "biggr"),
    *("displaystyle", "textstyle", "limits", "nonumber", "notag", "hspace*", "middle"),
)
SCRIPT = {"perp": "⊥", "bot": "⊥", "parallel": "∥", "Vert": "∥", "|": "∥"}
BRACED = "{", "}"
EQUATIONS = ("equation", "align", "gather", "multline", "split", "aligned", "displaymath", "math")
LOST = "\a\b\f\v"
"""What Python makes of \\alpha, \\beta, \\frac and \\varphi in a string that is not raw."""


def typed_text(text: str) -> str:
    r"""A formula in LaTeX in the notation of `read_claim`; any other text as it is.

    Raises
    ------
    ReadError
        For a command that has no meaning here, braces that do not match, or a backslash that Python took.

    Examples
    --------
    >>> typed_text(r"\omega^2 = \omega_{pe}^2 + 3 k^2 \frac{T_e}{m_e}")
    'omega^2 = omega_pe^2 + 3 k^2 ((T_e)/(m_e))'
    >>> typed_text("omega^2 = 3 k^2")
    'omega^2 = 3 k^2'
    """
    lost = [i for i, c in enumerate(text) if c in LOST]
    if lost:
        raise ReadError('a backslash is lost; write the formula as r"..."', text, lost[0])
    if "\\" not in text and "$" not in text:
        return text
    made = _Formula(text).all()
    return re.sub(r"\s+", " ", made).strip().rstrip(".,;").rstrip()


@dataclass(frozen=True)
class _Piece:
    """One token: its text and where it stands."""

    text: str
    position: int

    @property
    def command(self) -> str:
        return self.text[1:] if self.text.startswith("\\") and len(self.text) > 1 else ""


class _Formula:
    """Reads one formula from left to right."""

    def __init__(self, text: str) -> None:
        self.text, self.place = text, 0
        self.pieces = [_Piece(m.group(), m.start()) for m in TOKEN.finditer(text)]

    def all(self) -> str:
        made = self._until(None)
        if self.place < len(self.pieces):
            self._fail("this } closes nothing")
        return made

    def _until(self, end: str | None) -> str:
        """Everything up to a closing brace or bracket, which is taken."""
        made: list[str] = []
        start = self.place
        while self.place < len(self.pieces):
            piece = self.pieces[self.place]
            if piece.text == end:
                self.place += 1
                return "".join(made)
            if piece.text == "}":
                break
            made.append(self._next())
        if end is not None:
            self.place = max(start - 1, 0)
            self._fail("this brace is not closed")
        return "".join(made)

    def _next(self) -> str:
        """The next symbol with its scripts, or a sign."""
        piece = self.pieces[self.place]
        self.place += 1
        if piece.text.isspace() or piece.text[0] in "%~$&":
            return " "
        if piece.text == "_":
            self.place -= 1
            self._fail("a subscript stands alone")
        if piece.text == "^":
            return self._raised()
        if piece.text == "{":
            inner = self._until("}")
            return inner if re.fullmatch(r"\s*\w*\s*", inner) else f" ({inner}) "
        if piece.command:
            return self._command(piece)
        if piece.text.isalpha():
            return f" {self._with_scripts(piece.text)}"
        if piece.text[0].isdigit():
            return f" {piece.text}"  # x^23 is x² 3
        return piece.text

    def _command(self, piece: _Piece) -> str:
        name = piece.command
        special: dict[str, Callable[[], str]] = {
            **dict.fromkeys(("frac", "dfrac", "tfrac"), self._fraction),
            "sqrt": self._root,
            **dict.fromkeys(("label", "tag", "hspace"), self._left_out),
            **dict.fromkeys(("begin", "end"), self._environment),
            **dict.fromkeys(("tilde", "widetilde"), self._tilde),
        }
        if name in special:
            return special[name]()
        if name in SPACES:
            return self._space()
        if name in LETTERS:
            return f" {self._with_scripts(LETTERS[name])}"
        if name in FUNCTIONS:
            return f" {name}{'' if self._looks_at('^') else ' '}"
        if name in UPRIGHT:
            return f" {self._with_scripts(self._name())}"
        if name in PLAIN:
            return f" {self._with_scripts(self._argument().strip())}"
        if name in ("nabla", "partial"):
            return self._operator(name)
        if name in ("hbar", "ell", "imath"):
            return f" {self._with_scripts(SIGNS[name])}"
        if name in SIGNS:
            return SIGNS[name] if name == "prime" else f" {SIGNS[name]} "
        self.place -= 1
        return self._fail(f"\\{name} is not read; write it as a name, a product or a function")

    def _space(self) -> str:
        """Blank; the dot of `\\left.` as well."""
        if self.pieces[self.place - 1].command in ("left", "right") and self._looks_at("."):
            self.place += 1
        return " "

    def _fraction(self) -> str:
        top, bottom = self._argument().strip(), self._argument().strip()
        if re.match(r"[∂d](\^|\s|$)", top) and re.match(r"[∂d]\s*[txyz]", bottom):
            return f" {top}/{bottom} "
        return f" (({top})/({bottom})) "

    def _root(self) -> str:
        index = ""
        if self._looks_at("["):
            self.place += 1
            index = self._until("]").strip()
        inner = self._argument().strip()
        return f" sqrt({inner}) " if index in ("", "2") else f" ({inner})^(1/({index})) "

    def _environment(self) -> str:
        """Nothing: what stands in an equation stays."""
        kind = "".join(self._plain_argument())
        if kind.rstrip("*") not in EQUATIONS:
            self._fail(f"{kind} is not read; write a matrix as [[a, b], [c, d]]")
        return " "

    def _plain_argument(self) -> list[str]:
        """The pieces of a group as they stand."""
        made = [self._take().text]
        while made[-1] != "}":
            made.append(self._take().text)
        return made[1:-1]

    def _left_out(self) -> str:
        self._plain_argument()
        return " "

    def _tilde(self) -> str:
        """The sign goes behind the letter, in front of the subscript."""
        return f" {self._with_scripts(self._argument().strip() + chr(0x303))}"

    def _operator(self, name: str) -> str:
        sign = SIGNS[name]
        if name == "partial":
            if self._looks_at("_"):
                self.place += 1
                return f" {sign}_{self._script()} "
            return sign
        following = self._peek()
        if following is not None and following.command in ("cdot", "times"):
            self.place = self.pieces.index(following, self.place) + 1
            return f" {sign}{SIGNS[following.command]} "
        return f" {sign}"

    def _with_scripts(self, name: str) -> str:
        """A name with its subscript, then its power, in whichever order they stand."""
        below = above = ""
        while True:
            if self._looks_at("_") and not below:
                self.place += 1
                below = "_" + self._script()
            elif self._looks_at("^") and not above:
                self.place += 1
                above = self._raised()
            elif self._looks_at("'"):
                self.place += 1
                name += "'"
            else:
                return name + below + above

    def _raised(self) -> str:
        power = re.sub(r"\s+", " ", self._argument(single=True)).strip()
        if power in ("'", "''"):
            return power
        return f"^{power}" if re.fullmatch(r"\d+|\w", power) else f"^({power})"

    def _script(self) -> str:
        """What a subscript says, in one word."""
        if not self._looks_at("{"):
            piece = self._take()
            return SCRIPT.get(piece.command) or LETTERS.get(piece.command) or piece.text[:1]
        self.place += 1
        word = ""
        while not self._looks_at("}"):
            piece = self._take()
            if piece.command in UPRIGHT or piece.text in BRACED or piece.command in SPACES:
                word += self._name() if piece.command in UPRIGHT and self._looks_at("{") else ""
            elif piece.command:
                known = SCRIPT.get(piece.command) or LETTERS.get(piece.command)
                word += known or self._fail(f"\\{piece.command} is not read in a subscript")
            elif not piece.text.isspace():
                word += piece.text
        self.place += 1
        return word if re.fullmatch(r"\w+", word) else f"{{{word}}}"

    def _name(self) -> str:
        """The letters of an upright word."""
        return re.sub(r"\s", "", self._argument())

    def _argument(self, single: bool = False) -> str:
        """What a command applies to: a group, or one token (of a number one digit)."""
        piece = self._take()
        if piece.text == "{":
            return self._until("}")
        if piece.text[0].isdigit() and len(piece.text) > 1:
            self.pieces[self.place - 1] = _Piece(piece.text[1:], piece.position + 1)
            self.place -= 1
            return piece.text[0]
        if piece.command:
            return self._command(piece)
        return piece.text

    def _take(self) -> _Piece:
        """The next piece that is not blank."""
        while self.place < len(self.pieces) and self.pieces[self.place].text.isspace():
            self.place += 1
        if self.place == len(self.pieces):
            self._fail("the formula ends where something is needed")
        self.place += 1
        return self.pieces[self.place - 1]

    def _peek(self) -> _Piece | None:
        return next((p for p in self.pieces[self.place :] if not p.text.isspace()), None)

    def _looks_at(self, text: str) -> bool:
        """Whether this comes next; then the blanks before it are left behind."""
        piece = self._peek()
        if piece is None or piece.text != text:
            return False
        self.place = self.pieces.index(piece, self.place)
        return True

    def _fail(self, message: str) -> str:
        position = (
            self.pieces[self.place].position if self.place < len(self.pieces) else len(self.text)
        )
        raise ReadError(message, self.text, position)

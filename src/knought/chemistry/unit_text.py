"""The grammar of units: from text to symbols with exponents, nothing measured yet.

    unit     := ["10^n"] product ["/" (factor | "(" product ")")]
    product  := factor (separator factor)*
    factor   := symbol [exponent] | "(" unit ")" [exponent]
    exponent := "^-1", "**-1", "⁻¹", "-1", "2", "^(1/2)", "^0.5"

Separators are a space, ``·``, ``*`` or a full stop. A second solidus, or a product behind one that
stands in no bracket, is refused with both readings.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from fractions import Fraction

from knought.chemistry.unit_symbols import ALIASES

__all__ = ["MOST_CHARACTERS", "UnitText", "UnitTextError", "normalised", "parse_unit_text"]

#: No unit is longer; keeps whatever lands here bounded.
MOST_CHARACTERS = 120
_MOST_FACTORS = 12
_DEEPEST_BRACKET = 3
_LARGEST_EXPONENT = 24
_LARGEST_DENOMINATOR = 12

_SUPERSCRIPTS = "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻"
_PLAIN_DIGITS = str.maketrans(_SUPERSCRIPTS, "0123456789+-")
_MINUS_SIGNS = "−‐‑–—﹣－"
_SPACES = re.compile(r"[\s\u00a0\u2000-\u200b\u202f\u205f\u2060\u3000\ufeff]+")
_DOTS = "·⋅∙•‧・×∗"

#: UTF-8 read as Windows-1252: Â°C, sâ»Â¹, Î¼M.
_MANGLED = re.compile("Â[°·µ±²³¹]|â[»‚€]|Î¼|Ã[…¥]|�")

_TOKEN = re.compile(
    r"""
    (?P<space>\ +)
  | (?P<dot>[*.](?!\*))
  | (?P<slash>/)
  | (?P<open>\() | (?P<close>\))
  | (?P<exponent>(?:\^|\*\*)\ ?(?:\([+-]?[0-9]{1,4}(?:\.[0-9]{1,6}|/[0-9]{1,2})?\)
                             |[+-]?[0-9]{1,4}(?:\.[0-9]{1,6})?))
  | (?P<symbol>°[CF]|[^\W\d_]+|[%‰])
  | (?P<bare>[+-]?[0-9]{1,4})
    """,
    re.VERBOSE,
)

_POWER_OF_TEN = re.compile(
    r"(?:10\ ?(?:\^|\*\*)\ ?\(?(?P<raised>[+-]?[0-9]{1,3})\)?"
    r"|10(?P<bare>[+-][0-9]{1,3})(?![0-9])"
    r"|1[eE](?P<e>[+-]?[0-9]{1,3})"
    r"|(?P<plain>1(?:0{0,9}|(?:\ 000){1,3})|0\.0{0,9}1))"
    r"(?=$|[\s*/(])\ ?\*?\ ?"
)


class UnitTextError(Exception):
    """The text is no unit; what is wrong and what to do."""

    def __init__(self, what: str, remedy: str) -> None:
        super().__init__(what)
        self.what, self.remedy = what, remedy


@dataclass(frozen=True)
class UnitText:
    """A unit as written: a power of ten and symbols with their exponents, in reading order.

    Attributes
    ----------
    factors
        Symbol and exponent, aliases resolved.
    power_of_ten
        Exponent of a leading power of ten.
    """

    factors: tuple[tuple[str, Fraction], ...]
    power_of_ten: int = 0

    def canonical(self) -> str:
        """Return the one spelling, ``"10^-3 L mol^-1 s^-1"``."""
        parts = [f"10^{self.power_of_ten}"] if self.power_of_ten else []
        parts += [
            symbol if power == 1 else f"{symbol}^{_written(power)}"
            for symbol, power in self.factors
        ]
        return " ".join(parts) or "1"


def _written(power: Fraction) -> str:
    if power.denominator == 1:
        return str(power.numerator)
    if power.denominator in {2, 4, 5, 8, 10}:
        return f"{float(power):g}"
    return f"({power.numerator}/{power.denominator})"


def normalised(text: str) -> str:
    """Return `text` with one spelling of spaces, signs, dots, micro, degrees and superscripts."""
    text = unicodedata.normalize("NFC", text)
    for sign in _MINUS_SIGNS:
        text = text.replace(sign, "-")
    for dot in _DOTS:
        text = text.replace(dot, "*")
    text = text.replace("μ", "µ").replace("½", "(1/2)").replace("\u2044", "/")
    text = re.sub(f"\\^?([{_SUPERSCRIPTS}]+)", lambda m: "^" + m[1].translate(_PLAIN_DIGITS), text)
    text = _SPACES.sub(" ", text).strip()
    return re.sub(r"(?:℃|[°º˚]\s?C\b|\bdeg\.?\s?C\b|\boC\b|\bCelsius\b|\bcelsius\b)", "°C", text)


def parse_unit_text(text: str) -> UnitText:
    """Read the symbols and exponents of a unit.

    Parameters
    ----------
    text
        The unit, brackets around the whole allowed.

    Raises
    ------
    UnitTextError
        If the text does not follow the grammar, or can be read in two ways.
    """
    if len(text) > MOST_CHARACTERS:
        raise UnitTextError("is too long for a unit", "write units as in L mol^-1 s^-1")
    if _MANGLED.search(text):
        raise UnitTextError(
            "was saved in one encoding and opened in another",
            "save the file again as UTF-8, or type the header anew",
        )
    plain = normalised(text)
    if not plain:
        raise UnitTextError("the unit is missing", "write units as in L mol^-1 s^-1; 1 for none")
    while _wrapped(plain):
        plain = plain[1:-1].strip()
    power = 0
    leading = _POWER_OF_TEN.match(plain)
    if leading:
        power = _exponent_of(leading)
        plain = plain[leading.end() :]
    if plain.startswith("/"):
        if not leading:
            raise UnitTextError("begins with a solidus", f"write 1{plain} or an exponent, s^-1")
        plain = "1 " + plain
    factors = _Reader(plain).whole() if plain else []
    merged = [(symbol, exponent) for symbol, exponent in factors if symbol != "1"]
    if abs(power) > 99:
        raise UnitTextError("has too large a power of ten", "check it")
    return UnitText(tuple(merged), power)


def _exponent_of(leading: re.Match[str]) -> int:
    plain = leading["plain"]
    if plain is None:
        return int(leading["raised"] or leading["bare"] or leading["e"])
    digits = plain.replace(" ", "")
    return -(len(digits) - 2) if digits.startswith("0.") else len(digits) - 1


def _wrapped(text: str) -> bool:
    """Whether one pair of brackets encloses the whole text."""
    if not (text.startswith("(") and text.endswith(")")):
        return False
    depth = 0
    for place, letter in enumerate(text):
        depth += {"(": 1, ")": -1}.get(letter, 0)
        if depth == 0:
            return place == len(text) - 1
    return False


@dataclass(frozen=True)
class _Token:
    kind: str
    text: str


def _tokens(text: str) -> list[_Token]:
    found: list[_Token] = []
    place = 0
    while place < len(text):
        match = _TOKEN.match(text, place)
        if match is None or match.lastgroup is None:
            raise UnitTextError(
                f"{text[place]!r} has no meaning in a unit", "write units as in L mol^-1 s^-1"
            )
        found.append(_Token(match.lastgroup, match[0]))
        place = match.end()
    return found


_Factors = list[tuple[str, Fraction]]


class _Reader:
    """Recursive descent over the tokens of one unit."""

    def __init__(self, text: str) -> None:
        self._tokens = _tokens(text)
        self._next = 0

    def whole(self) -> _Factors:
        """Read the unit to its end.

        Raises
        ------
        UnitTextError
            If something is left over, or there is too much of it.
        """
        factors = self._unit(0)
        if self._next < len(self._tokens):
            if self._peek() == "close":
                raise UnitTextError("has a bracket too many", "close each bracket once")
            raise UnitTextError("goes on where a unit should end", "write it as L mol^-1 s^-1")
        if len(factors) > _MOST_FACTORS:
            raise UnitTextError("has too many factors", "check the unit")
        return factors

    def _peek(self, ahead: int = 0) -> str:
        place = self._next + ahead
        return self._tokens[place].kind if place < len(self._tokens) else "end"

    def _signed(self, ahead: int) -> bool:
        return self._tokens[self._next + ahead].text[0] in "+-"

    def _take(self) -> _Token:
        self._next += 1
        return self._tokens[self._next - 1]

    def _unit(self, depth: int) -> _Factors:
        if depth > _DEEPEST_BRACKET:
            raise UnitTextError("has too many brackets", "write it with exponents")
        above = self._product(depth)
        self._skip_spaces()
        if self._peek() != "slash":
            return above
        self._take()
        self._skip_spaces()
        below = _inverted(self._factor(depth))
        rest, sign = self._rest(depth)
        if rest:
            raise _two_readings(above + below, rest, sign)
        return above + below

    def _rest(self, depth: int) -> tuple[_Factors, str]:
        """Read what follows a denominator and should not be there."""
        rest: _Factors = []
        sign = ""
        while True:
            self._skip_separators()
            if self._peek() == "slash":
                self._take()
                self._skip_spaces()
                sign = sign or "/"
            elif self._peek() not in {"symbol", "open"}:
                return rest, sign or " "
            sign = sign or " "
            rest += self._factor(depth)

    def _product(self, depth: int) -> _Factors:
        factors = self._factor(depth)
        while True:
            mark = self._next
            separated = self._skip_separators()
            # After an exponent the next symbol may follow at once: s^-1 in "mol^-1s^-1".
            after_exponent = self._tokens[mark - 1].kind in {"exponent", "bare", "close"}
            if self._peek() in {"symbol", "open"} and (separated or after_exponent):
                factors += self._factor(depth)
            else:
                if separated == "dot":
                    raise UnitTextError("ends with a dot or asterisk", "name the next unit")
                return factors

    def _skip_spaces(self) -> None:
        while self._peek() == "space":
            self._take()

    def _skip_separators(self) -> str:
        """Skip spaces and at most one dot; say which there was."""
        found = ""
        while self._peek() == "space" or (self._peek() == "dot" and found != "dot"):
            found = "dot" if self._take().kind == "dot" or found == "dot" else "space"
        return found

    def _factor(self, depth: int) -> _Factors:
        kind = self._peek()
        if kind == "open":
            self._take()
            self._skip_spaces()
            inner = self._unit(depth + 1)
            self._skip_spaces()
            if self._peek() != "close":
                raise UnitTextError("has an open bracket", "close it")
            self._take()
            power = self._exponent()
            return [(symbol, each * power) for symbol, each in inner]
        if kind == "symbol":
            symbol = self._take().text
            return [(ALIASES.get(symbol, symbol), self._exponent())]
        if kind == "bare" and self._tokens[self._next].text == "1":
            self._take()
            return [("1", Fraction(1))]
        if kind in {"bare", "exponent"}:
            raise UnitTextError(
                f"has a number where a unit should be, {self._tokens[self._next].text}",
                "only a power of ten stands before a unit, as in 10^-3 s^-1",
            )
        raise UnitTextError("a unit is missing in it", "write units as in L mol^-1 s^-1")

    def _exponent(self) -> Fraction:
        kind = self._peek()
        if kind in {"exponent", "bare"}:
            return _exponent(self._take().text)
        # "mol -1": superscripts that were lost in copying leave a sign behind.
        if kind == "space" and self._peek(1) == "bare" and self._signed(1):
            self._take()
            return _exponent(self._take().text)
        return Fraction(1)


def _exponent(text: str) -> Fraction:
    digits = text.lstrip("^* ").strip("()")
    exact = Fraction(digits) if not digits.endswith("/0") else Fraction(0)
    power = exact.limit_denominator(_LARGEST_DENOMINATOR)
    if abs(power - exact) > Fraction(1, 10**4) or abs(power) > _LARGEST_EXPONENT or not power:
        raise UnitTextError(f"has an exponent that cannot be, {digits}", "check the exponent")
    return power


def _inverted(factors: _Factors) -> _Factors:
    return [(symbol, -power) for symbol, power in factors]


def _two_readings(start: _Factors, rest: _Factors, sign: str) -> UnitTextError:
    one, other = (
        UnitText(tuple(each for each in [*start, *end] if each[0] != "1")).canonical()
        for end in (_inverted(rest), rest)
    )
    what = "has two solidi" if sign == "/" else "has a product behind a solidus"
    return UnitTextError(
        f"{what}, which can be read as {one} or as {other}", f"write {one} or {other}"
    )

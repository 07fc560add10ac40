"""Tables as Markdown and LaTeX: they arrange what the cells say, and decide no digits."""

from __future__ import annotations

import re
import unicodedata
from typing import TYPE_CHECKING

from knought.rounding import superscript

if TYPE_CHECKING:
    from knought.reporting.cells import Cell, Column, Table

__all__ = ["LATEX_PACKAGES", "latex_table", "latex_text", "markdown_table", "markdown_text"]

#: What a document must load for the tables.
LATEX_PACKAGES = (
    r"\usepackage[T1]{fontenc}",
    r"\usepackage{array,booktabs,longtable}",
    r"\usepackage[separate-uncertainty=true]{siunitx}",
)

_MARKDOWN_SPECIAL = re.compile(r"([\\`*_{}\[\]<>#|~$!])")


def markdown_table(table: Table) -> str:
    """Return a table as Markdown with pipes; every sign of a label is escaped."""
    heads = [markdown_text(column.heading("text")) for column in table.columns]
    rules = ["---:" if column.numeric else ":---" for column in table.columns]
    rows = [[markdown_text(cell.written("text")) for cell in row] for row in table.rows]
    lines = [f"**{markdown_text(table.title)}**", ""]
    lines += [f"| {' | '.join(row)} |" for row in (heads, rules, *rows)]
    for note in table.notes:
        lines += ["", markdown_text(note)]
    return "\n".join(lines) + "\n"


def markdown_text(text: str) -> str:
    """Return words as Markdown on one line; nothing of them is markup afterwards."""
    return _MARKDOWN_SPECIAL.sub(r"\\\1", " ".join(text.split()))


#: Longer tables may break across pages, where no float can.
_LONGEST_FLOAT = 40

#: Words longer than this are set in lines of a column of fixed width.
_LONGEST_LINE = 32

_NUMBER = r"[+-]?\d+(?:\.\d+)?"
_PAIR = re.compile(
    rf"^\(?(?P<value>{_NUMBER})(?: \\pm (?P<u>\d+(?:\.\d+)?))?\)?"
    r"(?:\s*\\times\s*10\^\{(?P<power>-?\d+)\})?$"
)


def latex_table(table: Table) -> str:
    r"""Return a table as LaTeX that needs the packages of :data:`LATEX_PACKAGES`.

    Parameters
    ----------
    table
        Its rules are those of booktabs, its numbers and units ``\num`` and ``\unit`` of siunitx.
        Nothing in a label is a command.
    """
    kinds = "".join(_column_kind(table, j) for j in range(len(table.columns)))
    head = " & ".join(_head(column) for column in table.columns) + r" \\"
    rows = [" & ".join(_cell(cell) for cell in row) + r" \\" for row in table.rows]
    caption = rf"\caption{{{latex_text(table.title)}}}\label{{tab:{table.name}}}"
    notes = [
        rf"{{\par\smallskip\raggedright\footnotesize {latex_text(note)}\par}}"
        for note in table.notes
    ]
    if len(table.rows) > _LONGEST_FLOAT:
        lines = [
            rf"\begin{{longtable}}{{@{{}}{kinds}@{{}}}}",
            rf"{caption}\\",
            *(r"\toprule", head, r"\midrule", r"\endhead", r"\bottomrule", r"\endfoot"),
            *rows,
            r"\end{longtable}",
            *notes,
        ]
    else:
        lines = [
            *(r"\begin{table}", r"\centering\small", caption),
            rf"\begin{{tabular}}{{@{{}}{kinds}@{{}}}}",
            *(r"\toprule", head, r"\midrule", *rows, r"\bottomrule", r"\end{tabular}"),
            *notes,
            r"\end{table}",
        ]
    return "\n".join(lines) + "\n"


def _column_kind(table: Table, j: int) -> str:
    if table.columns[j].numeric:
        return "r"
    longest = max((len(row[j].written("text")) for row in table.rows), default=0)
    return r">{\raggedright\arraybackslash}p{4.5cm}" if longest > _LONGEST_LINE else "l"


def _head(column: Column) -> str:
    sign = _sign(column.sign("latex"), math="latex" in dict(column.signs))
    if column.unit == "1":
        return sign
    unit = rf"\unit{{{_unit(column.unit)}}}"
    return f"{sign} / ({unit})" if " " in column.unit else f"{sign} / {unit}"


def _sign(text: str, *, math: bool) -> str:
    if not math:
        return latex_text(text)
    formula = text.replace("Δ", r"\Delta ")
    return f"${formula}$"


def _unit(unit: str) -> str:
    """Return a unit of the registry as siunitx reads it."""
    pieces = []
    for piece in unit.split():
        symbol, _, exponent = piece.partition("^")
        symbol = {"Å": r"\angstrom", "°C": r"\degreeCelsius", "%": r"\percent"}.get(symbol, symbol)
        pieces.append(symbol + (f"^{{{exponent}}}" if exponent else ""))
    return ".".join(pieces)


def _cell(cell: Cell) -> str:
    by_layout = dict(cell.texts)
    if "latex" not in by_layout:
        return latex_text(by_layout["text"])
    text = by_layout["latex"]
    ends = text.split(" to ")
    numbers = [_num(end) for end in ends]
    known = [number for number in numbers if number is not None]
    if len(known) == len(ends):
        return " to ".join(known)
    if text.isalpha() or not text:
        return latex_text(text)
    return _sign(text, math=True)


def _num(text: str) -> str | None:
    found = _PAIR.match(text.strip())
    if found is None:
        return None
    spread = f" \\pm {found['u']}" if found["u"] else ""
    power = f"e{found['power']}" if found["power"] else ""
    return rf"\num{{{found['value']}{spread}{power}}}"


_LATEX = {
    "\\": r"\textbackslash{}",
    "{": r"\{",
    "}": r"\}",
    "$": r"\$",
    "&": r"\&",
    "#": r"\#",
    "%": r"\%",
    "_": r"\_",
    "^": r"\textasciicircum{}",
    "~": r"\textasciitilde{}",
    "<": r"\textless{}",
    ">": r"\textgreater{}",
    "|": r"\textbar{}",
    '"': r"\textquotedbl{}",
    "[": "{[}",
    "]": "{]}",
    "*": "{*}",
    "`": r"\textasciigrave{}",
    "−": "$-$",
    "–": "--",
    "—": "---",
    "→": r"$\to$",
    "±": r"$\pm$",
    "×": r"$\times$",
    "·": r"$\cdot$",
    "√": r"$\surd$",
    "∂": r"$\partial$",
    "≤": r"$\leq$",
    "≥": r"$\geq$",
    "°": r"\textdegree{}",
    "‡": r"$^{\ddagger}$",
    "Δ": r"$\Delta$",
    "χ": r"$\chi$",
    "ν": r"$\nu$",
    "β": r"$\beta$",
    "ε": r"$\varepsilon$",
    "λ": r"$\lambda$",
    "ρ": r"$\rho$",
    "σ": r"$\sigma$",
    "μ": r"$\mu$",
    "′": r"$'$",
    "∞": r"$\infty$",
    "ₐ": r"$_{\mathrm{a}}$",
    "ₚ": r"$_{p}$",
    "“": "``",
    "”": "''",
    "‘": "`",
    "’": "'",
    "…": r"\dots{}",
    **{raised: f"$^{{{plain}}}$" for plain in "0123456789-+" if (raised := superscript(plain))},
    **{lowered: f"$_{{{i}}}$" for i, lowered in enumerate("₀₁₂₃₄₅₆₇₈₉")},
}

#: Latin letters that the T1 encoding holds end here (Latin Extended-A).
_LAST_LETTER = "\u017f"


def latex_text(text: str) -> str:
    """Return words as LaTeX text; what T1 has no letter for is written without its accents, or ?.

    Parameters
    ----------
    text
        Anything; nothing of it is a command afterwards.
    """
    return "".join(_letter(letter) for letter in " ".join(text.split()))


def _letter(letter: str) -> str:
    if letter in _LATEX:
        return _LATEX[letter]
    if letter.isascii():
        return letter if letter.isprintable() else "?"
    if letter.isalpha() and letter <= _LAST_LETTER:
        return letter
    plain = unicodedata.normalize("NFKD", letter)[0]
    return plain if plain.isascii() and plain.isalnum() else "?"

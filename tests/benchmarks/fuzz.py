"""Fuzz the doors of tables and texts for as long as asked.

    python -m tests.benchmarks.fuzz --seconds 600 [--seed 1] [--short-only]

First every door gets one megabyte of each of many pieces (minutes in all), and the slowest are
printed; then mutated good tables follow until the time is over. A traceback other than an
InputError, or an input that takes more than a minute of processor time, is printed and ends it with
status 1.
"""

from __future__ import annotations

import argparse
import io
import random
import sys
import time
from typing import TYPE_CHECKING, Any

from knought.chemistry.headers import parse_header
from knought.chemistry.numbers import decimal_evidence, read_number
from knought.chemistry.order_text import parse_order
from knought.chemistry.species import parse_reactants, parse_species
from knought.chemistry.uncertainty_words import parse_meaning
from knought.chemistry.units import parse_unit
from knought.discussion.literature_table import read_literature_text
from knought.errors import InputError
from knought.measurement.reading import read_rates, read_text
from tests.corpus.workbooks import ods_of, xlsx_of

if TYPE_CHECKING:
    from collections.abc import Callable

MEGABYTE = 1_000_000
LONGEST = 60.0

PIECES = (
    *"(9^/ .,-+−·×±e⁻¹²a[]%<;\t\nMx0={}*",
    *("10^", "10^3 ", "k/", "1e", "1.", "1,", "1 ", "Na", "Na+", "[Fe", "(NH3)", "2-", "u(", "ln "),
    *("lg ", "√", "sqrt(", '"', '"a",', "a\n", "1;", "1\t", "T/K,", "\u202f", "1 000 ", "1.000,"),
    *("(5)", "M^-1 ", "mol ", "k x ", "\u0300", "\x00", "#a\n", "T/K,k/s^-1\n", "1,1\n", "a,a\n"),
)
GOOD = (
    "run;t/°C;I/(mol/L);10^3 k/s^-1;u_r(k)/%;use;reason\n"
    "1;25,0;0,010;2,41;2;yes;\n2;35,0;0,100;5,10;3;no;spilled\n3;45,0;0,100;9,99;3;;\n",
    "label\tT/K\tk/(L mol^-1 s^-1)\torder\nX\t298\t1.0(2)\t2\nY\t308\t2.0\t2\n",
)
ROWS: list[list[Any]] = [["T/K", "k/s^-1", "note"], [298.15, 2.41e-3, "a"], [308.15, 5.1e-3, "b"]]
BOOKS = (xlsx_of(ROWS), ods_of(ROWS))

DOORS: dict[str, Callable[[str], object]] = {
    "unit": parse_unit,
    "number": read_number,
    "number with comma": lambda text: read_number(text, ","),
    "decimal mark": decimal_evidence,
    "header": parse_header,
    "meaning of ±": parse_meaning,
    "species": parse_species,
    "reactants": parse_reactants,
    "order": parse_order,
    "rates": read_text,
    "literature": read_literature_text,
}


def tried(door: str, text: str) -> float:
    """Put a text to a door and return the seconds; anything but a refusal goes up."""
    start = time.process_time()
    try:
        DOORS[door](text)
    except InputError as error:
        if len(str(error)) > 20_000:
            raise AssertionError("the refusal repeats its input") from error
    taken = time.process_time() - start
    if taken > LONGEST:
        raise TimeoutError(f"{taken:.0f} s")
    return taken


def long_ones() -> None:
    """A megabyte of each piece at every door; print the slowest."""
    slowest = []
    for door in DOORS:
        for piece in PIECES:
            for head in ("", "k/", "T/K,k/s^-1\n300,"):
                text = head + piece * ((MEGABYTE - len(head)) // len(piece.encode()))
                try:
                    slowest.append((tried(door, text), door, head, piece))
                except Exception:
                    print(f"{door}: a megabyte of {piece!r} after {head!r}", file=sys.stderr)
                    raise
    for taken, door, head, piece in sorted(slowest, reverse=True)[:10]:
        print(f"{taken:6.2f} s  {door}: a megabyte of {piece!r} after {head!r}")


def mutated(text: str, random_: random.Random) -> str:
    """A text with some places cut out, doubled, or replaced by a piece."""
    for _ in range(random_.randint(1, 6)):
        place = random_.randrange(len(text) + 1)
        cut = random_.randrange(4)
        text = text[:place] + random_.choice(("", *PIECES)) + text[place + cut :]
    return text


def mutated_bytes(data: bytes, random_: random.Random) -> bytes:
    """Bytes with some of them changed."""
    changed = bytearray(data)
    for _ in range(random_.randint(1, 4)):
        changed[random_.randrange(len(changed))] = random_.randrange(256)
    return bytes(changed)


def short_ones(seconds: float, seed: int) -> int:
    """Mutated good inputs until the time is over; return how many."""
    random_ = random.Random(seed)  # noqa: S311 - fuzzing, no secret
    end, count = time.monotonic() + seconds, 0
    while time.monotonic() < end:
        door = random_.choice(tuple(DOORS))
        text = mutated(random_.choice((*GOOD, *GOOD[0].split(";"), "Fe(CN)6^3-", "")), random_)
        book = mutated_bytes(random_.choice(BOOKS), random_)
        try:
            tried(door, text)
            read_rates(io.BytesIO(book))
        except InputError:
            pass
        except Exception:
            print(f"{door}: {text!r}\nbook: {book!r}", file=sys.stderr)
            raise
        count += 1
    return count


def main() -> None:
    """Fuzz and print."""
    parser = argparse.ArgumentParser()
    parser.add_argument("--seconds", type=float, default=60.0, help="time for mutated inputs")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--short-only", action="store_true", help="leave the megabytes out")
    said = parser.parse_args()
    if not said.short_only:
        long_ones()
    print(f"{short_ones(said.seconds, said.seed)} mutated inputs: no traceback")


if __name__ == "__main__":
    main()

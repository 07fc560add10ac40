"""Reading tables of rate constants from the files that laboratories really have."""

from knought.measurement.reading.account import AccountLine, account_lines
from knought.measurement.reading.read import read_rates, read_text

__all__ = ["AccountLine", "account_lines", "read_rates", "read_text"]

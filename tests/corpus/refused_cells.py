"""Tables that are refused for what stands in their cells, each with its whole message."""

from __future__ import annotations

from tests.corpus.case import Refused

__all__ = ["REFUSED_CELLS"]

REFUSED_CELLS = (
    Refused(
        "all-at-once.csv",
        b"run,T/K,I/(mol/L),k/s^-1,u(k)/s^-1,n\n"
        b"a,298.15,-0.1,abc,0.1,2\nb,-3,0.1,2.0,0,x\nc,308.15,oops,-1,,2\n",
        (
            "8 problems:\n  "
            'all-at-once.csv, row 2, column k/s^-1: is not a number (read: "abc"). Write numbers '
            "as 2.41 or 2.41e-3; leave the cell blank for none.\n  "
            "all-at-once.csv, row 2, column I/(mol/L): gives an ionic strength below zero (read: "
            '"-0.1"). Check the sign.\n  '
            'all-at-once.csv, row 3, column n: is not a number (read: "x"). Write numbers as 2.41 '
            "or 2.41e-3; leave the cell blank for none.\n  "
            'all-at-once.csv, row 3, column T/K: is at or below 0 K (read: "-3"). Check the '
            "temperature and its unit.\n  "
            "all-at-once.csv, row 3, column u(k)/s^-1: the uncertainty is not above zero (read: "
            '"0"). No measurement is exact; leave the whole column blank if the uncertainty is '
            "unknown.\n  "
            'all-at-once.csv, row 4, column I/(mol/L): is not a number (read: "oops"). Write '
            "numbers as 2.41 or 2.41e-3; leave the cell blank for none.\n  "
            "all-at-once.csv, row 4, column k/s^-1: gives a rate constant that is not above zero "
            '(read: "-1"). A rate constant is positive; leave the run out (use: no, with a '
            "reason) if it failed.\n  "
            "all-at-once.csv, row 4, column u(k)/s^-1: the uncertainty is blank here and given in "
            "other rows. Give it in every row, or leave the whole column blank if it is unknown."
        ),
    ),
    Refused(
        "two-marks.csv",
        b"T/K;k/s^-1\n298,15;0.5\n308,15;0.7\n",
        (
            "two-marks.csv, row 2, column T/K: has a decimal comma, and row 2, column k/s^-1, "
            'has a decimal point (0.5) (read: "298,15"). Use one decimal mark in the whole '
            "file."
        ),
    ),
    Refused(
        "thousands-or-decimals.csv",
        b"T/K;k/s^-1\n298,15;1.234\n308,15;2.345\n",
        (
            "2 problems:\n  "
            "thousands-or-decimals.csv, row 2, column k/s^-1: can be read as 1,234 or as 1234, "
            'for the decimal mark of the file is the comma (read: "1.234"). Write 1,234 or '
            "1234, or state the mark: decimal.\n  "
            "thousands-or-decimals.csv, row 3, column k/s^-1: can be read as 2,345 or as 2345, "
            'for the decimal mark of the file is the comma (read: "2.345"). Write 2,345 or '
            "2345, or state the mark: decimal."
        ),
    ),
    Refused(
        "either-mark.csv",
        b"T/K;k/s^-1\n298;1.234\n308;2.345\n",
        (
            "either-mark.csv, row 2, column k/s^-1: can be read as 1.234 or as 1234, and no "
            'other number shows which decimal mark the file uses (read: "1.234"). Say which '
            'one it is: decimal="." or decimal="," (--decimal).'
        ),
    ),
    Refused(
        "either-comma.tsv",
        b"T/K\tk/s^-1\n298\t1,234\n308\t2,345\n",
        (
            "either-comma.tsv, row 2, column k/s^-1: can be read as 1.234 or as 1234, and no "
            'other number shows which decimal mark the file uses (read: "1,234"). Say which '
            'one it is: decimal="." or decimal="," (--decimal).'
        ),
    ),
    Refused(
        "dates.csv",
        b"T/K,k/s^-1\n298.15,2-Mar\n308.15,3/4\n318.15,03.04.2024\n328.15,2024-03-04\n",
        (
            "4 problems:\n  "
            "dates.csv, row 2, column k/s^-1: looks like a date, of which day and month can be "
            'read in two ways, and not like a number (read: "2-Mar"). A spreadsheet may have '
            "made a date of the number; type it again in a column of text.\n  "
            "dates.csv, row 3, column k/s^-1: looks like a date, of which day and month can be "
            'read in two ways, and not like a number (read: "3/4"). A spreadsheet may have '
            "made a date of the number; type it again in a column of text.\n  "
            "dates.csv, row 4, column k/s^-1: looks like a date, of which day and month can be "
            'read in two ways, and not like a number (read: "03.04.2024"). A spreadsheet may '
            "have made a date of the number; type it again in a column of text.\n  "
            "dates.csv, row 5, column k/s^-1: is a date or a time where a number should be "
            '(read: "2024-03-04"). A spreadsheet may have made a date of the number; type it '
            "again in a column of text."
        ),
    ),
    Refused(
        "bounds.csv",
        b"T/K,k/s^-1\n298.15,< 0.01\n308.15,~5e-3\n",
        (
            "2 problems:\n  "
            "bounds.csv, row 2, column k/s^-1: is a bound or an estimate and no value (read: "
            '"< 0.01"). Give the value, or leave the run out (use: no, with a reason).\n  '
            "bounds.csv, row 3, column k/s^-1: is a bound or an estimate and no value (read: "
            '"~5e-3"). Give the value, or leave the run out (use: no, with a reason).'
        ),
    ),
    Refused(
        "blanks.csv",
        b"run,T/K,I/M,k/s^-1,u(k)/s^-1\n"
        b"1,298.15,0.1,2.41e-3,1e-5\n"
        b"2,,0.1,5.1e-3,1e-5\n"
        b"3,308.15,,5.1e-3,1e-5\n"
        b"4,308.15,0.1,n/a,1e-5\n"
        b"5,308.15,0.1,5.1e-3,\n",
        (
            "4 problems:\n  "
            "blanks.csv, row 3, column T/K: the temperature is blank. Fill it in, or leave the "
            "run out (use: no, with a reason).\n  "
            "blanks.csv, row 4, column I/M: the ionic strength is blank here and given in "
            "other rows. Fill it in, or leave the run out (use: no, with a reason).\n  "
            'blanks.csv, row 5, column k/s^-1: the rate constant is blank (read: "n/a"). Fill '
            "it in, or leave the run out (use: no, with a reason).\n  "
            "blanks.csv, row 6, column u(k)/s^-1: the uncertainty is blank here and given in "
            "other rows. Give it in every row, or leave the whole column blank if it is "
            "unknown."
        ),
    ),
    Refused(
        "last-cell-missing.csv",
        b"T/K,k/s^-1\n298.15,2.41e-3\n308.15,\n",
        (
            "last-cell-missing.csv, row 3, column k/s^-1: the rate constant is blank. Fill it "
            "in, or leave the run out (use: no, with a reason)."
        ),
    ),
    Refused(
        "only-I.csv",
        b"run,T/K,I/M,k/s^-1\n1,298.15,0.1,2.41e-3\n2,,0.1,\n",
        (
            "2 problems:\n  "
            "only-I.csv, row 3, column T/K: the temperature is blank. Fill it in, or leave the "
            "run out (use: no, with a reason).\n  "
            "only-I.csv, row 3, column k/s^-1: the rate constant is blank. Fill it in, or "
            "leave the run out (use: no, with a reason)."
        ),
    ),
    Refused(
        "impossible.csv",
        b"T/K,I/M,k/s^-1,u(k)/s^-1\n"
        b"-5,0.1,2.41e-3,1e-5\n"
        b"0,0.1,5.1e-3,1e-5\n"
        b"308.15,-0.1,5.1e-3,1e-5\n"
        b"308.15,0.1,0,1e-5\n"
        b"308.15,0.1,-2,1e-5\n"
        b"308.15,0.1,5.1e-3,0\n"
        b"308.15,0.1,5.1e-3,-1e-5\n",
        (
            "7 problems:\n  "
            'impossible.csv, row 2, column T/K: is at or below 0 K (read: "-5"). Check the '
            "temperature and its unit.\n  "
            'impossible.csv, row 3, column T/K: is at or below 0 K (read: "0"). Check the '
            "temperature and its unit.\n  "
            "impossible.csv, row 4, column I/M: gives an ionic strength below zero (read: "
            '"-0.1"). Check the sign.\n  '
            "impossible.csv, row 5, column k/s^-1: gives a rate constant that is not above "
            'zero (read: "0"). A rate constant is positive; leave the run out (use: no, with a '
            "reason) if it failed.\n  "
            "impossible.csv, row 6, column k/s^-1: gives a rate constant that is not above "
            'zero (read: "-2"). A rate constant is positive; leave the run out (use: no, with '
            "a reason) if it failed.\n  "
            "impossible.csv, row 7, column u(k)/s^-1: the uncertainty is not above zero (read: "
            '"0"). No measurement is exact; leave the whole column blank if the uncertainty is '
            "unknown.\n  "
            "impossible.csv, row 8, column u(k)/s^-1: the uncertainty is not above zero (read: "
            '"-1e-5"). No measurement is exact; leave the whole column blank if the '
            "uncertainty is unknown."
        ),
    ),
    Refused(
        "below-absolute-zero.csv",
        ("t/°C,k/s^-1\n-273.15,2.41e-3\n-300,5e-3\n").encode(),
        (
            "2 problems:\n  "
            "below-absolute-zero.csv, row 2, column t/°C: is at or below 0 K (read: "
            '"-273.15"). Check the temperature and its unit.\n  '
            'below-absolute-zero.csv, row 3, column t/°C: is at or below 0 K (read: "-300"). '
            "Check the temperature and its unit."
        ),
    ),
    Refused(
        "garbage.csv",
        b"T/K,k/s^-1\n"
        b"298.15,abc\n"
        b"308.15,1.2.3\n"
        b"318.15,1e999\n"
        b"328.15,1e-999\n"
        b"338.15,1.2x10-3\n"
        b"348.15,1'234\n"
        b"358.15,1_000\n",
        (
            "7 problems:\n  "
            'garbage.csv, row 2, column k/s^-1: is not a number (read: "abc"). Write numbers '
            "as 2.41 or 2.41e-3; leave the cell blank for none.\n  "
            'garbage.csv, row 3, column k/s^-1: is not a number (read: "1.2.3"). Write numbers '
            "as 2.41 or 2.41e-3; leave the cell blank for none.\n  "
            'garbage.csv, row 4, column k/s^-1: is too large for a number (read: "1e999"). '
            "Check the power of ten.\n  "
            'garbage.csv, row 5, column k/s^-1: is too small for a number (read: "1e-999"). '
            "Check the power of ten.\n  "
            "garbage.csv, row 6, column k/s^-1: has lost the superscript of its power of ten "
            '(read: "1.2x10-3"). Write it as 2.41e-3 or 2.41 × 10^-3.\n  '
            "garbage.csv, row 7, column k/s^-1: has its digits grouped by apostrophes (read: "
            '"1\'234"). Write the number without them.\n  '
            'garbage.csv, row 8, column k/s^-1: is not a number (read: "1_000"). Write numbers '
            "as 2.41 or 2.41e-3; leave the cell blank for none."
        ),
    ),
    Refused(
        "arabic-digits.csv",
        ("T/K,k/s^-1\n٢٩٨,2.41e-3\n298,٢\n").encode(),
        (
            "2 problems:\n  "
            'arabic-digits.csv, row 2, column T/K: is not a number (read: "٢٩٨"). Write '
            "numbers as 2.41 or 2.41e-3; leave the cell blank for none.\n  "
            'arabic-digits.csv, row 3, column k/s^-1: is not a number (read: "٢"). Write '
            "numbers as 2.41 or 2.41e-3; leave the cell blank for none."
        ),
    ),
    Refused(
        "spreadsheet-errors.csv",
        b"T/K,k/s^-1\n298.15,#DIV/0!\n308.15,=B2*2\n",
        (
            "2 problems:\n  "
            "spreadsheet-errors.csv, row 2, column k/s^-1: is an error of the spreadsheet "
            '(read: "#DIV/0!"). Mend the formula there.\n  '
            "spreadsheet-errors.csv, row 3, column k/s^-1: is a formula whose value is not in "
            'the file (read: "=B2*2"). Open the file in the spreadsheet program and save it '
            "there, or paste the values."
        ),
    ),
    Refused(
        "sides-of-plus-minus.csv",
        ("T/K,k/s^-1\n298.15,2.41 ± 0.05e-3\n").encode(),
        (
            "sides-of-plus-minus.csv, row 2, column k/s^-1: has a power of ten on one side of "
            '± only (read: "2.41 ± 0.05e-3"). Write (2.41 ± 0.05)e-3, or a power of ten on '
            "both sides."
        ),
    ),
    Refused(
        "some-brackets.csv",
        b"T/K,k/s^-1\n298.15,2.41(5)e-3\n308.15,5.1e-3\n",
        (
            "some-brackets.csv, row 3, column k/s^-1: has no uncertainty in its cell, and "
            'other rows have one (read: "5.1e-3"). Give it in every row or in none.'
        ),
    ),
    Refused(
        "uncertain-uncertainty.csv",
        b"T/K,k/s^-1,u(k)/s^-1\n298.15,2.41e-3,5.0(2)e-5\n",
        (
            "uncertain-uncertainty.csv, row 2, column u(k)/s^-1: has an uncertainty where a "
            'number alone belongs (read: "5.0(2)e-5"). Give the number alone.'
        ),
    ),
    Refused(
        "two-kinds-of-brackets.csv",
        ("T/K,k/s^-1\n298.15,2.41(5)e-3\n308.15,5.1e-3 ± 0.1e-3\n").encode(),
        (
            "two-kinds-of-brackets.csv, row 3, column k/s^-1: writes its uncertainty in "
            'another way than the cells above (read: "5.1e-3 ± 0.1e-3"). Write all of them as '
            "2.41(5)e-3, or all of them as 2.41e-3 ± 0.05e-3."
        ),
    ),
    Refused(
        "half-width-of-one.csv",
        b"T/K,k/s^-1,CI95(k)/s^-1,n\n298.15,0.5,0.02,1\n",
        (
            "half-width-of-one.csv, row 2, column CI95(k)/s^-1: a 95 % half-width of a mean "
            'needs at least two determinations, and n is below 2 here (read: "0.02"). Check n, '
            "or leave the column n out if the half-width does not come from replicates."
        ),
    ),
    Refused(
        "disagreeing.csv",
        ("t/°C,T/K,k/s^-1\n25.0,298.0,2.41e-3\n35.0,308.0,5.1e-3\n").encode(),
        (
            "disagreeing.csv, row 2, column T/K: gives 298 K, and t/°C gives 298.15 K for the "
            'same run, and one more run differs (read: "298.0"). Mend one of the two, or keep '
            "one column only."
        ),
    ),
    Refused(
        "no-reason.csv",
        b"T/K,k/s^-1,use\n298.15,2.41e-3,no\n308.15,5.1e-3,maybe\n",
        (
            "2 problems:\n  "
            "no-reason.csv, row 2, column reason: the run is left out without a reason. Say "
            "why in the column reason.\n  "
            'no-reason.csv, row 3, column use: is neither yes nor no (read: "maybe"). Write '
            "yes or no."
        ),
    ),
    Refused(
        "n-is-no-count.csv",
        b"T/K,k/s^-1,n\n298.15,2.41e-3,2.5\n308.15,5.1e-3,0\n",
        (
            "2 problems:\n  "
            'n-is-no-count.csv, row 2, column n: is no number of determinations (read: "2.5"). '
            "Give how many determinations were averaged, a whole number from 1, in every "
            "row.\n  "
            'n-is-no-count.csv, row 3, column n: is no number of determinations (read: "0"). '
            "Give how many determinations were averaged, a whole number from 1, in every row."
        ),
    ),
    Refused(
        "second-table.csv",
        b"T/K,k/s^-1\n298.15,2.41e-3\n\nT/K,k/min^-1\n298.15,0.1\n",
        (
            'second-table.csv, row 4: another table begins here (read: "T/K | k/min^-1"). Give '
            "one table a sheet or file."
        ),
    ),
    Refused(
        "no-runs.csv",
        b"T/K,k/s^-1\n",
        ("no-runs.csv, row 1: there are no runs beneath the header. Give one row a run."),
    ),
)

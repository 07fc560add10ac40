"""Text files that are read, from the plain one to what laboratories really have."""

from __future__ import annotations

import math

from tests.corpus.case import Accepted

__all__ = ["ACCEPTED_TEXTS"]

#: 97.5 % quantiles of the normal distribution (from memory, and Python's statistics module) and of
#: Student's t with two degrees of freedom, from its distribution function 1/2 + t/(2 √(2 + t²)).
NORMAL = 1.959963984540054
STUDENT_2 = 0.95 * math.sqrt(2 / (1 - 0.95**2))

_PLAIN = {"T": [298.15, 308.15], "k": [2.41e-3, 5.1e-3]}

ACCEPTED_TEXTS = (
    Accepted(
        "least.csv",
        b"T/K,k/s^-1\n298.15,2.41e-3\n308.15,5.1e-3\n",
        _PLAIN | {"order": [1], "run": ["1", "2"]},
        (
            "UTF-8, comma between cells",
            "T/K read as temperature: 298.15 → 298.15 K",
            "k/s^-1 read as rate constant of order 1: 2.41e-3 → 0.00241 s^-1",
            "2 of 2 runs used",
        ),
    ),
    Accepted(
        "whole.csv",
        "run,t/°C,I/(mol/L),k/(L mol^-1 s^-1),u_r(k)/%,u(T)/K,u(I)/(mol/L),n,salt,batch,use,"
        "reason,note,c(NaClO4)/(mmol/L)\n"
        "a,25.0,0.01,0.5,2,0.1,0.0002,3,NaCl,mon,yes,,first,9\n"
        "b,35.0,0.02,0.25,4,0.1,0.0004,2,NaCl,tue,no,spilled,,18.5\n".encode(),
        {
            "T": [298.15, 308.15], "I": [0.01, 0.02], "k": [0.5, 0.25], "u_k": [0.01, 0.01],
            "u_T": [0.1, 0.1], "u_I": [0.0002, 0.0004], "determinations": [3, 2],
            "run": ["a", "b"], "salt": ["NaCl", "NaCl"], "batch": ["mon", "tue"],
            "used": [True, False], "reason": ["", "spilled"], "note": ["first", ""],
            "c(NaClO4)": [0.009, 0.0185], "order": [2],
        },
        (
            "t/°C read as temperature, +273.15: 25.0 → 298.15 K",
            "c(NaClO4)/(mmol/L) read as concentration of NaClO4, × 10^-3: 9 → 0.009 mol L^-1",
            "1 of 2 runs used",
            "row 3 is not used: spilled",
        ),
    ),
    Accepted(
        "german.csv",
        "t/°C;10^3 k/s^-1;u(k)/(10^-3 s^-1)\r\n25,00;2,41;0,05\r\n35,00;5,10;0,09\r\n".encode(
            "cp1252"
        ),
        {
            "T": [298.15, 308.15],
            "k": [2.41 / 1000, 5.10 / 1000],
            "u_k": [0.05 / 1000, 0.09 / 1000],
        },
        ("Windows-1252, semicolon between cells",
         "10^3 k/s^-1 read as rate constant of order 1, × 10^-3: 2,41 → 0.00241 s^-1"),
    ),
    Accepted(
        "byte-order-mark.csv",
        b"\xef\xbb\xbfT/K,k/s^-1\r\n298.15,2.41e-3\r\n308.15,5.1e-3",
        _PLAIN,
    ),
    Accepted(
        "unicode-text.txt",
        "t/°C\tk/s⁻¹\r\n25\t2,41·10⁻³\r\n35,0\t5,1·10⁻³\r\n".encode("utf-16"),
        _PLAIN,
        ("UTF-16, tab between cells",),
    ),
    Accepted(
        "big-endian.txt",
        b"\xfe\xff" + "T/K\tk/s⁻¹\n298.15\t2.41 × 10⁻³\n308.15\t5.1 × 10⁻³\n".encode("utf-16-be"),
        _PLAIN,
    ),
    Accepted(
        "old-mac.csv", b"T/K,k/s^-1\r298.15,2.41e-3\r308.15,5.1e-3\r", _PLAIN
    ),
    Accepted(
        "latin-1.csv",
        "t/°C;k/s^-1;note\n25,0;2,41e-3;für Übung × ½\n35,0;5,1e-3;\n".encode("iso-8859-1"),
        _PLAIN | {"note": ["für Übung × ½", ""]},
    ),
    Accepted(
        "spreadsheet-says.csv",
        b"sep=;\r\nT/K;k/s^-1\r\n298,15;2,41e-3\r\n308,15;5,1e-3\r\n",
        _PLAIN,
    ),
    Accepted(
        "quoted-commas.csv", b'T/K,k/s^-1\n"298,15","2,41e-3"\n"308,15","5,1e-3"\n', _PLAIN
    ),
    Accepted(
        "comments.csv",
        b"# measured in March\n# T by thermistor\nT/K,k/s^-1\n298.15,2.41e-3\n"
        b"# 303.15,9.9 was not at equilibrium\n308.15,5.1e-3\n",
        _PLAIN,
        ("row 5 left out (a comment): # 303.15 9.9 was not at equilibrium",),
    ),
    Accepted(
        "header-in-comment.txt", b"# T/K\tk/s^-1\n298.15\t2.41e-3\n308.15\t5.1e-3\n", _PLAIN
    ),
    Accepted(
        "hash-labels.csv",
        b"#,T/K,k/s^-1\n#1,298.15,2.41e-3\n#2,308.15,5.1e-3\n",
        _PLAIN | {"run": ["#1", "#2"]},
    ),
    Accepted(
        "units-row.csv",
        "run,T,k,u\n,K,s⁻¹,s⁻¹\n1,298.15,2.41e-3,1e-5\n2,308.15,5.1e-3,2e-5\n".encode(),
        _PLAIN | {"u_k": [1e-5, 2e-5]},
        ("rows 1 and 2 read as one header",),
    ),
    Accepted(
        "units-in-brackets.tsv",
        "Temperature\tRate constant\tIonic strength\n[°C]\t[min-1]\t[mM]\n"
        "25\t0.6\t10\n35\t1.2\t20\n".encode(),
        {"T": [298.15, 308.15], "k": [0.01, 0.02], "I": [0.01, 0.02]},
    ),
    Accepted(
        "labels-like-headers.csv",
        b"run,T/K,k/s^-1,note\nT,298.15,2.41e-3,\nk,308.15,5.1e-3,;:\n",
        _PLAIN | {"run": ["T", "k"], "note": ["", ";:"]},
    ),
    Accepted(
        "two-lines.csv",
        "temperature,rate constant,\nT/K,value / s⁻¹,SD / s⁻¹\n"
        "298.15,2.41e-3,1e-5\n308.15,5.1e-3,2e-5\n".encode(),
        _PLAIN | {"u_k": [1e-5, 2e-5]},
    ),
    Accepted(
        "k-above.tsv",
        "Table 2. Rate constants\n\t\tk / 10⁻³ s⁻¹\nT / °C\tI / mol dm⁻³\t\n"
        "25.0\t0.1\t2.5 ± 0.5\n35.0\t0.1\t5.0 ± 0.5\nNo. 3 was a mean of three\n".encode(),
        {"T": [298.15, 308.15], "k": [2.5 / 1000, 5.0 / 1000], "u_k": [0.5 / 1000, 0.5 / 1000],
         "I": [0.1, 0.1]},
        ("row 1 left out (above the header): Table 2. Rate constants",
         "row 6 left out (a single cell): No. 3 was a mean of three"),
    ),
    Accepted(
        "title-and-notes.csv",
        b"Hydrolysis of the ester, summer\n\npH,7.0\n\nT/K,k/s^-1,,best of three\n"
        b"298.15,2.41e-3,,yes\n\n308.15,5.1e-3,,\n\n"
        b"T from the bath\n,,,k by eye\n",
        _PLAIN,
        (
            "row 1 left out (above the header): Hydrolysis of the ester summer",
            "row 3 left out (above the header): pH 7.0",
            "best of three left out: no quantity of a rate table",
            "row 10 left out (no numbers): T from the bath",
            "row 11 left out (no numbers): k by eye",
        ),
    ),
    Accepted(
        "beside.tsv",
        b"T/K\tk/s^-1\n298.15\t2.41e-3\t\tcheck this\n308.15\t5.1e-3\n",
        _PLAIN,
        ("column D has no header and is left out (from row 2: check this)",),
    ),
    Accepted(
        "blank-everywhere.csv",
        b",,,\n,T/K,,k/s^-1\n,,,\n,298.15,,2.41e-3\n,,,\n,308.15,,5.1e-3\n,,,\n",
        _PLAIN,
    ),
    Accepted(
        "typography.tsv",
        "T/K\tln(k/s⁻¹)\n298.15\t−6.03\n308.15\t–5.28\n".encode(),
        {"T": [298.15, 308.15], "k": [math.exp(-6.03), math.exp(-5.28)]},
    ),
    Accepted(
        "thin-spaces.tsv",
        "T/K\tk/s⁻¹\n298.150\u202f0\t1\u2009234.5\n308.15\t2\u00a0000\n".encode(),
        {"T": [298.15, 308.15], "k": [1234.5, 2000.0]},
    ),
    Accepted(
        "brackets.csv",
        b"T/K,k/s^-1\n298.15,2.41(5)e-3\n308.15,5.10(9)e-3\n",
        _PLAIN | {"u_k": [5e-5, 9e-5]},
        ("k/s^-1 read as standard uncertainty of k: 5e-05 → u(k) = 5e-05 s^-1",),
    ),
    Accepted(
        "plus-minus.csv",
        "T/K,k/s^-1\n298.15,2.41e-3 ± 0.05e-3\n308.15,(5.10 ± 0.09)·10⁻³\n".encode(),
        _PLAIN | {"u_k": [5e-5, 9e-5]},
        ("k/s^-1 does not say what ± means: taken as one standard uncertainty (say "
         "uncertainty_means if it is something else)",),
    ),
    Accepted(
        "plus-minus-two-s.csv",
        "T/K,k/s^-1 (± 2 s)\n298.15,2.41e-3 ± 0.1e-3\n308.15,5.1e-3 ± 0.18e-3\n".encode(),
        _PLAIN | {"u_k": [5e-5, 9e-5]},
    ),
    Accepted(
        "everything-twice.csv",
        "t/°C,T/K,1000 K/T,k/s^-1,ln(k/s^-1),√I,I/M\n25.0,298.2,3.354,2.41e-3,-6.03,0.1,0.01\n"
        "35.0,308.15,3.245,5.1e-3,-5.28,0.2,0.04\n".encode(),
        {"T": [298.2, 308.15], "k": [2.41e-3, 5.1e-3], "I": [0.01, 0.04]},
        ("t/°C agrees with T/K within its last digit",
         "1000 K/T agrees with T/K within its last digit",
         "ln(k/s^-1) agrees with k/s^-1 within its last digit"),
    ),
    Accepted(
        "reciprocal.csv",
        "1000 K/T,lg(k/(M^-1 s^-1)),√(I/(mol/L))\n4,-3,0.5\n3.2,-2,0.25\n".encode(),
        {"T": [250.0, 312.5], "k": [0.001, 0.01], "I": [0.25, 0.0625], "order": [2]},
    ),
    Accepted(
        "pseudo-first-order.csv",
        "T/K,k_obs/s^-1,u(k_obs)/s^-1,c_excess(S2O8²⁻)/(mmol/L)\n298.15,1e-3,2e-5,10\n"
        "308.15,3e-3,6e-5,20\n".encode(),
        {"T": [298.15, 308.15], "k": [0.1, 0.15], "u_k": [2e-3, 3e-3], "order": [2],
         "c(S2O8^2-)": [0.01, 0.02]},
        ("k_obs/s^-1 divided by c(S2O8^2-), which is in excess: order 2: "
         "0.001 s^-1 / 0.01 mol L^-1 → 0.1 L mol^-1 s^-1",),
    ),
    Accepted(
        "excess-by-option.csv",
        b"T/K,k_obs/min^-1,[OH-]/M\n298.15,0.6,0.1\n308.15,1.2,0.2\n",
        {"T": [298.15, 308.15], "k": [0.6 / 60 / 0.1, 1.2 / 60 / 0.2], "order": [2]},
        options={"excess": "OH-"},
    ),
    Accepted(
        "observed-alone.csv", b"T/K,kobs (s-1)\n298.15,2.41e-3\n308.15,5.1e-3\n", _PLAIN
    ),
    Accepted(
        "standard-deviation.csv",
        b"T/K,k/s^-1,s(k)/s^-1,n\n298.15,0.5,0.02,4\n308.15,0.75,0.06,9\n",
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.01, 0.02], "determinations": [4, 9]},
        ("s(k)/s^-1 read as standard deviation of single determinations of k, ÷ √n: "
         "0.02 → u(k) = 0.01 s^-1",),
    ),
    Accepted(
        "half-width.csv",
        b"T/K,k/s^-1,U95(k)/s^-1\n298.15,0.5,0.02\n308.15,0.75,0.04\n",
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.02 / NORMAL, 0.04 / NORMAL]},
    ),
    Accepted(
        "half-width-of-three.csv",
        b"T/K,k/s^-1,CI95(k)/s^-1,n\n298.15,0.5,0.02,3\n308.15,0.75,0.04,3\n",
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.02 / STUDENT_2, 0.04 / STUDENT_2],
         "determinations": [3, 3]},
    ),
    Accepted(
        "said-in-the-study.csv",
        "T/K,k/s^-1,±/s^-1\n298.15,0.5,0.02\n308.15,0.75,0.04\n".encode(),
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.01, 0.02]},
        options={"uncertainty_means": "2 s"},
    ),
    Accepted(
        "said-percent.csv",
        "T/K,k/s^-1,±\n298.15,0.5,2\n308.15,0.75,4\n".encode(),
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.01, 0.03]},
        options={"uncertainty_means": "standard uncertainty, percent"},
    ),
    Accepted(
        "signs-in-cells.csv",
        "T/K,k/s^-1,±(k)/s^-1,c(NaOH)/M\n298.15,0.5,±0.01,1 ± 0.1\n308.15,0.75,± 0.02,2 ± 0.1\n"
        .encode(),
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.01, 0.02], "c(NaOH)": [1.0, 2.0]},
        ("c(NaOH)/M has uncertainties in its cells, not used",),
        options={"uncertainty_means": "standard error"},
    ),
    Accepted(
        "percent-signs.csv",
        b"T/K,k/s^-1,RSD\n298.15,0.5,2 %\n308.15,0.75,4%\n",
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.01, 0.03]},
    ),
    Accepted(
        "blank-u.csv",
        b"T/K,k/s^-1,u(k)/s^-1\n298.15,2.41e-3,\n308.15,5.1e-3,n/a\n",
        _PLAIN,
        ("u(k)/s^-1 is blank throughout: the uncertainty is unknown",),
    ),
    Accepted(
        "failed-run.csv",
        b"run,T/K,k/s^-1,use,reason\n1,298.15,2.41e-3,,\n2,303.15,< 0.01,no,too slow\n"
        b"3,308.15,5.1e-3,yes,\n4,313.15,9.9e-3,no,bubbles\n",
        {"T": [298.15, 308.15, 313.15], "k": [2.41e-3, 5.1e-3, 9.9e-3],
         "used": [True, True, False], "run": ["1", "3", "4"], "reason": ["", "", "bubbles"]},
        ("row 3 is not used, and not kept, for a number is missing: too slow",
         "row 5 is not used: bubbles", "2 of 4 runs used"),
    ),
    Accepted(
        "no-unit-celsius.csv", b"temp,k (1/s)\n25,2.41e-3\n35,5.1e-3\n", _PLAIN,
        ("temp has no unit; 25 to 35 can only be °C",),
    ),
    Accepted(
        "no-unit-kelvin.csv",
        b"T,I,k/s^-1\n298.15,0.01,2.41e-3\n308.15,0.1,5.1e-3\n",
        _PLAIN | {"I": [0.01, 0.1]},
        ("T has no unit; 298.15 to 308.15 can only be kelvin",
         "I has no unit; up to 0.1 can only be mol/L"),
    ),
    Accepted(
        "gas.csv",
        b"T/K,k/(cm3 molecule^-1 s^-1)\n250,1e-20\n",
        {"T": [250.0], "k": [6.02214076], "order": [2]},
    ),
    Accepted(
        "three-halves.csv",
        "T/K,k/(L^½ mol^-½ s^-1)\n300,2\n".replace("^½", "^0.5").replace("-½", "-0.5").encode(),
        {"T": [300.0], "k": [2.0], "order": [1.5]},
    ),
    Accepted(
        "formula-guard.csv",
        b"run,T/K,k/s^-1,note\n'=1+1,298.15,2.41e-3,'@home\n''-a,308.15,5.1e-3,'tis\n",
        _PLAIN | {"run": ["=1+1", "'-a"], "note": ["@home", "'tis"]},
    ),
    Accepted(
        "multi-line-cell.csv",
        b'T/K,k/s^-1,note\n298.15,2.41e-3,"two\nlines, one cell"\n308.15,5.1e-3,"said ""no"""\n',
        _PLAIN | {"note": ["two\nlines, one cell", 'said "no"']},
    ),
    Accepted(
        "thousands-stated.csv",
        b"T/K;k/s^-1\n298,15;1.234\n308,15;2.000,5\n",
        {"T": [298.15, 308.15], "k": [1234.0, 2000.5]},
        options={"decimal": ","},
    ),
)  # fmt: skip

"""Tables that are refused for their headers, each with its whole message."""

from __future__ import annotations

from tests.corpus.case import Refused

__all__ = ["REFUSED_HEADERS"]

REFUSED_HEADERS = (
    Refused(
        "k-without-unit.csv",
        b"T/K,k\n298.15,2.41e-3\n",
        (
            "k-without-unit.csv, row 1, column k: the rate constant has no unit: in s^-1, "
            "min^-1 or L mol^-1 s^-1 the same numbers mean different things. Head the column "
            "k/s^-1 or k/(L mol^-1 s^-1), with the unit that it has."
        ),
    ),
    Refused(
        "ln-k-without-unit.csv",
        b"T/K,ln k\n298.15,-6.03\n",
        (
            "ln-k-without-unit.csv, row 1, column ln k: the rate constant has no unit: in "
            "s^-1, min^-1 or L mol^-1 s^-1 the same numbers mean different things. Head the "
            "column ln(k/s^-1) or ln(k/(L mol^-1 s^-1)), with the unit that it has."
        ),
    ),
    Refused(
        "log-k.csv",
        b"T/K,log k\n298.15,-2.6\n",
        (
            "log-k.csv, row 1, column B: log can be read as the natural or as the decimal "
            'logarithm (read: "log k"). Write ln(k/...) or lg(k/...).'
        ),
    ),
    Refused(
        "power-behind.csv",
        ("T/K,k × 10^3 / s^-1\n298.15,2.41\n").encode(),
        (
            "power-behind.csv, row 1, column B: the power of ten behind k can be read in two "
            'ways: the numbers were multiplied by 10^3, or they still have to be (read: "k × '
            '10^3 / s^-1"). Write 10^3 k/(s^-1) if 2.41 stands for 2.41e-3; write k/(10^3 '
            "s^-1) if 2.41 stands for 2.41e3."
        ),
    ),
    Refused(
        "t-without-unit.csv",
        b"t,k/s^-1\n25,2.41e-3\n",
        (
            "t-without-unit.csv, row 1, column A: t without a unit can be read as a time or as "
            'a Celsius temperature (read: "t"). Write t/°C or t/s.'
        ),
    ),
    Refused(
        "lukewarm.csv",
        b"T,k/s^-1\n150,2.41e-3\n200,5.1e-3\n",
        (
            "lukewarm.csv, column T: the temperature has no unit, and 150 to 200 can be read "
            "as kelvin or as °C. Head the column T/K or t/°C."
        ),
    ),
    Refused(
        "hot.csv",
        b"temperature,k/s^-1\n500,2.41e-3\n600,5.1e-3\n",
        (
            "hot.csv, column temperature: the temperature has no unit, and 500 to 600 can be "
            "read as kelvin or as °C. Head the column T/K or t/°C."
        ),
    ),
    Refused(
        "millimolar.csv",
        b"T/K,I,k/s^-1\n298.15,10,2.41e-3\n",
        (
            "millimolar.csv, column I: the ionic strength has no unit; up to 10 can be read as "
            "mol/L or as mmol/L. Head the column I/(mol/L) or I/(mmol/L)."
        ),
    ),
    Refused(
        "molal.csv",
        b"T/K,I/(mol/kg),k/s^-1\n298.15,0.1,2.41e-3\n",
        (
            'molal.csv, row 1, column B: molalities are not read (read: "I/(mol/kg)"). '
            "Multiply by the density of the solution in kg/L and give mol/L."
        ),
    ),
    Refused(
        "two-solidi.csv",
        b"T/K,k/(L/mol/s)\n298.15,0.5\n",
        (
            "two-solidi.csv, row 1, column B: has two solidi, which can be read as L mol^-1 "
            's^-1 or as L mol^-1 s (read: "k/(L/mol/s)"). Write L mol^-1 s^-1 or L mol^-1 s.'
        ),
    ),
    Refused(
        "unknown-unit.csv",
        b"T/K,k/(L mole^-1 sc^-1)\n298.15,0.5\n",
        (
            'unknown-unit.csv, row 1, column B: "sc" is no unit that is known here (read: '
            '"k/(L mole^-1 sc^-1)"). Did you mean s or µs?'
        ),
    ),
    Refused(
        "not-a-rate-constant.csv",
        b"T/K,k/(L mol^-1)\n298.15,0.5\n",
        (
            "not-a-rate-constant.csv, row 1, column B: L mol^-1 is not the unit of a rate "
            'constant (read: "k/(L mol^-1)"). Give k in s^-1, L mol^-1 s^-1 and so on: '
            "(L/mol)^(n-1) s^-1 for overall order n."
        ),
    ),
    Refused(
        "pressure.csv",
        b"T/K,k/(bar^-1 s^-1)\n298.15,0.5\n",
        (
            "pressure.csv, row 1, column B: bar^-1 s^-1 is not the unit of a rate constant "
            '(read: "k/(bar^-1 s^-1)"). Rate constants in pressures need the temperature; give '
            "them in concentrations."
        ),
    ),
    Refused(
        "fahrenheit.csv",
        ("t/°F,k/s^-1\n77,0.5\n").encode(),
        (
            'fahrenheit.csv, row 1, column A: °F is not read (read: "t/°F"). Give temperatures '
            "in °C or K."
        ),
    ),
    Refused(
        "saved-twice.csv",
        ("t/Â°C,k/s^-1\n25,0.5\n").encode(),
        (
            "saved-twice.csv, row 1, column A: was saved in one encoding and opened in another "
            '(read: "t/Â°C"). Save the file again as UTF-8, or type the header anew.'
        ),
    ),
    Refused(
        "no-temperature.csv",
        b"I/M,k/s^-1\n0.1,0.5\n",
        (
            'no-temperature.csv, row 1: no column holds the temperature (read: "I/M | '
            'k/s^-1"). Head it T/K or t/°C.'
        ),
    ),
    Refused(
        "no-k.csv",
        b"T/K,I/M,rate\n298.15,0.1,0.5\n",
        (
            'no-k.csv, row 1: no column holds the rate constant (read: "T/K | I/M | rate"). '
            "Head it k/s^-1 or k/(L mol^-1 s^-1), with the unit that it has."
        ),
    ),
    Refused(
        "uncertainty-twice.csv",
        b"T/K,k/s^-1,u(k)/s^-1\n298.15,2.41(5)e-3,5e-5\n308.15,5.1(1)e-3,1e-4\n",
        (
            "uncertainty-twice.csv, column u(k)/s^-1: the uncertainty stands in the cells of "
            "k/s^-1 and in a column of its own. Keep one of them."
        ),
    ),
    Refused(
        "what-is-plus-minus.csv",
        ("T/K,k/s^-1,±\n298.15,2.41e-3,5e-5\n").encode(),
        (
            "what-is-plus-minus.csv, column ±: the uncertainty may be a standard uncertainty, "
            'twice that, or a 95 % half-width. Say what it is: uncertainty_means = "standard '
            'uncertainty", "standard deviation", "2 s" or "95 %" in the study file, or head '
            "the column u(k), s(k), 2s(k) or U95(k)."
        ),
    ),
    Refused(
        "expanded.csv",
        b"T/K,k/s^-1,U(k)/s^-1\n298.15,2.41e-3,5e-5\n",
        (
            "expanded.csv, column U(k)/s^-1: an expanded uncertainty needs its coverage "
            'factor. Say what it is: uncertainty_means = "standard uncertainty", "standard '
            'deviation", "2 s" or "95 %" in the study file, or head the column u(k), s(k), '
            "2s(k) or U95(k)."
        ),
    ),
    Refused(
        "said-otherwise.csv",
        b"T/K,k/s^-1,s(k)/s^-1\n298.15,2.41e-3,5e-5\n",
        (
            "said-otherwise.csv, column s(k)/s^-1: is headed as standard deviation of single "
            "determinations, and uncertainty_means says 95 % half-width. Mend one of the two."
        ),
        {"uncertainty_means": "95 %"},
    ),
    Refused(
        "u-without-unit.csv",
        b"T/K,k/s^-1,u(k)\n298.15,2.41e-3,5\n",
        (
            "u-without-unit.csv, row 1, column u(k): the uncertainty has no unit and can be "
            "read as absolute or as relative. Head it u(k)/(its unit) or u_r(k)/%."
        ),
    ),
    Refused(
        "u-of-other-order.csv",
        b"T/K,k/s^-1,u(k)/(M^-1 s^-1)\n298.15,2.41e-3,5e-5\n",
        (
            "u-of-other-order.csv, column u(k)/(M^-1 s^-1): is in M^-1 s^-1, and k/s^-1 is "
            "not. Give the uncertainty in the unit of its quantity, or relative."
        ),
    ),
    Refused(
        "u-of-nothing.csv",
        b"u,T/K,k/s^-1\n1,298.15,2.41e-3\n",
        (
            "u-of-nothing.csv, row 1, column u: it is not plain of which quantity this is the "
            "uncertainty. Head it u(k)/s^-1, u_r(k)/%, u(T)/K or u(I)/(mol/L), or put it right "
            "of its quantity."
        ),
    ),
    Refused(
        "nearly-u.csv",
        b"T/K,k/s^-1,uk/s^-1\n298.15,2.41e-3,5e-5\n",
        (
            "nearly-u.csv, row 1, column uk/s^-1: has the unit of the rate constant and is not "
            "understood; it can be its uncertainty or another rate constant. Head it "
            "u(k)/(unit) if it is the standard uncertainty, or take it out."
        ),
    ),
    Refused(
        "looks-uncertain.csv",
        b"T/K,k/s^-1,u(kobs mean)/s^-1,95%\n298.15,2.41e-3,5e-5,1\n",
        (
            "2 problems:\n  "
            "looks-uncertain.csv, row 1, column u(kobs mean)/s^-1: looks like an uncertainty "
            "and is not understood. Head it u(k)/(unit), u_r(k)/%, u(T)/K or u(I)/(mol/L), or "
            "take it out.\n  "
            "looks-uncertain.csv, row 1, column 95%: looks like an uncertainty and is not "
            "understood. Head it u(k)/(unit), u_r(k)/%, u(T)/K or u(I)/(mol/L), or take it out."
        ),
    ),
    Refused(
        "error-in-percent.csv",
        b"T/K,k/s^-1,error (%)\n298.15,2.41e-3,5\n",
        (
            "error-in-percent.csv, column error (%): the uncertainty may be a standard "
            "uncertainty, twice that, or a 95 % half-width. Say what it is: uncertainty_means "
            '= "standard uncertainty", "standard deviation", "2 s" or "95 %" in the study '
            "file, or head the column u(k), s(k), 2s(k) or U95(k)."
        ),
    ),
    Refused(
        "two-rate-constants.csv",
        b"T/K,k_1/s^-1,k_2/(M^-1 s^-1)\n298.15,2.41e-3,0.5\n",
        (
            "two-rate-constants.csv, row 1, column k_2/(M^-1 s^-1): two columns hold different "
            "rate constants: k_1/s^-1 and k_2/(M^-1 s^-1). Keep the one to be fitted in the "
            "table."
        ),
    ),
    Refused(
        "same-header-twice.csv",
        b"T/K,k/s^-1,u(k)/s^-1,u(k)/s^-1\n298.15,2.41e-3,5e-5,6e-5\n",
        (
            "same-header-twice.csv, row 1, column u(k)/s^-1: more than one column is headed "
            "so: u(k)/s^-1 (C) and u(k)/s^-1 (D). Keep one, or head the other differently."
        ),
    ),
    Refused(
        "k-obs-and-concentration.csv",
        b"T/K,k_obs/s^-1,c(NaOH)/M\n298.15,2.41e-3,0.1\n",
        (
            "k-obs-and-concentration.csv, row 1, column k_obs/s^-1: k_obs can be read as the "
            "rate constant to fit, or as one to be divided by the concentration of a reagent "
            "in excess. Head it k to fit it as it is; head the concentration c_excess(NaOH), "
            "with its unit, to divide by it."
        ),
    ),
    Refused(
        "excess-and-k.csv",
        b"T/K,k/s^-1,c_excess(NaOH)/M\n298.15,2.41e-3,0.1\n",
        (
            "excess-and-k.csv, row 1, column c_excess(NaOH)/M: a species is marked as in "
            "excess, and the rate constant is headed k: it can be read as divided by that "
            "concentration already, or as still to be divided. Head the rate constant k_obs if "
            "it is still to be divided, or take the mark away."
        ),
    ),
    Refused(
        "excess-of-nothing.csv",
        b"T/K,k_obs/s^-1,c(NaOH)/M\n298.15,2.41e-3,0.1\n",
        (
            "excess-of-nothing.csv, row 1: no column holds the concentration of HCl, which is "
            "said to be in excess. Head a column c(HCl)/(mol/L); columns of concentrations: "
            "c(NaOH)/M."
        ),
        {"excess": "HCl"},
    ),
)

"""Formulas with crystal water, as counts of elements and molar masses, by the PyPI package molmass."""

import re
from functools import cache

import molmass


@cache
def parts(formula):
    """The parts between raised dots, each with its factor."""
    found = []
    for part in formula.split("·"):
        match = re.match(r"\s*(\d+(?:\.\d+)?|½)?\s*(.+)", part)
        factor = 0.5 if match[1] == "½" else float(match[1] or 1)
        found.append((factor, molmass.Formula(match[2])))
    return found


@cache
def molar_mass(formula):
    """g/mol."""
    return sum(factor * part.mass for factor, part in parts(formula))


@cache
def elements(formula):
    """How many atoms of each element."""
    counts = {}
    for factor, part in parts(formula):
        for item in part.composition().values():
            counts[item.symbol] = counts.get(item.symbol, 0.0) + factor * item.count
    return counts

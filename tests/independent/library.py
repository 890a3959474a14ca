"""Reads the constants out of the built-in library, with no help from the program under test.

Only the statements that an equilibrium needs are read: of an ion its charge, its pKa lines, complexes and interactions; of
a substance its names, its formula and what it gives. Anything else is passed over.
"""

import math
import re
from dataclasses import dataclass, field
from pathlib import Path

GAS_CONSTANT = 8.314462618  # J/(mol K), exact in the SI
REFERENCE_K = 298.15
NUMBER = r"[+\-−]?\d+(?:\.\d+)?(?:[eE][+\-]?\d+)?"


def number(text):
    return float(text.replace("−", "-"))


@dataclass
class Constant:
    """log10 K of a reaction: integrated van 't Hoff equation with constant heat capacity, or an equation in T."""

    log_k: float = 0.0
    enthalpy_kj: float = 0.0
    heat_capacity_j: float = 0.0
    equation: tuple = ()

    def at(self, kelvin):
        if self.equation:
            a, b, c, d = self.equation
            return a / kelvin + b + c * kelvin + d * math.log(kelvin)
        enthalpy = 1000 * self.enthalpy_kj * (1 / REFERENCE_K - 1 / kelvin)
        capacity = self.heat_capacity_j * (REFERENCE_K / kelvin - 1 + math.log(kelvin / REFERENCE_K))
        return self.log_k + (enthalpy + capacity) / (GAS_CONSTANT * math.log(10))


@dataclass
class Species:
    """A dissolved species: which ions, how many hydrogen ions and how much water it takes; log10 beta as signed constants."""

    name: str
    parts: dict
    hydrogen: int
    constants: list = field(default_factory=list)  # (factor, Constant)
    water: int = 0

    def log_beta(self, kelvin):
        return sum(factor * constant.at(kelvin) for factor, constant in self.constants)


@dataclass
class Library:
    charges: dict = field(default_factory=dict)  # ion -> charge number
    formulas: dict = field(default_factory=dict)  # ion -> formula without charge
    species: list = field(default_factory=list)
    interactions: dict = field(default_factory=dict)  # frozenset of two species -> epsilon, kg/mol
    solids: dict = field(default_factory=dict)  # name -> (formula, gives, log Ksp, how it forms)
    gases: dict = field(default_factory=dict)  # substance -> (formula, gives, log KH, form in water)
    substances: dict = field(default_factory=dict)  # any name, folded -> (name, formula, gives)


def blocks(path):
    """The blocks of a file: kind, name and the statements, continued lines joined."""
    block = None
    for raw in path.read_text(encoding="utf-8").splitlines():
        line = re.split(r"(?:^|\s)#(?:\s|$)", raw)[0].rstrip()
        if not line.strip():
            continue
        header = re.match(r"(ion|substance|solid|bottle|solution|lab)\s+(.+)", line)
        if header:
            if block:
                yield block
            block = (header[1], header[2].strip().strip('"'), [])
        elif block and line.lstrip().startswith(","):
            block[2][-1] += line.strip()
        elif block:
            block[2].append(line.strip())
    if block:
        yield block


def constant_of(head, fields, factor_word):
    """A constant from its first field and those that follow it."""
    equation = re.match(
        rf"({NUMBER})/T(?:\s*([+\-−])\s*({NUMBER})(?![\d.]*\s*(?:T|ln)\b))?"
        rf"(?:\s*([+\-−])\s*({NUMBER})\s*T)?(?:\s*([+\-−])\s*({NUMBER})\s*ln T)?",
        head,
    )
    if equation:
        def term(sign, value):
            return 0.0 if value is None else number(value) * (1 if sign == "+" else -1)
        a, b, c, d = (
            number(equation[1]),
            term(equation[2], equation[3]),
            term(equation[4], equation[5]),
            term(equation[6], equation[7]),
        )
        return Constant(equation=(a, b, c, d))
    value = number(re.match(rf"{factor_word}\s*({NUMBER})", head)[1])
    result = Constant(log_k=value)
    for text in fields:
        if match := re.match(rf"enthalpy\s+({NUMBER})\s*kJ/mol", text):
            result.enthalpy_kj = number(match[1])
        if match := re.match(rf"heat capacity\s+({NUMBER})\s*J/", text):
            result.heat_capacity_j = number(match[1])
    return result


def counted(text):
    """`2 hydrogen` or `phosphate` as a count and a name."""
    match = re.match(r"([+\-−]?\d+)\s+(.+)", text)
    return (int(number(match[1])), match[2]) if match else (1, text)


def read_ion(name, statements, library):
    acids, complexes, interactions = [], [], []
    for statement in statements:
        word, _, rest = statement.partition(" ")
        fields = [part.strip() for part in re.split(r",\s+", rest.strip())]
        if word == "charge":
            library.charges[name] = int(number(rest.strip()))
        elif word == "formula":
            library.formulas[name] = rest.strip()
        elif word == "pKa":
            acid = next((f[3:] for f in fields if f.startswith("of ")), None)
            acids.append((acid, fields))
        elif statement.startswith("complex with"):
            complexes.append([part.strip() for part in re.split(r",\s+", statement[len("complex with"):].strip())])
        elif statement.startswith("interaction with"):
            interactions.append([part.strip() for part in re.split(r",\s+", statement[len("interaction with"):].strip())])
    library.species.append(Species(name, {name: 1}, 0))
    constants = []
    for protons, (acid, fields) in enumerate(reversed(acids), start=1):
        ionisation = constant_of(fields[0], fields[1:], "")
        # A pKa is minus log10 of the ionisation constant; its enthalpy is that of the ionisation.
        if ionisation.equation:
            step = Constant(equation=ionisation.equation)
        else:
            step = Constant(ionisation.log_k, -ionisation.enthalpy_kj, -ionisation.heat_capacity_j)
        constants.append((1, step))
        waters = [int(number(m[1])) for f in fields if (m := re.fullmatch(r"([+\-−]?\d+) water", f))]
        label = acid or f"{name} + {protons} H"
        library.species.append(Species(label, {name: 1}, protons, list(constants), sum(waters)))
    for fields in complexes:
        parts, hydrogen, label, log_k, own, bound_water = {}, 0, None, None, 1, None
        for text in fields:
            if text.startswith("named "):
                label = text[6:]
            elif text.startswith("log K"):
                log_k = constant_of(text, fields, "log K")
            elif text.startswith("itself "):
                own = int(text[7:])
            elif re.match(r"(enthalpy|heat capacity|source|at ionic strength|from \d)", text):
                continue
            else:
                count, part = counted(text)
                if part == "hydrogen":
                    hydrogen += count
                elif part == "water":
                    bound_water = (bound_water or 0) + count
                else:
                    parts[part] = parts.get(part, 0) + count
        parts[name] = parts.get(name, 0) + own
        if bound_water is None:
            # A hydrogen ion that is split off leaves a hydroxide, which took a molecule of water.
            bound_water = max(0, -hydrogen)
        library.species.append(Species(label or "complex of " + name, parts, hydrogen, [(1, log_k)], bound_water))
    for fields in interactions:
        own = next((f[3:] for f in fields if f.startswith("of ")), name)
        value = next(f for f in fields[1:] if re.match(NUMBER, f))
        library.interactions[frozenset((own, fields[0]))] = number(re.match(NUMBER, value)[0])


def read_substance(name, statements, library):
    also, formula, gives = [name], None, []
    for statement in statements:
        word, _, rest = statement.partition(" ")
        rest = rest.strip()
        if word == "also":
            also += [part.strip().strip('"') for part in re.split(r",\s+", rest)]
        elif word == "formula":
            formula = rest
        elif word == "gives":
            gives = [counted(part.strip()) for part in re.split(r",\s+", rest)]
    for each in also:
        library.substances.setdefault(each.casefold(), (name, formula, gives))
    library.substances[name.casefold()] = (name, formula, gives)


def read_solid(name, statements, library):
    formula, gives, constant, forms = None, [], None, ""
    for statement in statements:
        word, _, rest = statement.partition(" ")
        rest = rest.strip()
        if word == "formula":
            formula = rest
        elif word == "gives":
            gives = [counted(part.strip()) for part in re.split(r",\s+", rest)]
        elif word == "forms":
            forms = rest
        elif statement.startswith("log Ksp"):
            fields = [part.strip() for part in re.split(r",\s+", statement[len("log Ksp"):].strip())]
            constant = constant_of(fields[0], fields[1:], "")
    library.solids[name] = (formula, gives, constant, forms)


def read_gas(name, statements, library):
    formula, gives = None, []
    for statement in statements:
        word, _, rest = statement.partition(" ")
        if word == "formula":
            formula = rest.strip()
        elif word == "gives":
            gives = [counted(part.strip()) for part in re.split(r",\s+", rest.strip())]
    for statement in statements:
        if statement.startswith("log KH"):
            fields = [part.strip() for part in re.split(r",\s+", statement[len("log KH"):].strip())]
            form = next((text[3:] for text in fields if text.startswith("of ")), None)
            library.gases[name] = (formula, gives, constant_of(fields[0], fields[1:], ""), form)


def load(folder=Path(__file__).parents[2] / "src" / "library" / "data"):
    """The whole built-in library."""
    library = Library()
    for path in sorted(folder.glob("*.prep")):
        for kind, name, statements in blocks(path):
            if kind == "ion":
                read_ion(name, statements, library)
            elif kind == "substance":
                read_substance(name, statements, library)
                read_gas(name, statements, library)
            elif kind == "solid":
                read_solid(name, statements, library)
    return library

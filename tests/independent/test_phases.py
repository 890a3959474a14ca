"""Solids and gases against SciPy: amounts sought from outside, around closed equilibria of SciPy's own.

The program eliminates a component for each phase and solves once. Here the amount of each phase is the unknown of an outer root
finder, and saturation or partial pressure its condition. Which solids form is checked too: no other one may be saturated.
"""

import json
import math
import os
import subprocess
import unittest
from pathlib import Path

from scipy import optimize

import equilibrium
import formula as formulas
import library
import water
from test_systems import mixture, recipes_of

HERE = Path(__file__).parent
PROGRAM = os.environ.get("SCRUPLE", "scruple")
RECIPES = HERE / "phases.prep"
PH_AGREEMENT = 2e-6
AMOUNT_AGREEMENT = 2e-6
AIR_BAR = 42e-5  # 0.042 kPa of carbon dioxide


def shown():
    command = [PROGRAM, "show", str(RECIPES), "--settled", "--format", "json"]
    printed = json.loads(subprocess.run(command, capture_output=True, text=True, check=False).stdout)
    return {solution["name"]: solution for solution in printed}


class Phase:
    """What a solid or gas dissolves to: ions, hydrogen, water; and the forms whose activities make its product."""

    def __init__(self, constants, formula, gives):
        by_name = {species.name: species for species in constants.species}
        self.ions, self.hydrogen, oxygen, self.forms = {}, 0, formulas.elements(formula).get("O", 0.0), []
        water_in_forms = 0
        for count, name in gives:
            self.forms.append((count, name))
            if name in ("hydrogen", "hydroxide"):
                sign = 1 if name == "hydrogen" else -1
                self.hydrogen += sign * count
                oxygen -= count if name == "hydroxide" else 0
                water_in_forms += count if name == "hydroxide" else 0
                continue
            species = by_name[name]
            self.hydrogen += count * species.hydrogen
            water_in_forms += count * species.water
            oxygen -= count * species.water
            for ion, number in species.parts.items():
                self.ions[ion] = self.ions.get(ion, 0) + count * number
                oxygen -= count * number * formulas.elements(constants.formulas[ion]).get("O", 0.0)
        # Water that the product counts beside the forms, and all that the phase holds beside its ions.
        self.crystal = oxygen
        self.water = oxygen + water_in_forms

    def log_product(self, system):
        return sum(count * system.log_activity[name] for count, name in self.forms) + self.crystal * system.log_water


def closed(constants, totals, hydrogen, kelvin, phases, amounts):
    """The closed equilibrium of what is left when so much of each phase (mol) is taken out of a kilogram of water."""
    left, water_kg = dict(totals), 1.0
    for phase, amount in zip(phases, amounts):
        for ion, count in phase.ions.items():
            left[ion] = left.get(ion, 0.0) - count * amount
        hydrogen = hydrogen - phase.hydrogen * amount
        water_kg -= phase.water * amount * water.MOLAR_MASS
    system = equilibrium.System(constants, {ion: n / water_kg for ion, n in left.items()}, hydrogen / water_kg, kelvin)
    system.pH, _ = system.solve()
    return system


def vapour_pressure(kelvin):
    """Of water, bar: Wagner & Pruss 1993."""
    t = 1 - kelvin / 647.096
    terms = [(-7.85951783, 1), (1.84408259, 1.5), (-11.7866497, 3), (22.6807411, 3.5), (-15.9618719, 4), (1.80122502, 7.5)]
    return 220.64 * math.exp(647.096 / kelvin * sum(a * t**n for a, n in terms))


class Phases(unittest.TestCase):
    @classmethod
    def setUpClass(cls):
        cls.constants, cls.program = library.load(), shown()

    def test_vapour_pressure_of_water(self):
        self.assertAlmostEqual(vapour_pressure(373.1243), 1.01325, delta=2e-5)

    def test_solids(self):
        seen = 0
        for name, temperatures, molalities in recipes_of(RECIPES):
            settled = self.program[name]["settled"]
            if not settled["solids"]:
                continue
            kelvin = temperatures[0] + 273.15
            totals, hydrogen = mixture(self.constants, molalities)
            with self.subTest(solution=name):
                solids = [self.constants.solids[one["solid"]] for one in settled["solids"]]
                phases = [Phase(self.constants, formula, gives) for formula, gives, _, _ in solids]

                # What is left of the scarcest ion is the unknown, as a logarithm: there is never less than nothing of it.
                most = [min(totals[ion] / count for ion, count in phase.ions.items()) for phase in phases]

                def amounts_of(left):
                    return [cap * (1 - math.exp(-x)) for cap, x in zip(most, left)]

                def indices(left):
                    system = closed(self.constants, totals, hydrogen, kelvin, phases, amounts_of(left))
                    return [phase.log_product(system) - solid[2].at(kelvin) for phase, solid in zip(phases, solids)]

                # From one per cent less than the program's amounts: near enough for the root finder, far from the answer.
                start = [-math.log(1 - 0.99 * one["amount_mol"] / cap) for one, cap in zip(settled["solids"], most)]
                found = optimize.root(indices, start, method="hybr", options={"xtol": 1e-13})
                self.assertLess(max(abs(x) for x in indices(found.x)), 1e-8)
                for amount, one in zip(amounts_of(found.x), settled["solids"]):
                    self.assertAlmostEqual(one["amount_mol"], amount, delta=AMOUNT_AGREEMENT * amount)
                system = closed(self.constants, totals, hydrogen, kelvin, phases, amounts_of(found.x))
                self.assertAlmostEqual(settled["pH"], system.pH, delta=PH_AGREEMENT)
                for other, (formula, gives, constant, forms) in self.constants.solids.items():
                    there = all(given in system.log_activity for _, given in gives)
                    if there and forms not in ("slowly", "in passing"):
                        phase = Phase(self.constants, formula, gives)
                        self.assertLess(phase.log_product(system) - constant.at(kelvin), 1e-6, other)
                seen += 1
        self.assertGreaterEqual(seen, 6)

    def test_gases(self):
        seen = 0
        formula, gives, constant, form = self.constants.gases["carbon dioxide"]
        gas = Phase(self.constants, formula, gives)
        # Water that the gas takes up on becoming the form that the constant is of.
        taken_water = gas.water - next(species.water for species in self.constants.species if species.name == form)
        for name, temperatures, molalities in recipes_of(RECIPES):
            solution = self.program[name]
            under = [state for state in solution["at"] if state["gas"]]
            if solution["in_air"]:
                states = [(solution["temperature_C"], AIR_BAR, solution["in_air"]["pH"])]
            elif under:
                moist = "moist" in name
                states = [
                    (state["temperature_C"],
                     0.05 * (1.01325 - (vapour_pressure(state["temperature_C"] + 273.15) if moist else 0.0)), state["pH"])
                    for state in under
                ]
            else:
                continue
            totals, hydrogen = mixture(self.constants, molalities)
            for celsius, bar, ph in states:
                with self.subTest(solution=name, celsius=celsius):
                    kelvin = celsius + 273.15

                    def excess(taken):
                        system = closed(self.constants, totals, hydrogen, kelvin, [gas], [-taken])
                        pressure = system.log_activity[form] + taken_water * system.log_water - constant.at(kelvin)
                        return pressure - math.log10(bar)

                    least = -totals.get("carbonate", 0.0) * 0.999 + 1e-9
                    taken = optimize.brentq(excess, least, 0.1, xtol=1e-16, rtol=1e-12)
                    system = closed(self.constants, totals, hydrogen, kelvin, [gas], [-taken])
                    self.assertAlmostEqual(ph, system.pH, delta=PH_AGREEMENT)
                    seen += 1
        self.assertGreaterEqual(seen, 4)


if __name__ == "__main__":
    unittest.main()

"""The program's pH against SciPy's, from the same constants, to 1e-6.

What differs is everything else: the reader of the library, the equations' form, the solver, the osmotic integral. Molalities are
per kilogram of all water, that of crystals included.
"""

import json
import os
import re
import subprocess
import unittest
from pathlib import Path

import equilibrium
import formula as formulas
import library
import water

HERE = Path(__file__).parent
PROGRAM = os.environ.get("SCRUPLE", "scruple")
AGREEMENT = 1e-6


def recipes():
    """Name, temperatures and molalities of each solution in systems.prep."""
    return recipes_of(HERE / "systems.prep")


def recipes_of(path):
    """The same of any such file."""
    for kind, name, statements in library.blocks(path):
        temperatures, molalities = [], []
        for statement in statements:
            if statement.startswith(("made at", "used at")):
                temperatures += [float(t) for t in re.findall(r"(\d+) °C", statement)]
            elif match := re.match(r"([\d.]+) mol/kg\s+(.+)", statement):
                molalities.append((float(match[1]), match[2]))
        yield name, temperatures, molalities


def shown():
    """What the program says of each solution: pH by temperature."""
    command = [PROGRAM, "show", str(HERE / "systems.prep"), "--format", "json"]
    printed = json.loads(subprocess.run(command, capture_output=True, text=True, check=False).stdout)
    # A solution tells its state where it is made and, under `at`, where it is used.
    return {
        solution["name"]: {state["temperature_C"]: state["pH"] for state in [solution, *solution["at"]]}
        for solution in printed
    }


def mixture(constants, molalities):
    """Ions and hydrogen ions for each kilogram of water that there is once everything is dissolved."""
    crystal = brought = 0.0
    totals, hydrogen = {}, 0.0
    for molality, substance in molalities:
        _, formula, gives = constants.substances[substance.casefold()]
        # What the formula has more of oxygen than its ions is water.
        water_count = formulas.elements(formula).get("O", 0.0)
        for count, ion in gives:
            if ion in ("hydrogen", "hydroxide"):
                hydrogen += count * molality * (1 if ion == "hydrogen" else -1)
                continue
            totals[ion] = totals.get(ion, 0.0) + count * molality
            water_count -= count * formulas.elements(constants.formulas[ion]).get("O", 0.0)
        crystal += molality * max(0.0, water_count - sum(c for c, ion in gives if ion == "hydroxide"))
        brought += molality * water_count
    # The molalities count the crystals' water; a hydroxide brings its water only when it meets a hydrogen ion.
    all_water = 1.0 + water.MOLAR_MASS * (brought - crystal)
    return {ion: amount / all_water for ion, amount in totals.items()}, hydrogen / all_water


class Systems(unittest.TestCase):
    def test_every_system_agrees(self):
        constants, program = library.load(), shown()
        names = set()
        for name, temperatures, molalities in recipes():
            totals, hydrogen = mixture(constants, molalities)
            for celsius in temperatures:
                with self.subTest(solution=name, celsius=celsius):
                    expected, _ = equilibrium.System(constants, totals, hydrogen, celsius + 273.15).solve()
                    self.assertAlmostEqual(program[name][celsius], expected, delta=AGREEMENT)
            names.add(name)
        self.assertGreaterEqual(len(names), 37)


    def test_water_is_measured_at_its_temperature(self):
        command = [PROGRAM, "show", str(HERE / "systems.prep"), "--solution", "Water alone", "--format", "json"]
        printed = json.loads(subprocess.run(command, capture_output=True, text=True, check=False).stdout)
        self.assertAlmostEqual(printed[0]["ingredients"][0]["volume_mL"], 1e6 / water.density(298.15), delta=1e-3)


if __name__ == "__main__":
    unittest.main()

"""Molar masses of every built-in substance against the PyPI package molmass, within the uncertainty of the atomic weights.

The program is asked as a user would ask it: what does one mole weigh?
"""

import json
import os
import re
import subprocess
import tempfile
import unittest
from pathlib import Path

import formula as formulas
import library

PROGRAM = os.environ.get("SCRUPLE", "scruple")
DATA = Path(__file__).parents[2] / "src" / "library" / "data"


def uncertainties():
    """Standard uncertainty or half the interval of each atomic weight, as the library's own table states it."""
    table = {}
    for line in (DATA / "atomic-weights.txt").read_text(encoding="utf-8").splitlines():
        if match := re.match(r"([A-Z][a-z]?)\s+([\d.]+)\s*±?\s*([\d.]+)?", line):
            table[match[1]] = float(match[3] or 0.0)
    return table


class MolarMasses(unittest.TestCase):
    def test_every_substance(self):
        substances = {name: formula for name, formula, _ in library.load().substances.values() if formula}
        lines = []
        for number, name in enumerate(sorted(substances)):
            quoted = f'"{name}"' if not name[0].isalpha() or re.search(r", | / | to | or ", name) else name
            lines += [f"solution Mole {number}", "    made at    25 °C", "    1 kg       water", f"    1 mol      {quoted}", ""]
        with tempfile.TemporaryDirectory() as folder:
            path = Path(folder) / "moles.prep"
            path.write_text("\n".join(lines), encoding="utf-8")
            command = [PROGRAM, "show", str(path), "--format", "json"]
            printed = json.loads(subprocess.run(command, capture_output=True, text=True, check=False).stdout)
        weights = uncertainties()
        shown = {}
        for solution in printed:
            for ingredient in solution["ingredients"]:
                shown[ingredient["name"]] = ingredient["mass_g"]
        for name, formula in substances.items():
            if name == "water":
                continue
            with self.subTest(substance=name, formula=formula):
                expected, counts = formulas.molar_mass(formula), formulas.elements(formula)
                # Both tables are rounded; what IUPAC states as uncertainty covers that.
                allowed = sum(n * (weights.get(element, 0.0)) for element, n in counts.items())
                self.assertAlmostEqual(shown[name], expected, delta=allowed)


if __name__ == "__main__":
    unittest.main()

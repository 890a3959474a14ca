"""What `scruple show --format json` prints, against the schema that it ships, by an independent validator.

The schema itself is checked against the JSON Schema specification (draft 2020-12). SCRUPLE names the program.
"""

import json
import os
import subprocess
import unittest
from pathlib import Path

from jsonschema import Draft202012Validator

TESTS = Path(__file__).parent.parent
PROGRAM = os.environ.get("SCRUPLE", "scruple")

# Recipes with values, with mistakes, with series, without any findings.
SHOWN = ["library", "fixtures/command", "fixtures/findings", "published"]


def run(*arguments):
    # One of the folders holds a file that is not text, which is said on the other stream and by the exit code.
    return subprocess.run([PROGRAM, *arguments], capture_output=True, encoding="utf-8", check=False).stdout


class ShowSchema(unittest.TestCase):
    @classmethod
    def setUpClass(cls):
        cls.schema = json.loads(run("show", "--schema"))

    def test_the_schema_is_one(self):
        Draft202012Validator.check_schema(self.schema)

    def test_every_object_of_the_schema_is_described(self):
        for name, definition in self.schema["$defs"].items():
            self.assertTrue(definition["description"], name)
            for field, facts in definition["properties"].items():
                if "$ref" not in facts and "oneOf" not in facts:
                    self.assertTrue(facts.get("description"), f"{name}.{field}")

    def test_what_is_printed_fits_and_holds_no_field_that_is_not_described(self):
        strict = json.loads(json.dumps(self.schema))
        for definition in strict["$defs"].values():
            definition["additionalProperties"] = False
        validator = Draft202012Validator(strict)
        for folder in SHOWN:
            with self.subTest(folder=folder):
                printed = json.loads(run("show", str(TESTS / folder), "--reasons", "--format", "json"))
                self.assertTrue(printed)
                for error in validator.iter_errors(printed):
                    self.fail(f"{error.json_path}: {error.message}")

    def test_a_wrong_type_does_not_fit(self):
        printed = json.loads(run("show", str(TESTS / "fixtures/command/eluent.prep"), "--format", "json"))
        printed[0]["pH"] = "7.00"
        self.assertFalse(Draft202012Validator(self.schema).is_valid(printed))

    def test_no_number_is_infinite_or_not_a_number(self):
        def refuse(constant):
            raise ValueError(constant)

        for folder in SHOWN:
            json.loads(run("show", str(TESTS / folder), "--format", "json"), parse_constant=refuse)


if __name__ == "__main__":
    unittest.main()

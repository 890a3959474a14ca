"""Reports for machines, against the schemas of their formats.

SARIF: the schema of the OASIS standard, from the npm package @microsoft/jest-sarif (MIT). rdjson: the npm package
@umbrelladocs/rdformat-validator (MIT). JUnit: junit-10.xsd of the Jenkins xUnit plugin (MIT), which the source package of
pytest carries. Code Quality has no published schema; its fields are those of GitLab's documentation ("Code Quality report
format"). Our own JSON: the schemas that the program prints. SCRUPLE names the program, REPORT_SCHEMAS the folder of schemas.
"""

import json
import os
import shutil
import subprocess
import tempfile
import unittest
import xml.etree.ElementTree
from pathlib import Path

import jsonschema
import xmlschema

TESTS = Path(__file__).parent.parent
PROGRAM = os.path.abspath(os.environ.get("SCRUPLE", "scruple"))
SCHEMAS = Path(os.environ["REPORT_SCHEMAS"])

HOSTILE = """solution "::error::%0A | <script>alert(1)</script> @all µ ]]> & \x07"
    made at    25 °C
    1 kg       water
    0,5 g      sodium chloride
    1 g        "µ 😀 𝛂 salt"
"""


def run(*arguments, folder=None):
    done = subprocess.run([PROGRAM, *arguments], capture_output=True, encoding="utf-8", check=False, cwd=folder)
    assert done.returncode in (0, 1, 2) and "panicked" not in done.stderr, done.stderr
    return done.stdout


class Reports(unittest.TestCase):
    @classmethod
    def setUpClass(cls):
        cls.folder = tempfile.TemporaryDirectory()
        place = Path(cls.folder.name)
        for name in ("findings", "command"):
            shutil.copytree(TESTS / "fixtures" / name, place / name)
        (place / "odd, µ").mkdir()
        (place / "odd, µ" / "a<b>#1%&.prep").write_text(HOSTILE, encoding="utf-8")
        (place / "broken").mkdir()
        (place / "broken" / "scruple.toml").write_text("language = 1\nfindings = 3\n", encoding="utf-8")
        (place / "broken" / "a.prep").write_text("solution Salt\n    1 kg       water\n", encoding="utf-8")
        formats = ["json", "sarif", "code-quality", "rdjson", "junit"]
        outputs = [f"--output={name}={place / name}" for name in formats]
        run("check", ".", *outputs, folder=place)
        cls.reports = {name: (place / name).read_text(encoding="utf-8") for name in formats}
        cls.count = len(json.loads(cls.reports["json"]))

    @classmethod
    def tearDownClass(cls):
        cls.folder.cleanup()

    def fits(self, report, schema):
        validator = jsonschema.validators.validator_for(schema)
        validator.check_schema(schema)
        for error in validator(schema).iter_errors(report):
            self.fail(f"{error.json_path}: {error.message[:500]}")

    def test_there_is_something_to_report(self):
        self.assertGreater(self.count, 100)

    def test_json(self):
        schema = json.loads(run("check", "--schema"))
        for definition in schema["$defs"].values():
            definition["additionalProperties"] = False
        self.fits(json.loads(self.reports["json"]), schema)
        shown = json.loads(run("show", "--schema"))
        for name, definition in json.loads(run("check", "--schema"))["$defs"].items():
            self.assertEqual(definition, shown["$defs"][name], name)

    def test_sarif(self):
        found = list(SCHEMAS.glob("node_modules/@microsoft/jest-sarif/lib/schemas/sarif-2.1.0*.json"))
        self.assertEqual(len(found), 1)
        report = json.loads(self.reports["sarif"])
        self.fits(report, json.loads(found[0].read_text(encoding="utf-8")))
        (log,) = report["runs"]
        rules = log["tool"]["driver"]["rules"]
        self.assertEqual(len(log["results"]), self.count)
        for result in log["results"]:
            self.assertEqual(rules[result["ruleIndex"]]["id"], result["ruleId"])
            self.assertTrue(result["partialFingerprints"]["primaryLocationLineHash"])
            region = result["locations"][0]["physicalLocation"]["region"]
            self.assertLessEqual((region["startLine"], region["startColumn"]), (region["endLine"], region["endColumn"]))
        # What code scanning asks of a rule.
        for rule in rules:
            for field in ("id", "shortDescription", "fullDescription", "help"):
                self.assertTrue(rule[field], rule["id"])

    def test_rdjson(self):
        report = json.loads(self.reports["rdjson"])
        self.assertEqual(len(report["diagnostics"]), self.count)
        place = Path(self.folder.name) / "rdjson"
        validator = SCHEMAS / "node_modules/.bin/rdformat-validator"
        done = subprocess.run([validator, place], capture_output=True, encoding="utf-8", check=False)
        self.assertEqual(done.returncode, 0, done.stdout + done.stderr)

    def test_junit(self):
        schema = xmlschema.XMLSchema(next(SCHEMAS.glob("**/junit-10.xsd")))
        tree = xml.etree.ElementTree.fromstring(self.reports["junit"])
        schema.validate(tree)
        cases = tree.findall(".//testcase")
        self.assertEqual(len(cases), int(tree.get("tests")))
        self.assertEqual(len(tree.findall(".//failure")), int(tree.get("failures")))
        self.assertEqual(len(tree.findall(".//failure")) + len(tree.findall(".//system-out")), self.count)

    def test_code_quality(self):
        report = json.loads(self.reports["code-quality"])
        self.assertEqual(len(report), self.count)
        for entry in report:
            self.assertEqual(set(entry), {"description", "check_name", "fingerprint", "severity", "location"})
            self.assertIn(entry["severity"], ("info", "minor", "major", "critical", "blocker"))
            self.assertGreaterEqual(entry["location"]["lines"]["begin"], 1)
            self.assertFalse(entry["location"]["path"].startswith(("/", "./")))
        self.assertEqual(len({entry["fingerprint"] for entry in report}), len(report))

    def test_a_comparison(self):
        place = Path(self.folder.name) / "command"
        text = (place / "eluent.prep").read_text(encoding="utf-8")
        (place / "other.prep").write_text(text.replace("8.77 g", "18.77 g").replace("pH 6.9 to 7.2", "pH 7.1 to 7.2"), encoding="utf-8")
        schema = json.loads(run("compare", "--schema"))
        for definition in [schema, *schema["$defs"].values()]:
            definition["additionalProperties"] = False
        printed = json.loads(run("compare", "--files", "eluent.prep", "other.prep", "--format", "json", folder=place))
        self.assertTrue(printed["changes"] and printed["edits"])
        self.fits(printed, schema)


if __name__ == "__main__":
    unittest.main()

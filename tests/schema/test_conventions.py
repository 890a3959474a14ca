"""The files by which services and tools call the program: against their schemas, by their linters, and as they run.

SCRUPLE names the program. The schemas of actions, workflows and pipelines come with check-jsonschema; pre-commit checks its
manifest itself; zizmor looks at what runs with which rights.
"""

import os
import subprocess
import sys
import tempfile
import unittest
from pathlib import Path

import yaml

ROOT = Path(__file__).parent.parent.parent
PROGRAM = Path(os.path.abspath(os.environ.get("SCRUPLE", "scruple")))
TOOLS = Path(sys.executable).parent
ACTION = ROOT / "editors/github/action.yml"


def run(*command, folder=ROOT, **environment):
    variables = {**os.environ, "PATH": f"{PROGRAM.parent}{os.pathsep}{os.environ['PATH']}", **environment}
    return subprocess.run(command, capture_output=True, encoding="utf-8", check=False, cwd=folder, env=variables)


class Conventions(unittest.TestCase):
    def succeeds(self, *command, **options):
        done = run(*command, **options)
        self.assertEqual(done.returncode, 0, done.stdout + done.stderr)
        return done.stdout

    def begun(self, service):
        folder = tempfile.TemporaryDirectory()
        self.addCleanup(folder.cleanup)
        self.succeeds(str(PROGRAM), "init", "--ci", service, folder=folder.name)
        return Path(folder.name)

    def test_the_hooks_are_a_manifest(self):
        self.succeeds(str(TOOLS / "pre-commit"), "validate-manifest", ".pre-commit-hooks.yaml")
        for hook in yaml.safe_load((ROOT / ".pre-commit-hooks.yaml").read_text()):
            program, *arguments = hook["entry"].split()
            self.assertEqual((program, arguments[-1]), ("scruple", "--"), "no file name is taken for an option")
            self.succeeds(str(PROGRAM), *arguments, "tests/fixtures/command/eluent.prep")

    def test_the_action_fits_its_schema(self):
        self.succeeds(str(TOOLS / "check-jsonschema"), "--builtin-schema", "vendor.github-actions", str(ACTION))

    def test_the_workflow_fits_its_schema(self):
        workflow = self.begun("github") / ".github/workflows/recipes.yml"
        self.succeeds(str(TOOLS / "check-jsonschema"), "--builtin-schema", "vendor.github-workflows", str(workflow))

    def test_the_pipeline_fits_its_schema(self):
        pipeline = self.begun("gitlab") / ".gitlab-ci.yml"
        self.succeeds(str(TOOLS / "check-jsonschema"), "--builtin-schema", "vendor.gitlab-ci", str(pipeline))

    def test_nothing_runs_with_more_rights_than_it_needs(self):
        workflow = self.begun("github") / ".github/workflows/recipes.yml"
        # A starter file names its action by version; a laboratory pins it as it pins others.
        for path in (ACTION, workflow):
            done = run(str(TOOLS / "zizmor"), "--offline", "--no-progress", "--min-severity", "medium", str(path))
            output = done.stdout + done.stderr
            left = [line for line in output.splitlines() if line.startswith(("error[", "warning[")) and "unpinned-uses" not in line]
            self.assertEqual(left, [], output)

    def test_the_steps_of_the_action_run(self):
        folder = self.begun("none")
        git = ["git", "-c", "user.name=Mirela Tanase", "-c", "user.email=bench@example.org", "-c", "init.defaultBranch=main"]
        for arguments in (["init", "--quiet"], ["add", "--all"], ["commit", "--quiet", "--message", "Recipes"]):
            self.succeeds(*git, *arguments, folder=folder)
        buffers = folder / "buffers.prep"
        buffers.write_text(buffers.read_text().replace("70 mL ", "170 mL"))
        self.succeeds(*git, "commit", "--quiet", "--all", "--message", "More salt", folder=folder)
        summary = folder / "summary.md"
        action = yaml.safe_load(ACTION.read_text())
        printed = ""
        codes = []
        for step in action["runs"]["steps"]:
            self.assertEqual(step["shell"], "bash", "a composite step names its shell")
            self.assertNotIn("${{", step["run"], "inputs reach a script by its environment alone")
            if "cargo install" in step["run"]:
                continue
            inputs = {"BASE": "HEAD~1", "CHECKED_PATH": ".", "FAIL_ON": "error", "BASELINE": "", "SARIF": "out.sarif"}
            self.assertLessEqual(set(step["env"]), set(inputs))
            done = run("bash", "-e", "-o", "pipefail", "-c", step["run"], folder=folder, GITHUB_STEP_SUMMARY=str(summary), **inputs)
            printed += done.stdout
            codes.append(done.returncode)
            self.assertEqual(done.stderr, "")
        # The edited line breaks an expectation, so the check fails and both say it at their lines.
        self.assertEqual(codes, [0, 1])
        self.assertIn("::warning title=What this line changes,file=buffers.prep,line=", printed)
        self.assertIn("::error title=expectation-fails,file=buffers.prep,line=", printed)
        self.assertIn("**1 breaks**", summary.read_text())
        self.assertTrue((folder / "out.sarif").is_file())

    def test_the_script_of_the_pipeline_runs(self):
        folder = self.begun("gitlab")
        pipeline = yaml.safe_load((folder / ".gitlab-ci.yml").read_text())
        for script in pipeline["recipes"]["script"]:
            self.succeeds("bash", "-e", "-c", script, folder=folder, CI_MERGE_REQUEST_DIFF_BASE_SHA="")
        for report in pipeline["recipes"]["artifacts"]["reports"].values():
            self.assertTrue((folder / report).is_file())


if __name__ == "__main__":
    unittest.main()

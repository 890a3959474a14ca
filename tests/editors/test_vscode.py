"""The files of the VS Code extension say what the program says: settings, snippets, addresses. Building it is another section of
tests/run."""

import json
import pathlib
import re
import subprocess

HERE = pathlib.Path(__file__).parent
FOLDER = HERE.parents[1] / "editors/vscode"
PACKAGE = json.loads((FOLDER / "package.json").read_text())


def test_every_kind_of_value_has_a_switch():
    source = (HERE.parents[1] / "src/editor/inlay_hints.rs").read_text()
    kinds = set(re.findall(r'HintCategory::\w+ => "(\w+)"', source))
    settings = PACKAGE["contributes"]["configuration"]["properties"]
    named = {name.removeprefix("scruple.inlayHints.") for name in settings if name.startswith("scruple.inlayHints.")}
    assert kinds and named == kinds | {"enabled"}


def test_every_file_that_is_named_is_there():
    contributes = PACKAGE["contributes"]
    language = contributes["languages"][0]
    named = [PACKAGE["icon"], language["configuration"], *language["icon"].values()]
    named += [one["path"] for one in contributes["grammars"] + contributes["snippets"]]
    for path in named:
        assert (FOLDER / path).is_file(), path


def test_a_lock_names_no_registry():
    assert '"resolved"' not in (FOLDER / "package-lock.json").read_text()


def test_what_snippets_insert_is_in_order(scruple, tmp_path):
    """Each snippet that is a whole block, with what it proposes, is checked without an error."""
    snippets = json.loads((FOLDER / "snippets/scruple.json").read_text())
    checked = 0
    for title, snippet in snippets.items():
        text = "\n".join(snippet["body"])
        text = re.sub(r"\$\{\d+\|([^,|]*)[^}]*\}", r"\1", text)
        text = re.sub(r"\$\{\d+:([^}]*)\}", r"\1", text)
        text = re.sub(r"\n\s*\$0", "", text).replace("$0", "")
        if not re.match(r"(solution|bottle|lab) ", text):
            continue
        recipe = tmp_path / f"{title}.prep"
        recipe.write_text(text + "\n")
        done = subprocess.run([scruple, "check", "--fail-on", "error", str(recipe)], capture_output=True, text=True)
        assert done.returncode == 0, f"{title}\n{done.stdout}{done.stderr}"
        checked += 1
    assert checked >= 5

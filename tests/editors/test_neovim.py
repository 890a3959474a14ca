"""Neovim, as a user runs it, without a screen: findings, hover, values, fixes, completion, the built-in library."""

import json
import os
import pathlib
import subprocess
import time

import pytest

HERE = pathlib.Path(__file__).parent
EDITORS = HERE.parents[1] / "editors"


@pytest.fixture
def sitting(scruple, nvim, library, tmp_path):
    """What a user sees in one sitting at a recipe of the demonstration library."""
    result = tmp_path / "result.json"
    environment = {
        "PATH": os.environ["PATH"],
        "HOME": str(tmp_path / "home"),
        "XDG_CACHE_HOME": str(tmp_path / "cache"),
        "EDITORS": str(EDITORS),
        "SCRUPLE": scruple,
        "RECIPE": str(library / "buffers.prep"),
        "NAME": "sodium acetate trihydrate",
        "RESULT": str(result),
    }
    (tmp_path / "home").mkdir()
    command = [nvim, "--headless", "--clean", "-S", str(HERE / "neovim.lua")]
    done = subprocess.run(command, env=environment, cwd=tmp_path, capture_output=True, text=True, timeout=120)
    assert result.is_file(), done.stderr
    seen = json.loads(result.read_text())
    assert "problem" not in seen, seen["problem"]
    return seen


def test_a_sitting(sitting, library, tmp_path):
    assert sitting["filetype"] == "scruple"
    assert sitting["commentstring"] == "# %s"
    assert sitting["encoding"] == "utf-8"
    assert sitting["root"] == str(library)

    hover = sitting["hover"]["contents"]
    assert hover["kind"] == "markdown"
    # Molar mass from the standard atomic weights (IUPAC 2021): C2H9NaO5 is 136.08 g/mol.
    assert "136.08" in hover["value"]

    definition = sitting["definition"]
    place = definition[0] if isinstance(definition, list) else definition
    assert (place.get("uri") or place["targetUri"]).startswith("file://" + str(tmp_path / "cache/scruple/"))
    assert "sodium acetate trihydrate" in sitting["library_line"]
    assert sitting["library_file"].startswith(str(tmp_path / "cache/scruple/"))
    assert not os.access(sitting["library_file"], os.W_OK) or os.geteuid() == 0
    assert sitting["servers"] == 1

    # The recipe sets the pH to 4.80 before it is made up; the value beside its header is that of the finished solution.
    assert any(hint["label"].startswith("pH 4.8") for hint in sitting["hints"]), sitting["hints"]
    assert "Acetate buffer" in [symbol["name"] for symbol in sitting["symbols"]]

    assert "decimal-comma" not in [finding["code"] for finding in sitting["before"]]
    assert "decimal-comma" in [finding["code"] for finding in sitting["after"]]
    assert sitting["fixed"] == "    1.5 g      sodium chloride"
    assert "sodium chloride" in sitting["completions"]


def test_no_server_is_left_behind(scruple, sitting):
    """After Neovim has ended no server of this program runs any more."""
    deadline = time.monotonic() + 10
    while (left := servers(scruple)) and time.monotonic() < deadline:
        time.sleep(0.05)
    assert not left


def servers(program):
    """The processes that run a program, by the links of the process table."""
    found = []
    for process in pathlib.Path("/proc").glob("[0-9]*"):
        try:
            if os.readlink(process / "exe") == os.path.realpath(program):
                found.append(int(process.name))
        except OSError:
            continue
    return found

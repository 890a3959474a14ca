"""Emacs with eglot, as a user runs it, without a screen: findings, hover, definition, completion, and a clean goodbye."""

import json
import os
import pathlib
import shutil
import subprocess

HERE = pathlib.Path(__file__).parent
EDITORS = HERE.parents[1] / "editors"


def test_a_sitting(scruple, library, tmp_path):
    emacs = shutil.which("emacs")
    assert emacs, "install the Debian packages emacs-nox and elpa-eglot"
    result = tmp_path / "result.json"
    environment = {
        "PATH": os.environ["PATH"],
        "HOME": str(tmp_path),
        "XDG_CACHE_HOME": str(tmp_path / "cache"),
        "LANG": "C.UTF-8",
        "EDITORS": str(EDITORS),
        "SCRUPLE": scruple,
        "RECIPE": str(library / "buffers.prep"),
        "NAME": "sodium acetate trihydrate",
        "RESULT": str(result),
    }
    done = subprocess.run(
        [emacs, "--batch", "-l", str(HERE / "emacs.el")],
        env=environment,
        cwd=tmp_path,
        stdin=subprocess.DEVNULL,
        capture_output=True,
        text=True,
        timeout=180,
    )
    assert result.is_file(), done.stderr
    seen = json.loads(result.read_text())
    assert "problem" not in seen, (seen, done.stderr)
    assert seen["mode"] == "scruple-mode"
    assert seen["comment"] == "# "
    # Molar mass from the standard atomic weights (IUPAC 2021): C2H9NaO5 is 136.08 g/mol.
    assert "136.08" in seen["hover"]
    assert seen["definition"].startswith(str(tmp_path / "cache/scruple/"))
    assert any("decimal-comma" in finding for finding in seen["findings"])
    assert "sodium chloride" in seen["completions"]
    # This eglot ends the process itself right after `exit`, so only the end is judged, not its code.
    assert seen["ended"] is True

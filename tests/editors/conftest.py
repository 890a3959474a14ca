"""What all tests of this folder share: the program under test and a library of recipes of their own."""

import os
import pathlib
import shutil
import sys

import pytest

HERE = pathlib.Path(__file__).parent
SCRUPLE = os.environ.get("SCRUPLE") or str(HERE.parents[1] / "target/debug/scruple")


@pytest.fixture
def scruple():
    """The path of the program."""
    assert pathlib.Path(SCRUPLE).is_file(), f"build the program first: {SCRUPLE}"
    return SCRUPLE


@pytest.fixture
def library(tmp_path):
    """A copy of the demonstration library that the tests may write to."""
    shutil.copytree(HERE.parent / "library", tmp_path / "library")
    return tmp_path / "library"


@pytest.fixture
def nvim():
    """The path of Neovim, installed beside Python by tests/run."""
    found = pathlib.Path(sys.executable).parent / "nvim"
    assert found.is_file(), "install tests/editors/requirements.txt"
    return str(found)

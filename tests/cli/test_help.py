"""The command line explains itself, and explains quickly."""

import subprocess
import sys

import pytest

import surfdisp

HEAVY = ("numba", "scipy", "obspy", "matplotlib", "h5py", "bokeh", "dask")
VERBS = ("run", "look", "records")


def test_version_is_printed_alone():
    done = subprocess.run(
        [sys.executable, "-m", "surfdisp.cli", "--version"], capture_output=True, text=True, check=True
    )
    assert done.stdout == f"{surfdisp.__version__}\n"


@pytest.mark.parametrize("words", [[], *([verb] for verb in VERBS)])
def test_help_shows_an_example_and_loads_nothing_heavy(words):
    code = (
        "import sys\n"
        "from surfdisp.cli import main\n"
        f"sys.argv = ['surfdisp', *{words!r}, '--help']\n"
        "try:\n    main()\nexcept SystemExit as end:\n    assert end.code == 0, end.code\n"
        f"print('loaded', [name for name in {HEAVY!r} if name in sys.modules])\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert "Example" in done.stdout
    assert f"surfdisp {words[0] if words else 'run'}" in done.stdout
    assert "loaded []" in done.stdout

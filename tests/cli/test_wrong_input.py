"""Wrong input ends in one line that names the file, exit code 2, and nothing written."""

import sys
from pathlib import Path

import pytest

from surfdisp.cli import main
from surfdisp.kernels import jit

sys.path.insert(0, str(Path(__file__).parents[1] / "benchmarks"))
from wrong_inputs import make_wrong_inputs

CASES = [
    *("missing", "text", "truncated", "empty", "folder", "no_geometry"),
    *("unknown_section", "broken_toml", "negative_spacing"),
]


def run(monkeypatch, *words: str) -> object:
    monkeypatch.setattr(sys, "argv", ["surfdisp", *words])
    with pytest.raises(SystemExit) as end:
        main()
    return end.value.code


@pytest.mark.parametrize("case", CASES)
def test_run_refuses_in_one_line_that_names_the_file(case, tmp_path, monkeypatch, capsys):
    monkeypatch.setattr(jit, "is_cold", lambda: True)  # the first run on a machine says that it compiles
    words = make_wrong_inputs(tmp_path)[case]
    out = tmp_path / "out"
    assert run(monkeypatch, "run", *words, "--out", str(out)) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    lines = printed.err.strip().splitlines()
    assert len(lines) == 1
    assert Path(words[0]).name in lines[0]
    assert not out.exists()


def test_every_wrong_input_of_the_bars_is_tried_here(tmp_path):
    assert set(make_wrong_inputs(tmp_path)) == set(CASES)


def test_a_file_in_place_of_the_output_folder_is_refused_before_the_work(tmp_path, monkeypatch, capsys):
    out = tmp_path / "result"
    out.write_text("mine")
    make_wrong_inputs(tmp_path)
    assert run(monkeypatch, "run", str(tmp_path / "good.dat"), "--out", str(out)) == 2
    assert "is a file; give a folder" in capsys.readouterr().err
    assert out.read_text() == "mine"


def test_an_unknown_option_ends_with_code_2(monkeypatch, capsys):
    assert run(monkeypatch, "run", "x.dat", "--ouput", "y") == 2
    assert "--ouput" in capsys.readouterr().err

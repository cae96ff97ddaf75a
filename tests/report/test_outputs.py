"""The output folder: everything of the contract, replaced file by file and on success only."""

import dataclasses
import json

import pytest

from surfdisp.core import InputError
from surfdisp.project import read_project
from surfdisp.report import outputs, write_outputs

from .conftest import survey_of, without_picks

CONTRACT = {"project.h5", "summary.json", "curve.csv", "profile.csv", "report.pdf"}


def contents(folder):
    return {path.name: path.read_bytes() for path in folder.iterdir()}


def test_a_run_leaves_every_file_of_the_contract_and_nothing_else(tmp_path, survey):
    out = tmp_path / "new" / "out"
    write_outputs(out, survey)
    names = set(contents(out))
    assert names >= CONTRACT
    assert {name for name in names - CONTRACT if not name.startswith("figure_")} == set()
    assert read_project(out / "project.h5") == survey
    assert [path.name for path in (tmp_path / "new").iterdir()] == ["out"]


def test_an_existing_folder_is_replaced_file_by_file(tmp_path):
    unpicked = without_picks(survey_of(1))
    out = tmp_path / "out"
    out.mkdir()
    (out / "notes of the crew.txt").write_text("muddy")
    (out / "figure_of_mine.png").write_text("mine")
    (out / "figure_fit.png").write_text("of an earlier run")
    (out / "summary.json").write_text("old")
    write_outputs(out, unpicked)
    names = set(contents(out))
    assert json.loads((out / "summary.json").read_text())["vs30"] is None
    assert {"notes of the crew.txt", "figure_of_mine.png", "figure_records.png"} <= names
    assert "figure_fit.png" not in names
    assert read_project(out / "project.h5") == unpicked


@pytest.mark.parametrize("step", ["write_project", "write_tables", "write_figures", "write_report"])
def test_a_failure_leaves_the_old_files_untouched(tmp_path, unpicked, monkeypatch, step):
    out = tmp_path / "out"
    out.mkdir()
    for name in ("project.h5", "summary.json", "figure_fit.png"):
        (out / name).write_text("old")
    before = contents(out)

    def fails(*arguments, **options):
        raise RuntimeError("the lamp went out")

    for other in ("write_figures", "write_report"):  # nothing slow before the step that fails
        monkeypatch.setattr(outputs, other, lambda *arguments, **options: None)
    monkeypatch.setattr(outputs, step, fails)
    with pytest.raises(RuntimeError, match="lamp"):
        write_outputs(out, unpicked)
    assert contents(out) == before
    assert [path.name for path in tmp_path.iterdir()] == ["out"]


def test_a_file_in_the_place_of_the_folder_is_named(tmp_path, unpicked):
    (tmp_path / "out").write_text("a file")
    with pytest.raises(InputError, match=r"out: the output folder is a file"):
        write_outputs(tmp_path / "out", unpicked)
    with pytest.raises(InputError, match="cannot be made"):
        write_outputs(tmp_path / "out" / "deeper", dataclasses.replace(unpicked))

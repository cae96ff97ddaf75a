"""The project file: exact round trips, the same bytes again, and nothing lost when the writer dies."""

import dataclasses
import io
import os
import pickle
import signal
import subprocess
import sys
from pathlib import Path

import h5py
import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings

from surfdisp import core
from surfdisp.core import Gather, Picks, Profile, Record, SiteResult, StoreError, SurveyResult
from surfdisp.project import codec, read_project, store, write_project

from .nouns import SURVEYS


def small(title="one", **products):
    empty = dict.fromkeys(("records", "gathers", "images", "picks", "stacked_images"), ())
    return SurveyResult(**{"title": title, "settings": "[survey]\n", "version": "0.1.0", **empty, **products})


@settings(max_examples=40, deadline=None, suppress_health_check=list(HealthCheck))
@given(survey=SURVEYS)
def test_every_survey_comes_back_as_it_was(survey):
    with h5py.File(io.BytesIO(), "w") as file:
        codec.encode_noun(file, survey)
        back = codec.decode(file)
    assert back == survey
    assert list_of_dict_orders(back) == list_of_dict_orders(survey)


def list_of_dict_orders(survey):
    if survey.site is None:
        return []
    return [list(survey.site.site_class), *(list(inner) for inner in survey.site.site_class.values())]


def test_a_survey_comes_back_from_its_file(tmp_path):
    survey = small(records=(Record(file="a.dat", sha256="0f", used=True, interval=1 / 8000),))
    write_project(tmp_path / "project.h5", survey)
    assert read_project(tmp_path / "project.h5") == survey
    assert [path.name for path in tmp_path.iterdir()] == ["project.h5"]


def test_signed_zero_nan_and_the_last_bit_survive(tmp_path):
    values = np.array([-0.0, np.nan, np.nextafter(1.0, 2.0), 5e-324, np.inf])
    log = Profile(depth=np.arange(5.0), median=values, low=values, high=values)
    write_project(tmp_path / "project.h5", small(logs=(log,)))
    assert read_project(tmp_path / "project.h5").logs[0].median.tobytes() == values.tobytes()


def test_every_noun_of_a_survey_is_known_to_the_codec():
    products = {name for name in core.__all__ if dataclasses.is_dataclass(getattr(core, name))}
    assert set(codec.NOUNS) == products - {"Sensitivity"}  # which no survey holds


def test_arrays_carry_unit_and_axes_and_groups_their_type_and_version(tmp_path):
    gather = Gather(data=np.zeros((2, 3)), interval=0.001, receivers=[0.0, 2.0], source=-4.0)
    write_project(tmp_path / "project.h5", small(gathers=(gather,)))
    with h5py.File(tmp_path / "project.h5") as file:
        assert dict(file["gathers/0"].attrs) == {"type": "Gather", "format_version": 1}
        assert dict(file["gathers/0/receivers"].attrs) == {"type": "array", "unit": "m", "axes": "receiver"}
        assert file["gathers/0/data"].attrs["axes"] == "receiver,sample"
        assert file["gathers/0/interval"].attrs["unit"] == "s"
        assert file.attrs["file"] == "surfdisp project"


def test_the_same_survey_gives_the_same_bytes(tmp_path):
    generator = np.random.default_rng(3)
    gather = Gather(
        data=generator.normal(size=(4, 900)), interval=0.001, receivers=np.arange(4.0), source=-4.0
    )
    survey = small("naïve #$*", gathers=(gather,), warnings=("a", "b"))
    script = (
        "import sys, pickle; from surfdisp.project import write_project;"
        "write_project(sys.argv[1], pickle.load(sys.stdin.buffer))"
    )
    for name, seed in (("one.h5", "1"), ("two.h5", "2")):
        subprocess.run(
            [sys.executable, "-c", script, str(tmp_path / name)],
            input=pickle.dumps(survey), check=True, env={**os.environ, "PYTHONHASHSEED": seed},
        )  # fmt: skip
    assert (tmp_path / "one.h5").read_bytes() == (tmp_path / "two.h5").read_bytes()


def test_traces_are_compressed(tmp_path):
    traces = np.round(np.random.default_rng(0).normal(size=(24, 4000)) * 100.0)  # counts of a recorder
    gather = Gather(data=traces, interval=0.001, receivers=np.arange(24.0), source=-4.0)
    write_project(tmp_path / "project.h5", small(gathers=(gather,)))
    assert (tmp_path / "project.h5").stat().st_size < 0.4 * traces.nbytes


@pytest.mark.parametrize("stage", ["_write", "_flush"])
def test_a_failure_before_the_rename_leaves_the_old_file(tmp_path, monkeypatch, stage):
    write_project(tmp_path / "project.h5", small("old"))

    def fails(*arguments):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(store, stage, fails)
    with pytest.raises(StoreError, match=r"project\.h5.*No space left"):
        write_project(tmp_path / "project.h5", small("new"))
    monkeypatch.undo()
    assert read_project(tmp_path / "project.h5").title == "old"
    assert [path.name for path in tmp_path.iterdir()] == ["project.h5"]


KILLED_AT = """
import os, signal, sys
from pathlib import Path
from surfdisp.core import SurveyResult
from surfdisp.project import store

def killed(*arguments):
    os.kill(os.getpid(), signal.SIGKILL)

moments = {"rename": (Path, "replace"), "flush": (store, "_flush"), "field": (store, "encode_noun")}
owner, name = moments[sys.argv[2]]
setattr(owner, name, killed)
empty = dict.fromkeys(("records", "gathers", "images", "picks", "stacked_images"), ())
store.write_project(sys.argv[1], SurveyResult(title="new", settings="", version="", **empty))
"""


@pytest.mark.parametrize("moment", ["field", "flush", "rename"])
def test_a_killed_writer_leaves_the_old_file(tmp_path, moment):
    path = tmp_path / "project.h5"
    write_project(path, small("old"))
    before = path.read_bytes()
    done = subprocess.run([sys.executable, "-c", KILLED_AT, str(path), moment], check=False)
    assert done.returncode == -signal.SIGKILL
    assert path.read_bytes() == before
    write_project(path, small("newer"))
    assert read_project(path).title == "newer"


def line_of(path: Path) -> str:
    with pytest.raises(StoreError) as caught:
        read_project(path)
    assert "\n" not in str(caught.value)
    return str(caught.value)


def test_foreign_files_get_one_clear_line(tmp_path):
    assert "no such project file" in line_of(tmp_path / "absent.h5")
    assert "no such project file" in line_of(tmp_path)
    (tmp_path / "text.h5").write_text("not HDF5 at all\n")
    assert "not a project file" in line_of(tmp_path / "text.h5")
    with h5py.File(tmp_path / "other.h5", "w") as file:
        file["x"] = 1
    assert "not a surfdisp project" in line_of(tmp_path / "other.h5")


def test_damaged_files_get_one_clear_line(tmp_path):
    path = tmp_path / "project.h5"
    gather = Gather(data=np.ones((3, 3000)), interval=0.001, receivers=np.arange(3.0), source=-4.0)
    write_project(path, small(gathers=(gather,)))
    whole = path.read_bytes()
    for kept in (0, 100, len(whole) // 2, len(whole) - 1):
        path.write_bytes(whole[:kept])
        assert str(path) in line_of(path)


def spoiled(tmp_path, spoil):
    path = tmp_path / "project.h5"
    picks = Picks(
        **{name: [1.0] for name in ("frequency", "velocity", "sigma", "half_width")},
        accepted=[1],
        reason=[""],
    )
    write_project(path, small(picks=(picks,)))
    with h5py.File(path, "r+") as file:
        spoil(file)
    return path


SPOILS = {
    "newer surfdisp": lambda file: file.attrs.__setitem__("format_version", 2),
    "format version 7": lambda file: file["picks/0"].attrs.__setitem__("format_version", 7),
    "unknown type 'Section'": lambda file: file["picks/0"].attrs.__setitem__("type", "Section"),
    "missing or unknown fields: tau": lambda file: file["picks/0"].__setitem__("tau", 1.0),
    "missing or unknown fields: mode": lambda file: file["picks/0"].__delitem__("mode"),
    "has no type": lambda file: file["picks/0/sigma"].attrs.__delitem__("type"),
    "has no member 0": lambda file: file.move("picks/0", "picks/4"),
    "wave must be one of": lambda file: file["picks/0/wave"].__setitem__((), "scholte"),
    "a Picks where a SurveyResult": lambda file: become_picks(file),
}


def become_picks(file):
    for name in list(file):
        if name != "picks":
            del file[name]
    for name in list(file["picks/0"]):
        file[name] = file["picks/0"][name]
    del file["picks"]
    file.attrs["type"] = "Picks"


@pytest.mark.parametrize("line", SPOILS)
def test_a_project_that_breaks_the_format_is_refused(tmp_path, line):
    assert line in line_of(spoiled(tmp_path, SPOILS[line]))


def test_links_out_of_the_file_are_not_followed(tmp_path):
    write_project(tmp_path / "secret.h5", small("secret"))

    def link_out(file):
        del file["title"]
        file["title"] = h5py.ExternalLink("secret.h5", "/title")

    assert "has no member title" in line_of(spoiled(tmp_path, link_out))


def test_what_is_no_noun_value_cannot_be_written(tmp_path):
    with pytest.raises(StoreError, match="complex"):
        write_project(tmp_path / "project.h5", small(title=1j))
    assert not list(tmp_path.iterdir())


def test_a_folder_that_cannot_be_written_is_named(tmp_path):
    with pytest.raises(StoreError, match="absent"):
        write_project(tmp_path / "absent" / "project.h5", small())


def test_site_results_keep_their_class_names(tmp_path):
    steps = Profile(depth=[0.0], median=[200.0], low=[180.0], high=[220.0])
    vs30 = core.Interval(median=200.0, low=180.0, high=220.0)
    site = SiteResult(
        vs30=vs30, average_velocity={"10": vs30}, profile=steps, shear_modulus=steps, resolved_depth=31.0,
        site_class={"EN 1998-1:2004": {"C": 0.9, "B": 0.1}}, median_class={}, class_bounds={},
    )  # fmt: skip
    write_project(tmp_path / "project.h5", small(site=site))
    assert list(read_project(tmp_path / "project.h5").site.site_class["EN 1998-1:2004"]) == ["C", "B"]

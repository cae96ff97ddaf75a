"""A configuration means what it says, or is refused in one line that names file and field."""

import tomllib
from pathlib import Path

import pytest

from surfdisp.core import InputError
from surfdisp.survey.borehole import read_borehole_log
from surfdisp.survey.load import load_settings, settings_from, settings_text


def write(folder: Path, text: str) -> Path:
    for name in ("b.dat", "a.dat"):
        (folder / name).write_bytes(b"x")
    path = folder / "survey.toml"
    path.write_text(text)
    return path


def test_patterns_are_sorted_and_taken_relative_to_the_configuration(tmp_path, monkeypatch):
    path = write(tmp_path, '[records]\nfiles = ["*.dat"]\n')
    monkeypatch.chdir("/")
    assert [Path(name).name for name in load_settings(path).records.files] == ["a.dat", "b.dat"]


def test_bare_files_are_the_same_run_as_a_configuration_that_only_lists_them(tmp_path):
    path = write(tmp_path, '[records]\nfiles = ["a.dat", "b.dat"]\n')
    bare = settings_from([tmp_path / "a.dat", tmp_path / "b.dat"])
    assert settings_text(bare) == settings_text(load_settings(path))


def test_the_settings_text_is_toml_that_states_the_defaults(tmp_path):
    path = write(tmp_path, '[records]\nfiles = ["a.dat"]\n')
    table = tomllib.loads(settings_text(load_settings(path)))
    assert table["records"]["minimum_traces"] == 8
    assert table["site"]["class_bounds"] == "SI"


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("[records\n", "not valid TOML"),
        (
            '[records]\nfiles = ["a.dat"]\n[wave]\nx = 1\n',
            "wave: unknown name; expected one of title, records",
        ),
        (
            '[records]\nfiles = ["a.dat"]\nspeling = 1\n',
            "records.speling: unknown name; expected one of files",
        ),
        (
            '[records]\nfiles = ["a.dat"]\n[[records.shots]]\nfile = "a.dat"\nsource = 1\n',
            "unknown name; expected one of file, source_m",
        ),
        ("[records]\nfiles = []\n", "records.files"),
        ('title = "x"\n', "records: missing"),
        ('[records]\nfiles = ["*.sg2"]\n', "no file matches"),
        ('[records]\nfiles = ["c.dat"]\n', "no such file"),
        ('[records]\nfiles = ["a.dat"]\n[records.receivers]\nspacing_m = -1\n', "spacing_m"),
        ('[records]\nfiles = ["a.dat"]\n[records.receivers]\nfirst_m = 1.0\n', "either spacing_m or"),
        ('[records]\nfiles = ["a.dat"]\n[inversion]\npoisson_ratio = 0.7\n', "inversion.poisson_ratio"),
        ('[records]\nfiles = ["a.dat"]\n[image]\nminimum_frequency_hz = nan\n', "minimum_frequency_hz"),
    ],
)
def test_a_broken_configuration_is_refused_with_file_and_field(tmp_path, text, words):
    path = write(tmp_path, text)
    with pytest.raises(InputError) as refused:
        load_settings(path)
    message = str(refused.value)
    assert str(tmp_path) in message
    assert words in message
    assert "\n" not in message


def test_a_folder_is_refused_with_what_to_give_instead(tmp_path):
    with pytest.raises(InputError, match="is a folder; give the field files"):
        settings_from([tmp_path])


def test_borehole_log_steps_are_read_and_bad_numbers_named_with_their_line(tmp_path):
    log = tmp_path / "log.csv"
    log.write_text("depth_m,vs_m_s\n0,150\n4.5,240\n")
    profile = read_borehole_log(log)
    assert profile.depth.tolist() == [0.0, 4.5]
    assert profile.median.tolist() == [150.0, 240.0]
    log.write_text("depth_m,vs_m_s\n0,150\n4.5,hard\n")
    with pytest.raises(InputError, match="line 3: vs_m_s must be a positive number; got 'hard'"):
        read_borehole_log(log)


@pytest.mark.parametrize("rows", ["0,nan", "0,-200", "3,200", "0,200\n0,210", "0,200\ninf,300", "0,200,9"])
def test_an_impossible_borehole_log_is_refused_by_name(tmp_path, rows):
    log = tmp_path / "log.csv"
    log.write_text(f"depth_m,vs_m_s\n{rows}\n" if rows != "0,200,9" else "depth,speed\n0,200,9\n")
    with pytest.raises(InputError, match=r"log\.csv"):
        read_borehole_log(log)

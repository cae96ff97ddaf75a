"""The whole job from the command line: the contract of the output folder, on the demo and on field files."""

import csv
import hashlib
import json
import sys
from pathlib import Path

import numpy as np
import pytest

from surfdisp.cli import main
from surfdisp.project import read_project

ROOT = Path(__file__).parents[2]
CONFIG = next(iter(sorted((ROOT / "configs").glob("*.toml"))))
TABLES = ("curve.csv", "profile.csv", "summary.json")


def run(*words: object) -> None:
    before, sys.argv = sys.argv, ["surfdisp", *map(str, words)]
    try:
        with pytest.raises(SystemExit) as end:
            main()
    finally:
        sys.argv = before
    assert end.value.code in (0, None)


def reject(constant):
    raise AssertionError(f"not strict JSON: {constant}")


def summary_in(folder: Path) -> dict:
    return json.loads((folder / "summary.json").read_text(), parse_constant=reject)


@pytest.fixture(scope="module")
def demo(tmp_path_factory):
    out = tmp_path_factory.mktemp("demo") / "out"
    run("run", CONFIG, "--out", out)
    return out


@pytest.mark.slow
class TestDemo:
    def test_vs30_is_within_5_percent_of_the_true_earth(self, demo):
        with (ROOT / "synthetic_records" / "true_earth.csv").open() as file:
            rows = list(csv.DictReader(file))
        thickness, vs = (np.array([float(row[name]) for row in rows]) for name in ("thickness_m", "vs_m_s"))
        top = np.concatenate([[0.0], np.cumsum(thickness[:-1])])
        true = 30.0 / np.sum(np.clip(30.0 - top, 0.0, thickness) / vs)
        assert abs(summary_in(demo)["vs30"]["median"] / true - 1.0) < 0.05

    def test_the_folder_holds_every_file_of_the_contract(self, demo):
        names = {path.name for path in demo.iterdir()}
        assert {"project.h5", "report.pdf", *TABLES} <= names
        assert any(name.endswith(".png") for name in names) or any((demo / "figures").glob("*.png"))

    def test_summary_names_each_record_by_base_name_and_true_digest(self, demo):
        for record in summary_in(demo)["records"]:
            content = (ROOT / "synthetic_records" / record["file"]).read_bytes()
            assert record["sha256"] == hashlib.sha256(content).hexdigest()

    def test_profile_steps_reach_30_m_with_ordered_percentiles(self, demo):
        profile = summary_in(demo)["profile"]
        assert profile[0]["depth"] == 0.0
        assert profile[-1]["depth"] >= 30.0
        assert all(row["low"] <= row["median"] <= row["high"] for row in profile)

    def test_class_probabilities_of_each_standard_sum_to_one(self, demo):
        classes = summary_in(demo)["site_class"]
        assert {"ASCE 7-22", "ASCE 7-16", "EN 1998-1:2004"} <= set(classes)
        for shares in classes.values():
            assert sum(shares.values()) == pytest.approx(1.0, abs=1e-6)

    def test_csv_columns_carry_their_units_and_agree_with_the_summary(self, demo):
        with (demo / "curve.csv").open() as file:
            rows = list(csv.DictReader(file))
        assert list(rows[0]) == ["frequency_hz", "velocity_m_s", "sigma_m_s", "wave", "kind", "mode"]
        assert [float(row["velocity_m_s"]) for row in rows] == pytest.approx(
            [point["velocity"] for point in summary_in(demo)["curve"]], rel=1e-3
        )

    def test_the_project_file_gives_back_what_the_tables_say(self, demo):
        result = read_project(demo / "project.h5")
        assert result.site.vs30.median == pytest.approx(summary_in(demo)["vs30"]["median"], rel=1e-3)

    def test_a_second_run_gives_the_same_numbers_and_field_files_stay_untouched(self, demo, tmp_path):
        before = {path: path.read_bytes() for path in (ROOT / "synthetic_records").glob("*.sg2")}
        run("run", CONFIG, "--out", tmp_path / "again")
        for name in TABLES:
            assert (tmp_path / "again" / name).read_bytes() == (demo / name).read_bytes()
        assert read_project(tmp_path / "again" / "project.h5") == read_project(demo / "project.h5")
        assert before == {path: path.read_bytes() for path in before}


@pytest.mark.slow
class TestFieldRecords:
    def test_spread_4m_from_bare_files_reaches_a_profile_and_reports_the_lateral_change(
        self, field_data, tmp_path, capsys
    ):
        run("run", *sorted((field_data / "spread_4m").glob("*.dat")), "--out", tmp_path)
        found = summary_in(tmp_path)
        assert found["vs30"]["low"] < found["vs30"]["median"] < found["vs30"]["high"]
        assert min(point["frequency"] for point in found["curve"]) >= 9.0
        assert any("halves" in warning for warning in found["warnings"])
        assert f"Vs30: {found['vs30']['median']:.0f} m/s" in capsys.readouterr().out

    def test_no_ridge_ends_without_a_profile_and_says_why(self, field_data, tmp_path):
        run("run", *sorted((field_data / "no_ridge").glob("*.dat")), "--out", tmp_path)
        found = summary_in(tmp_path)
        assert found["curve"] == []
        assert found["profile"] == []
        assert found["vs30"] is None
        assert found["site_class"] is None
        assert any("picked" in warning for warning in found["warnings"])
        assert (tmp_path / "report.pdf").stat().st_size > 0

    def test_one_bad_record_does_not_stop_the_survey(self, field_data, tmp_path):
        bad = tmp_path / "notes.dat"
        bad.write_text("not a record")
        run("run", bad, *sorted((field_data / "spread_1m").glob("*.dat")), "--out", tmp_path / "out")
        found = summary_in(tmp_path / "out")
        assert found["curve"] != []
        assert [record["used"] for record in found["records"] if record["file"] == "notes.dat"] == [False]

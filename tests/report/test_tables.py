"""The contract of summary.json, curve.csv and profile.csv."""

import csv
import dataclasses
import json

import numpy as np
import pytest

from surfdisp.core import DispersionCurve, Profile, Record
from surfdisp.report import summary, write_tables

CONTRACT = ("vs30", "resolved_depth", "site_class", "profile", "curve", "records", "warnings")


def refuse(word):
    raise AssertionError(f"{word} is no JSON")


def strict(path):
    return json.loads(path.read_text(encoding="ascii"), parse_constant=refuse)


def rows(path):
    with path.open(newline="") as file:
        return list(csv.reader(file))


def test_summary_json_has_the_keys_of_the_contract(tmp_path, survey):
    write_tables(tmp_path, survey)
    made = strict(tmp_path / "summary.json")
    assert set(CONTRACT) <= set(made)
    assert made["vs30"] == {name: getattr(survey.site.vs30, name) for name in ("median", "low", "high")}
    assert made["resolved_depth"] == survey.site.resolved_depth
    assert made["site_class"]["ASCE 7-22"] == survey.site.site_class["ASCE 7-22"]
    assert list(made["profile"][0]) == ["depth", "median", "low", "high"]
    assert list(made["curve"][0]) == ["frequency", "velocity", "sigma", "wave", "kind", "mode"]
    for name in ("frequency", "velocity", "sigma"):
        assert [row[name] for row in made["curve"]] == getattr(survey.curve, name).tolist()
    assert [row["low"] for row in made["profile"]] == survey.site.profile.low.tolist()
    assert {tuple(row) for row in made["records"]} == {("file", "sha256", "used", "reason")}
    assert made["records"][0] == {"file": "1001.dat", "sha256": "10" * 32, "used": True, "reason": None}
    assert made["records"][-1]["reason"] == "the file ends in trace 7 of 24"


def test_every_note_of_a_product_is_among_the_warnings_once(survey):
    repeated = dataclasses.replace(survey, warnings=(*survey.warnings, *survey.curve.notes))
    warnings = summary(repeated)["warnings"]
    assert set(survey.curve.notes) | set(survey.site.notes) | set(survey.warnings) <= set(warnings)
    assert len(warnings) == len(set(warnings))


def test_csv_columns_carry_their_units_and_hold_the_numbers(tmp_path, survey):
    write_tables(tmp_path, survey)
    head, *body = rows(tmp_path / "curve.csv")
    assert ",".join(head) == "frequency_hz,velocity_m_s,sigma_m_s,wave,kind,mode"
    assert np.allclose([float(row[1]) for row in body], survey.curve.velocity, rtol=1e-5)
    assert {tuple(row[3:]) for row in body} == {("rayleigh", "phase", "0")}
    head, *body = rows(tmp_path / "profile.csv")
    assert ",".join(head) == "depth_m,median_m_s,low_m_s,high_m_s"
    columns = [getattr(survey.site.profile, name) for name in ("depth", "median", "low", "high")]
    assert np.allclose(np.array(body, dtype=float), np.transpose(columns), rtol=1e-5)


def test_where_nothing_could_be_picked_the_tables_are_empty_and_say_why(tmp_path, unpicked):
    write_tables(tmp_path, unpicked)
    made = strict(tmp_path / "summary.json")
    assert made["curve"] == made["profile"] == []
    assert made["vs30"] is made["site_class"] is made["resolved_depth"] is None
    for word in ("Nothing could be picked", "Vs30", "site class", "resolved depth"):
        assert any(word in warning for warning in made["warnings"])
    assert len(rows(tmp_path / "curve.csv")) == len(rows(tmp_path / "profile.csv")) == 1


def test_what_json_has_no_word_for_is_null_with_a_sentence(tmp_path, survey):
    nan = Profile(depth=[0.0, 2.0], median=[150.0, np.nan], low=[140.0, np.nan], high=[160.0, np.inf])
    site = dataclasses.replace(survey.site, profile=nan, resolved_depth=float("nan"))
    write_tables(tmp_path, dataclasses.replace(survey, site=site))
    made = strict(tmp_path / "summary.json")
    assert made["profile"][1] == {"depth": 2.0, "median": None, "low": None, "high": None}
    assert made["resolved_depth"] is None
    assert any("3 of the values under `profile`" in warning for warning in made["warnings"])
    assert any("resolved depth cannot be stated" in warning for warning in made["warnings"])


def test_a_ridge_without_a_mode_is_null_and_empty(tmp_path, survey):
    curve = DispersionCurve(frequency=[10.0], velocity=[200.0], sigma=[4.0], mode=None)
    write_tables(tmp_path, dataclasses.replace(survey, curve=curve))
    made = strict(tmp_path / "summary.json")
    assert made["curve"][0]["mode"] is None
    assert any("not assigned to a mode" in warning for warning in made["warnings"])
    assert rows(tmp_path / "curve.csv")[1] == ["10", "200", "4", "rayleigh", "phase", ""]


@pytest.mark.parametrize("name", ['"quoted", #1 $x$.dat', "café \udce9.dat", "<b>&amp;\n\0", "日本.dat"])
def test_file_names_come_through_json_as_they_are(tmp_path, survey, name):
    write_tables(tmp_path, dataclasses.replace(survey, records=(Record(file=name, reason="text"),)))
    assert strict(tmp_path / "summary.json")["records"][0]["file"] == name

"""The small verbs say what they found."""

import sys

import numpy as np
import pytest

from surfdisp.cli import main
from surfdisp.records import write_seg2

PNG = b"\x89PNG\r\n\x1a\n"


@pytest.fixture
def record(tmp_path):
    """A record of one wave at 200 m/s over 24 receivers, with a little noise."""
    receivers = np.arange(0.0, 48.0, 2.0)
    times = np.arange(1000) * 0.001
    phase = (times[None, :] - (receivers[:, None] + 8.0) / 200.0) / 0.008
    pulse = (1.0 - phase**2) * np.exp(-0.5 * phase**2)
    noise = np.random.default_rng(5).normal(scale=0.02, size=pulse.shape)
    path = tmp_path / "shot.sg2"
    write_seg2(path, pulse + noise, 0.001, receivers=receivers, source=-8.0)
    return path


def run(monkeypatch, *words):
    monkeypatch.setattr(sys, "argv", ["surfdisp", *map(str, words)])
    with pytest.raises(SystemExit) as end:
        main()
    assert end.value.code in (0, None)


def test_records_prints_a_row_per_file_with_its_geometry(record, monkeypatch, capsys):
    run(monkeypatch, "records", record)
    heading, row = capsys.readouterr().out.splitlines()[:2]
    found = dict(
        zip(
            heading.replace(" ms", "").replace(" m", "").replace(" s ", " ").split(), row.split(), strict=True
        )
    )
    assert found["file"] == "shot.sg2"
    assert float(found["source"]) == -8.0
    assert float(found["spacing"]) == 2.0
    assert found["traces"] == "24"
    assert found["used"] == "yes"


def test_look_draws_a_picture_and_names_the_band_picked(record, tmp_path, monkeypatch, capsys):
    picture = tmp_path / "look.png"
    run(monkeypatch, "look", record, "--out", picture)
    assert picture.read_bytes().startswith(PNG)
    printed = capsys.readouterr().out
    assert "shot.sg2: picked" in printed
    assert "shot.sg2: array 46 m long, its centre 31 m from the source" in printed
    assert str(picture) in printed

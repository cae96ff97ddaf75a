"""Inputs that crews and users really get wrong, made in a folder; shared by the tests and the bars."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from surfdisp.records import write_seg2


def make_wrong_inputs(folder: Path) -> dict[str, list[str]]:
    """Write the wrong inputs and return the words to give to `surfdisp run`, by name of the case."""
    good = folder / "good.dat"
    write_seg2(
        good,
        np.random.default_rng(1).normal(size=(12, 500)),
        0.001,
        receivers=np.arange(12.0),
        source=-3.0,
    )
    whole = good.read_bytes()
    files = {
        "text.dat": b"this is a field note, not a record\n" * 40,
        "truncated.dat": whole[: len(whole) // 2],
        "empty.dat": b"",
        "unknown.toml": b'[records]\nfiles = ["good.dat"]\n[waves]\nspeed = 3\n',
        "broken.toml": b"[records\nfiles = [",
        "negative.toml": b'[records]\nfiles = ["good.dat"]\n[records.receivers]\nspacing_m = -1\n',
    }
    for name, content in files.items():
        (folder / name).write_bytes(content)
    (folder / "records_folder").mkdir(exist_ok=True)
    return {
        "missing": [str(folder / "absent.dat")],
        "text": [str(folder / "text.dat")],
        "truncated": [str(folder / "truncated.dat")],
        "empty": [str(folder / "empty.dat")],
        "unknown_section": [str(folder / "unknown.toml")],
        "broken_toml": [str(folder / "broken.toml")],
        "negative_spacing": [str(folder / "negative.toml")],
        "no_geometry": [str(no_geometry(folder))],
        "folder": [str(folder / "records_folder")],
    }


def no_geometry(folder: Path) -> Path:
    """Write a miniSEED file, a format that has no place for positions."""
    import obspy

    traces = [
        obspy.Trace(
            np.random.default_rng(i).normal(size=500).astype(np.float32),
            {"delta": 0.001, "station": f"R{i:02d}"},
        )
        for i in range(12)
    ]
    path = folder / "no_geometry.mseed"
    obspy.Stream(traces).write(str(path), format="MSEED")
    return path

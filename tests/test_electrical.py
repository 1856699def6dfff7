"""The electrical read-back: the written assembly alone gives the antenna back, and a wrong one is found."""

import json
from dataclasses import replace
from pathlib import Path

import pytest
import samples

from boomwright.audit import audit_folder
from boomwright.design.model import Design, Spec
from boomwright.design.tomlfile import write_design
from boomwright.electrical import Electrical, read_back, recovered_wires
from boomwright.errors import MeasureError
from boomwright.formats.step import STEP
from boomwright.parts.antenna import AntennaPart
from boomwright.pipeline import make
from boomwright.plan.plan import make_plan
from boomwright.rf.wires import wires_of
from boomwright.shop.profile import Shop

TIGHT_BENDS = replace(samples.GAUGE, name="bends", driven=replace(samples.GAUGE.driven, bend_radius_mm=3.0))


def measure_of(design: Design, folder: Path):
    path = folder / "antenna.step"
    STEP.write(AntennaPart().build(make_plan(design, Shop()))[0], path)
    reading = STEP.read(path)
    return lambda probe: STEP.measure(reading, probe, [])


def changed(design: Design, tag: str, **sizes: float) -> Design:
    rods = tuple(replace(rod, **sizes) if rod.tag == tag else rod for rod in design.rods)
    return replace(design, rods=rods)


@pytest.mark.slow
@pytest.mark.parametrize("design", [*samples.FITTING, TIGHT_BENDS], ids=lambda design: design.name)
def test_every_form_of_antenna_is_given_back_by_its_file(design: Design, tmp_path: Path) -> None:
    assert recovered_wires(design, measure_of(design, tmp_path)) == wires_of(design)


def test_the_file_of_the_design_agrees(tmp_path: Path) -> None:
    found = read_back(samples.GAUGE, measure_of(samples.GAUGE, tmp_path))
    assert found.ok
    assert [each.what for each in found.comparisons] == [
        f"{figure} at {mark} MHz of the conductors read back"
        for figure in ("gain", "VSWR")
        for mark in (863, 866.5, 870)
    ]
    document = found.as_json()
    assert set(document) == {"gain_dbi", "vswr_max", "ok"}
    assert document["gain_dbi"]["design"] == document["gain_dbi"]["from_file"] > 5.0
    assert document["vswr_max"]["design"] == document["vswr_max"]["from_file"] > 1.0


SEEDED = {
    "short director": changed(samples.GAUGE, "D1", length_mm=146.5),
    "moved reflector": changed(samples.GAUGE, "R", at_mm=-2.0),
    "thin director": changed(samples.GAUGE, "D2", diameter_mm=2.0),
    "narrow fold": replace(samples.GAUGE, driven=replace(samples.GAUGE.driven, spacing_mm=10.0)),
    "upright fold": replace(samples.GAUGE, driven=replace(samples.GAUGE.driven, plane="upright")),
    "wide gap": replace(samples.GAUGE, driven=replace(samples.GAUGE.driven, gap_mm=12.0)),
}


@pytest.mark.parametrize("case", SEEDED)
def test_an_antenna_that_is_not_the_design_is_found(case: str, tmp_path: Path) -> None:
    found = read_back(samples.GAUGE, measure_of(SEEDED[case], tmp_path))
    assert not found.ok
    assert any(abs(each.from_file - each.design) > each.allowed for each in found.comparisons)


def test_a_missing_rod_is_a_reason_not_a_crash(tmp_path: Path) -> None:
    fewer = replace(samples.GAUGE, rods=samples.GAUGE.rods[:2])
    found = read_back(samples.GAUGE, measure_of(fewer, tmp_path))
    assert not found.ok
    assert "D2" in found.reason
    assert found.as_json()["gain_dbi"] == {"design": None, "from_file": None}


def test_a_rod_that_stands_aside_is_a_reason(tmp_path: Path) -> None:
    measure = measure_of(samples.GAUGE, tmp_path)

    def aside(probe):
        return 3.0 if probe.arguments["quantity"] == "offset_y_mm" else measure(probe)

    with pytest.raises(MeasureError, match=r"^R: offset from the middle plane is 3 mm; "):
        recovered_wires(samples.GAUGE, aside)


def test_a_file_that_cannot_be_measured_is_a_reason() -> None:
    def broken(probe):
        raise MeasureError("antenna.step is missing")

    assert read_back(samples.GAUGE, broken) == Electrical(
        (),
        {"gain_dbi": {"design": None, "from_file": None}, "vswr_max": {"design": None, "from_file": None}},
        "antenna.step is missing",
    )


@pytest.mark.slow
def test_make_solves_judges_and_writes_the_read_back(tmp_path: Path) -> None:
    design = replace(samples.GAUGE, spec=Spec(gain_dbi_min=15.0, vswr_max=9.0))
    (tmp_path / "gauge.toml").write_text(write_design(design))
    made = make(tmp_path / "gauge.toml", out=tmp_path / "out", only=["prediction"])
    assert made.audit.ok
    assert [each.key for each in made.prediction.shortfalls] == ["gain_dbi_min"]
    document = json.loads((tmp_path / "out/audit.json").read_text())
    assert document["electrical"]["ok"] is True
    files = {path.name for path in (tmp_path / "out/rf").iterdir()}
    assert files >= {"sweep.csv", "pattern.csv", "predicted.s1p", "vswr.svg", "e-plane.svg", "currents.svg"}
    other = changed(samples.GAUGE, "D1", length_mm=146.0)
    STEP.write(AntennaPart().build(make_plan(other, Shop()))[0], tmp_path / "out/antenna.step")
    audit = audit_folder(tmp_path / "out")
    assert audit.electrical is not None
    assert not audit.electrical.ok
    failed = [f for f in audit.failures if f.what.endswith("of the conductors read back")]
    assert failed
    assert {f.file for f in failed} == {"antenna.step"}


@pytest.mark.slow
@pytest.mark.parametrize(
    ("file", "old", "new"),
    [
        ("rf/sweep.csv", ",9.", ",8."),
        ("rf/predicted.s1p", " 0.", " 0.1"),
        ("rf/gain.svg", 'data-axis="y"', 'data-axis="z"'),
    ],
)
def test_a_prediction_that_was_changed_is_found(file: str, old: str, new: str, tmp_path: Path) -> None:
    (tmp_path / "gauge.toml").write_text(write_design(samples.GAUGE))
    make(tmp_path / "gauge.toml", out=tmp_path / "out", only=["prediction"])
    path = tmp_path / "out" / file
    text = path.read_text("utf-8")
    assert old in text
    path.write_text(text.replace(old, new), "utf-8")
    what = {finding.what for finding in audit_folder(tmp_path / "out").failures if finding.file == file}
    assert any("MHz" in each for each in what)

"""Touchstone: what we write a general library reads; what others write we read; what is none is a finding."""

import cmath
import math

import pytest
import skrf

from boomwright.errors import MeasureError
from boomwright.formats.touchstone import TOUCHSTONE
from boomwright.pieces import NetworkPiece, Probe

PIECE = NetworkPiece(
    "predicted",
    "rf",
    (863e6, 866_333_333.333, 870e6),
    (0.25 - 0.4j, 0.0 + 0.0j, -0.1 + 0.05j),
    75.0,
)


def test_a_general_library_reads_what_we_write(tmp_path):
    path = tmp_path / "predicted.s1p"
    TOUCHSTONE.write(PIECE, path)
    network = skrf.Network(str(path))
    assert network.f == pytest.approx(PIECE.frequency_hz, rel=1e-11)
    assert network.s[:, 0, 0] == pytest.approx(PIECE.reflection, abs=1e-9)
    assert network.z0[:, 0].real == pytest.approx([75.0] * 3)


def test_we_read_what_we_write(tmp_path):
    path = tmp_path / "predicted.s1p"
    TOUCHSTONE.write(PIECE, path)
    reading = TOUCHSTONE.read(path)
    assert reading.frequency_hz == pytest.approx(PIECE.frequency_hz, rel=1e-11)
    assert reading.reflection == pytest.approx(PIECE.reflection, abs=1e-9)
    assert reading.system_ohm == 75.0


@pytest.mark.parametrize("unit", ["hz", "khz", "mhz", "ghz"])
@pytest.mark.parametrize("form", ["ri", "ma", "db"])
def test_we_read_what_a_general_library_writes(form, unit, tmp_path):
    frequency = skrf.Frequency.from_f([863.0, 866.5, 870.0], unit="MHz")
    values = [0.25 - 0.4j, 0.3 + 0.1j, cmath.rect(0.7, math.radians(-170.0))]
    network = skrf.Network(frequency=frequency, s=values, z0=50.0)
    network.frequency.unit = unit
    network.write_touchstone("measured", dir=str(tmp_path), form=form)
    reading = TOUCHSTONE.read(tmp_path / "measured.s1p")
    assert reading.frequency_hz == pytest.approx([863e6, 866.5e6, 870e6])
    assert reading.reflection == pytest.approx(values, abs=1e-9)
    assert reading.system_ohm == 50.0


def measured(text, probe, tmp_path):
    path = tmp_path / "one.s1p"
    path.write_text(text)
    return TOUCHSTONE.measure(TOUCHSTONE.read(path), probe, [])


def test_the_figures_of_a_known_load(tmp_path):
    text = "# MHz S RI R 50\n! 100 ohm\n100 0.333333333333 0 ! here\n\n200 0 1\n"
    for name, value in {
        "resistance_ohm": 100.0,
        "reactance_ohm": 0.0,
        "vswr": 2.0,
        "return_loss_db": 20 * math.log10(3),
    }.items():
        assert measured(text, Probe(name, {"at_mhz": 100.0}), tmp_path) == pytest.approx(value, abs=1e-8), name
    assert measured(text, Probe("point_count"), tmp_path) == 2.0
    assert measured(text, Probe("vswr", {"at_mhz": 200.0}), tmp_path) == math.inf
    with pytest.raises(MeasureError, match=r"^one\.s1p: no point at 150 MHz$"):
        measured(text, Probe("vswr", {"at_mhz": 150.0}), tmp_path)


def test_without_an_option_line_the_format_s_own_defaults_hold(tmp_path):
    # Touchstone 1.1: GHz, S, MA, R 50.
    text = "0.1 0.5 180\n"
    assert measured(text, Probe("resistance_ohm", {"at_mhz": 100.0}), tmp_path) == pytest.approx(50.0 / 3.0)


WRONG = {
    "empty": ("", "one.s1p: holds no point"),
    "only options": ("# Hz S RI R 50\n", "one.s1p: holds no point"),
    "two ports": ("# Hz S RI R 50\n1e9 0 0 1 0 1 0 0 0\n", "one.s1p line 2: 9 numbers where a one-port has 3"),
    "words": ("hello, this is no such file\n", "one.s1p line 1: 'hello, this is no such file' is not a row of numbers"),
    "nan": ("# Hz S RI R 50\n1e9 nan 0\n", "one.s1p line 2: '1e9 nan 0' is not a row of finite numbers"),
    "backwards": ("# Hz S RI R 50\n2e9 0 0\n1e9 0 0\n", "one.s1p line 3: frequencies must ascend"),
    "impedances": ("# Hz Z RI R 50\n1e9 0 0\n", "one.s1p line 1: holds Z parameters; only S is read"),
    "no reference": ("# Hz S RI R 0\n1e9 0 0\n", "one.s1p line 1: 0 is no reference impedance"),
    "odd option": ("# Hz S RI Q 50\n1e9 0 0\n", "one.s1p line 1: unknown option 'Q'"),
    "version 2": (
        "[Version] 2.0\n# Hz S RI R 50\n",
        "one.s1p line 1: only version 1 files are read, without [Version]",
    ),
}


@pytest.mark.parametrize("case", WRONG)
def test_what_is_no_one_port_names_the_line(case, tmp_path):
    text, message = WRONG[case]
    path = tmp_path / "one.s1p"
    path.write_text(text)
    with pytest.raises(MeasureError) as caught:
        TOUCHSTONE.read(path)
    assert str(caught.value) == message


def test_bytes_that_are_no_text(tmp_path):
    path = tmp_path / "one.s1p"
    path.write_bytes(bytes(range(256)))
    with pytest.raises(MeasureError, match=r"^one\.s1p: not a Touchstone file \(not text\)$"):
        TOUCHSTONE.read(path)

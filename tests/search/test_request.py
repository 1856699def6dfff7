"""Everything that is wrong with a request comes in one go, named by its option."""

import pytest

from boomwright.errors import InputFault
from boomwright.search.propose import propose
from boomwright.search.request import Request, band_of, check_request


def faults(request):
    with pytest.raises(InputFault) as caught:
        check_request(request)
    return [fault.path for fault in caught.value.faults]


def test_all_faults_at_once():
    request = Request(863.0, 870.0, -3.0, 70, 40.0, boom_width_mm=500.0, vswr_max=0.9, seed=-1, name="No Name")
    assert faults(request) == [
        "--boom-mm", "--rod-mm", "--boom-width-mm", "--rods", "--vswr-max", "--seed", "--name",
    ]  # fmt: skip


@pytest.mark.parametrize(
    "low, high", [(870.0, 863.0), (863.0, 863.0), (1.0, 2.0), (863.0, 25_000.0), (float("nan"), 870.0), (400.0, 800.0)]
)
def test_bands_that_are_none(low, high):
    assert faults(Request(low, high, 300.0)) == ["--band"]


def test_a_boom_or_rods_must_be_given():
    with pytest.raises(InputFault) as caught:
        check_request(Request(863.0, 870.0))
    assert str(caught.value) == (
        "--boom-mm: missing, and --rods too\n  fix: give the boom's length or the number of rods"
    )


@pytest.mark.parametrize("text", ["863", "863:870:880", ""])
def test_band_without_a_colon(text):
    with pytest.raises(InputFault, match="is not LOW:HIGH"):
        band_of(text)


def test_band_text():
    assert band_of("863:870.5") == (863.0, 870.5)


def test_too_many_rods_for_a_boom():
    with pytest.raises(InputFault) as caught:
        propose(Request(863.0, 870.0, boom_mm=200.0, rods=30, driven="straight"))
    assert [fault.path for fault in caught.value.faults] == ["--boom-mm"]
    assert "too short for 30 rods" in str(caught.value)


def test_a_boom_too_thin_for_its_grooves():
    with pytest.raises(InputFault) as caught:
        propose(Request(863.0, 870.0, boom_mm=200.0, rod_mm=4.0, boom_width_mm=6.0, driven="straight"))
    assert [fault.path for fault in caught.value.faults] == ["--boom-width-mm"]

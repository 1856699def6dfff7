"""The prediction's files show what the solver, asked again one frequency at a time, says."""

from dataclasses import replace
from types import SimpleNamespace

import pytest
import samples

from boomwright.design.model import Band, Design, Driven, Feed
from boomwright.errors import MeasureError
from boomwright.formats.catalogue import FORMATS
from boomwright.output import write_piece
from boomwright.parts.prediction import PredictionPart, prediction_pieces
from boomwright.prediction import predict

DIPOLE = Design("dipole-300", Band(298.0, 302.0, 300.0), Driven("straight", 0.0, 2.0, "ideal", 4.0, length_mm=474.0))
DESIGNS = [
    samples.GAUGE,
    samples.LOOP_868,
    DIPOLE,
    replace(DIPOLE, name="matched", feed=Feed(72.0)),
    replace(DIPOLE, name="short", driven=replace(DIPOLE.driven, length_mm=60.0)),
    replace(samples.GAUGE, name="narrow", band=Band(866.49, 866.51, 866.5)),
    replace(samples.GAUGE, name="wide", band=Band(500.0, 1200.0, 866.5)),
]


def judged(design, folder):
    """What the files of a prediction do not show: {(file, what): (expected, measured)}."""
    part = PredictionPart()
    entries = [entry for piece in prediction_pieces(predict(design)) for entry in write_piece(part.name, piece, folder)]
    suffixes = {form.suffix: form for form in FORMATS}
    wrong = {}
    expected = [*part.expect(SimpleNamespace(design=design))]
    expected += [one for entry in entries for one in FORMATS[entry.format].expect(entry, None)]
    for one in expected:
        form = suffixes[f".{one.file.rpartition('.')[2]}"]
        try:
            measured = form.measure(form.read(folder / one.file), one.probe, [])
        except MeasureError as error:
            measured = str(error)
        low = one.rule == "at_most" or (isinstance(measured, float) and measured >= one.expected - one.allowed)
        high = one.rule == "at_least" or (isinstance(measured, float) and measured <= one.expected + one.allowed)
        if not (low and high):
            wrong[one.file, one.what] = (one.expected, measured, one.allowed)
    return wrong


@pytest.mark.parametrize("design", DESIGNS, ids=lambda design: design.name)
def test_every_file_shows_what_is_solved_anew(design, tmp_path):
    assert judged(design, tmp_path) == {}


@pytest.mark.slow
@pytest.mark.parametrize("design", samples.FITTING, ids=lambda design: design.name)
def test_every_file_of_every_sample_shows_what_is_solved_anew(design, tmp_path):
    assert judged(design, tmp_path) == {}


def test_tolerances_are_small_beside_what_matters():
    allowed = {}
    for one in PredictionPart().expect(SimpleNamespace(design=samples.GAUGE)):
        allowed.setdefault(one.unit, []).append(one.allowed)
    assert max(allowed["dBi"]) <= 0.03
    assert max(allowed["ohm"]) <= 0.05
    assert max(allowed["dB"]) <= 0.1


def test_a_prediction_s_rows_are_whole(tmp_path):
    pieces = {piece.stem: piece for piece in prediction_pieces(predict(DIPOLE))}
    assert len(pieces["pattern"].rows) == 3 * 360
    for name in ("sweep", "pattern"):
        assert {len(row) for row in pieces[name].rows} == {len(pieces[name].columns)}
    column = pieces["sweep"].columns.index("beamwidth_h_deg")
    assert {row[column] for row in pieces["sweep"].rows} == {""}
    assert not any("nan" in cell or cell == "-0.000" for row in pieces["sweep"].rows for cell in row)

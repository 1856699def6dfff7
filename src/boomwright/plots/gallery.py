"""All charts of a prediction, in the order they are looked at."""

from __future__ import annotations

from collections.abc import Sequence

from boomwright.pieces import PicturePiece
from boomwright.plots.currents import draw_currents
from boomwright.plots.pattern import Cut, draw_pattern
from boomwright.plots.sweep import Quantity, draw_sweep
from boomwright.prediction import Prediction
from boomwright.units import mm_from_m


def pictures(prediction: Prediction) -> tuple[PicturePiece, ...]:
    """VSWR, return loss, gain and front-to-back over frequency; both pattern cuts and the currents at the centre."""
    return (*_sweeps(prediction), *_cuts(prediction), _currents(prediction))


def subtitle_of(prediction: Prediction) -> str:
    """Whose figures these are: the design's title, or its name."""
    return prediction.design.title or prediction.design.name


def _sweeps(prediction: Prediction) -> tuple[PicturePiece, ...]:
    design, found, spec = prediction.design, prediction.sweep, prediction.design.spec
    ohm = f"{design.feed.system_ohm:g} Ω"
    vswr_most, gain_least, back_least = (
        (spec.vswr_max, spec.gain_dbi_min, spec.front_to_back_db_min) if spec else (None, None, None)
    )
    charts: Sequence[tuple[Quantity, Sequence[float]]] = (
        (Quantity("vswr", f"VSWR in {ohm}", "VSWR", "", "most", vswr_most, 1.0, 2.0), found.vswr.tolist()),
        (
            Quantity("return-loss", f"Return loss in {ohm}", "return loss [dB]", "dB", "least", None, 0.0, 10.0),
            found.return_loss_db.tolist(),
        ),
        (Quantity("gain", "Gain forward", "gain [dBi]", "dBi", "least", gain_least), found.gain_dbi.tolist()),
        (
            Quantity("front-to-back", "Front-to-back", "front-to-back [dB]", "dB", "least", back_least, None, 15.0),
            found.front_to_back_db.tolist(),
        ),
    )
    return tuple(
        PicturePiece(
            quantity.name,
            "rf",
            draw_sweep(quantity, prediction.frequency_mhz, values, design.band, subtitle_of(prediction)),
        )
        for quantity, values in charts
    )


def _cuts(prediction: Prediction) -> tuple[PicturePiece, ...]:
    solution = prediction.sweep.solutions[prediction.middle]
    where = f"{prediction.frequency_mhz[prediction.middle]:g} MHz"
    cuts = (
        ("e-plane", "E-plane", "along the rods, y", solution.e_plane.tolist(), solution.beamwidth_e_deg),
        ("h-plane", "H-plane", "up, z", solution.h_plane.tolist(), solution.beamwidth_h_deg),
    )
    pieces = []
    for name, plane, side, gain_dbi, beam_deg in cuts:
        figures = (
            ("gain forward", f"{solution.gain_dbi:.2f} dBi"),
            ("largest gain", f"{max(gain_dbi):.2f} dBi"),
            ("half-power beamwidth", "none" if beam_deg is None else f"{beam_deg:.1f}°"),
            ("front-to-back", f"{solution.front_to_back_db:.1f} dB"),
        )
        title = f"{plane} pattern at {where}, gain [dBi]"
        cut = Cut(name, title, side, gain_dbi, figures)
        pieces.append(PicturePiece(name, "rf", draw_pattern(cut, subtitle_of(prediction))))
    return tuple(pieces)


def _currents(prediction: Prediction) -> PicturePiece:
    solution = prediction.sweep.solutions[prediction.middle]
    places = {conductor.tag: mm_from_m(conductor.at_m) for conductor in solution.wires.conductors}
    rows = [(tag, places[tag], ratio) for tag, ratio in solution.current_ratios]
    title = f"Currents at {prediction.frequency_mhz[prediction.middle]:g} MHz"
    return PicturePiece("currents", "rf", draw_currents(title, rows, subtitle_of(prediction)))

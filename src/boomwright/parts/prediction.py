"""The prediction: what the antenna will do, as tables, a Touchstone file and charts."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import TYPE_CHECKING

from boomwright.pieces import Expectation, NetworkPiece, Part, Piece, Probe, TablePiece
from boomwright.plots.gallery import pictures
from boomwright.prediction import Prediction, band_points_mhz, predict, solve_apart, sweep_frequencies_mhz
from boomwright.rf.feed import reflection, return_loss_db, vswr
from boomwright.rf.solve import Solution
from boomwright.rf.wires import wires_of
from boomwright.units import hz_from_mhz, mm_from_m

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SWEEP_COLUMNS = (
    "frequency_mhz",
    "resistance_ohm",
    "reactance_ohm",
    "vswr",
    "return_loss_db",
    "gain_dbi",
    "directivity_dbi",
    "efficiency",
    "front_to_back_db",
    "front_to_rear_db",
    "beamwidth_e_deg",
    "beamwidth_h_deg",
)
PATTERN_COLUMNS = ("frequency_mhz", "angle_deg", "e_plane_dbi", "h_plane_dbi")
SWEEP, PATTERN, NETWORK = "rf/sweep.csv", "rf/pattern.csv", "rf/predicted.s1p"
CUT_DEGREES = 360

Figure = tuple[float, float, str]
"""A value, how far a file may be from it, and the unit of both."""

DB_ALLOWED = 0.002
"""Rounding of a table's figures and the sweep's interpolation over frequency, together."""
SHARE_ALLOWED = 2e-4
CHART_DB_ALLOWED = 0.02
"""A hundredth of a unit of the sheet, on an axis of 40 dB."""
CHART_SHARE_ALLOWED = 2e-3
CURRENT_ALLOWED = 5e-3


class PredictionPart(Part):
    """What the antenna will do."""

    name = "prediction"
    purpose = "what the antenna will do: figures over the band, patterns, charts and a Touchstone file"
    processes = ("rf",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """Tables, network and charts of the sweep over the band."""
        return prediction_pieces(predict(plan.design))

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """The band's edges and centre, solved anew one by one, as every file must show them."""
        design = plan.design
        frequencies = sweep_frequencies_mhz(design)
        marks = band_points_mhz(design)
        solutions = solve_apart(wires_of(design), marks, frequencies[-1])
        found = [Expectation(SWEEP, "number of rows", len(frequencies), 0.0, "rows", Probe("row_count"))]
        pattern_rows = CUT_DEGREES * len(marks)
        found.append(Expectation(PATTERN, "number of rows", pattern_rows, 0.0, "rows", Probe("row_count")))
        count = Probe("point_count")
        found.append(Expectation(NETWORK, "number of points", len(frequencies), 0.0, "points", count))
        for number, (mark, solution) in enumerate(zip(marks, solutions, strict=True)):
            figures = Figures(mark, solution, design.feed.system_ohm)
            found += figures.in_sweep(frequencies.index(mark))
            found += figures.in_network()
            found += figures.in_pattern(number * CUT_DEGREES)
            found += figures.in_charts()
            if mark == design.band.centre_mhz:
                found += [*figures.in_cuts(), *figures.in_currents()]
        return tuple(found)


class Figures:
    """The figures of one solution, as the files must show them."""

    def __init__(self, at_mhz: float, solution: Solution, system_ohm: float) -> None:
        self.at_mhz, self.solution = at_mhz, solution
        impedance = solution.impedance_ohm
        share = SHARE_ALLOWED * abs(impedance) + 0.001
        ratio = vswr(impedance, system_ohm)
        loss = return_loss_db(impedance, system_ohm)
        # A match so good that the figure is all rounding may be off by what rounding makes of it.
        loose = DB_ALLOWED + 10.0 ** (loss / 20.0) * 20.0 * math.log10(math.e) * share / system_ohm
        self.figures: dict[str, Figure] = {
            "resistance_ohm": (impedance.real, share, "ohm"),
            "reactance_ohm": (impedance.imag, share, "ohm"),
            "vswr": (ratio, SHARE_ALLOWED * ratio**2 + 0.0001, ""),
            "return_loss_db": (loss, loose, "dB"),
            "gain_dbi": (solution.gain_dbi, DB_ALLOWED, "dBi"),
            "front_to_back_db": (solution.front_to_back_db, _back_allowed(solution), "dB"),
        }

    def in_sweep(self, row: int) -> Iterator[Expectation]:
        """In the row of the sweep's table."""
        for column, figure in self.figures.items():
            yield self._one(SWEEP, column, figure, Probe("cell", {"row": row, "column": column}))
        probe = Probe("cell", {"row": row, "column": "frequency_mhz"})
        yield Expectation(SWEEP, f"frequency in row {row}", self.at_mhz, 1e-6, "MHz", probe)

    def in_network(self) -> Iterator[Expectation]:
        """In the Touchstone file."""
        for quantity in ("resistance_ohm", "reactance_ohm", "vswr", "return_loss_db"):
            yield self._one(NETWORK, quantity, self.figures[quantity], Probe(quantity, {"at_mhz": self.at_mhz}))

    def in_pattern(self, first_row: int) -> Iterator[Expectation]:
        """In the pattern's table: the gain forward in both cuts."""
        for column in ("e_plane_dbi", "h_plane_dbi"):
            probe = Probe("cell", {"row": first_row, "column": column})
            yield self._one(PATTERN, f"forward {column}", self.figures["gain_dbi"], probe)

    def in_charts(self) -> Iterator[Expectation]:
        """On the charts over frequency."""
        for quantity in ("vswr", "gain_dbi", "front_to_back_db"):
            curve = quantity.removesuffix("_dbi").removesuffix("_db").replace("_", "-")
            probe = Probe("value", {"curve": curve, "at": self.at_mhz})
            yield self._one(f"rf/{curve}.svg", quantity, _drawn(self.figures[quantity]), probe)

    def in_cuts(self) -> Iterator[Expectation]:
        """On the charts of the two cuts: the gain forward."""
        for curve in ("e-plane", "h-plane"):
            probe = Probe("level", {"curve": curve, "at_deg": 0.0})
            yield self._one(f"rf/{curve}.svg", "gain_dbi", _drawn(self.figures["gain_dbi"]), probe)

    def in_currents(self) -> Iterator[Expectation]:
        """On the chart of the currents: every conductor's, at its place along the boom."""
        places = {conductor.tag: mm_from_m(conductor.at_m) for conductor in self.solution.wires.conductors}
        for tag, ratio in self.solution.current_ratios:
            probe = Probe("value", {"curve": "currents", "at": places[tag]})
            size = abs(ratio)
            yield self._one("rf/currents.svg", f"current of {tag}", (size, CURRENT_ALLOWED * max(size, 1.0), ""), probe)

    def _one(self, file: str, what: str, figure: Figure, probe: Probe) -> Expectation:
        words = what.removesuffix("_ohm").removesuffix("_dbi").removesuffix("_db").replace("_", " ")
        return Expectation(file, f"{words} at {self.at_mhz:g} MHz", *figure, probe)


def _drawn(figure: Figure) -> Figure:
    """The same figure, read off a chart."""
    value, allowed, unit = figure
    return value, allowed + (CHART_DB_ALLOWED if unit else CHART_SHARE_ALLOWED * value), unit


def _back_allowed(solution: Solution) -> float:
    """A deep null behind is the difference of large fields: the deeper, the less it can be told."""
    return DB_ALLOWED * max(1.0, math.pow(10.0, (solution.front_to_back_db - 30.0) / 20.0))


def prediction_pieces(prediction: Prediction) -> tuple[Piece, ...]:
    """Everything that is written of a prediction."""
    return (_sweep_table(prediction), _pattern_table(prediction), _network(prediction), *pictures(prediction))


def _sweep_table(prediction: Prediction) -> TablePiece:
    found = prediction.sweep
    impedance = found.impedance_ohm
    columns = (
        (_fixed(value, 6) for value in prediction.frequency_mhz),
        (_fixed(value, 3) for value in impedance.real),
        (_fixed(value, 3) for value in impedance.imag),
        (_fixed(value, 4) for value in found.vswr),
        (_fixed(value, 3) for value in found.return_loss_db),
        (_fixed(value, 3) for value in found.gain_dbi),
        (_fixed(value, 3) for value in found.directivity_dbi),
        (_fixed(value, 5) for value in found.efficiency),
        (_fixed(value, 3) for value in found.front_to_back_db),
        (_fixed(value, 3) for value in found.front_to_rear_db),
        (_fixed(value, 2) for value in found.beamwidth_e_deg),
        (_fixed(value, 2) for value in found.beamwidth_h_deg),
    )
    return TablePiece("sweep", "rf", SWEEP_COLUMNS, tuple(zip(*columns, strict=True)))


def _pattern_table(prediction: Prediction) -> TablePiece:
    """Both cuts at the band's edges and centre; of a prediction without them, at all its frequencies."""
    marks = set(band_points_mhz(prediction.design)) & set(prediction.frequency_mhz)
    chosen = marks or set(prediction.frequency_mhz)
    rows = []
    for frequency_mhz, solution in zip(prediction.frequency_mhz, prediction.sweep.solutions, strict=True):
        if frequency_mhz in chosen:
            for degrees, (e_plane, h_plane) in enumerate(zip(solution.e_plane, solution.h_plane, strict=True)):
                rows.append((_fixed(frequency_mhz, 6), str(degrees), _fixed(e_plane, 3), _fixed(h_plane, 3)))
    return TablePiece("pattern", "rf", PATTERN_COLUMNS, tuple(rows))


def _network(prediction: Prediction) -> NetworkPiece:
    frequencies = tuple(hz_from_mhz(value) for value in prediction.frequency_mhz)
    ohm = prediction.sweep.system_ohm
    values = tuple(reflection(complex(value), ohm) for value in prediction.sweep.impedance_ohm)
    return NetworkPiece("predicted", "rf", frequencies, values, ohm)


def _fixed(value: float | None, decimals: int) -> str:
    """A figure with so many decimals; nothing for one that does not exist, no minus before zero."""
    if value is None or not math.isfinite(value):
        return ""
    text = f"{value:.{decimals}f}"
    return text.lstrip("-") if float(text) == 0.0 else text

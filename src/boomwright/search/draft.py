"""From lengths and places of an array to a design, and from a design's kinds of conductors to a family."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from boomwright.design.model import Band, Design, Driven, Feed, Rod, arranged
from boomwright.rf.arrays import Floats
from boomwright.rf.basis import Mode, Options, planner_of
from boomwright.rf.conductors import Conductor, Wires
from boomwright.rf.conductors import Rod as Wire
from boomwright.rf.wires import driven_of, rod_of
from boomwright.search.family import Family
from boomwright.search.limits import Gaps
from boomwright.search.optimise import Bounds
from boomwright.search.reactance import length_of_reactance_m
from boomwright.search.reduced import Kind
from boomwright.search.request import Request
from boomwright.search.stock import Stock
from boomwright.units import hz_from_mhz, m_from_mm, mm_from_m

REFLECTOR_SPAN, DRIVEN_SPAN, DIRECTOR_SPAN = (0.97, 1.22), (0.86, 1.13), (0.70, 1.02)
"""Lengths that are searched, in those of a resonant rod of the same stock."""

LOOP_SPAN_WL = (0.95, 1.3)
TABLE_LENGTHS = (3, 3, 4)
WIDEST_GAP_WL = 0.48
SAMPLES, SAMPLES_PER_WL, MOST_SAMPLES = 30.0, 60.0, 15
"""Frequencies solved beyond three, for each unit of relative bandwidth: a long array's match ripples over the band."""

PLAIN = Mode(0, 0)
"""The family is tabulated with currents even round the conductor; full solutions put back what that leaves out."""


@dataclass(frozen=True)
class Frame:
    """What all arrays of one driven form share: request, stock, least gaps, resonant lengths, expected length [mm]."""

    request: Request
    stock: Stock
    gaps: Gaps
    resonant_m: tuple[float, float, float]
    boom_mm: float

    @property
    def frequencies_hz(self) -> tuple[float, ...]:
        """Where arrays are solved while they are searched: more in a wide band."""
        low, high = hz_from_mhz(self.request.low_mhz), hz_from_mhz(self.request.high_mhz)
        width = (high - low) / (high + low) * 2.0
        count = 3 + round(width * (SAMPLES + SAMPLES_PER_WL * self.boom_mm / self.request.wavelength_mm))
        count = min(count, MOST_SAMPLES)
        return tuple(float(value) for value in np.linspace(low, high, count))


def draft_design(request: Request, stock: Stock, lengths_mm: Floats, places_mm: Floats) -> Design:
    """A design of reflector, driven element and directors, lengths and places (N,) [mm]."""
    rods = [
        Rod("", "reflector" if n == 0 else "director", float(at), float(length), diameter, material)
        for n, (at, length) in enumerate(zip(places_mm, lengths_mm, strict=True))
        for diameter, material in [
            (stock.reflector_mm, stock.reflector_material) if n == 0 else (stock.director_mm, stock.director_material)
        ]
        if n != 1
    ]
    driven = with_length(replace(stock.driven, at_mm=float(places_mm[1])), float(lengths_mm[1]))
    rods = [replace(rod, file_index=n) for n, rod in enumerate(rods)]
    return Design(
        name=request.design_name,
        band=Band(request.low_mhz, request.high_mhz, request.centre_mhz),
        driven=driven,
        feed=Feed(request.ohm),
        rods=arranged(rods),
        boom=stock.boom,
        seat=stock.seat,
    )


def with_length(driven: Driven, length_mm: float) -> Driven:
    """A driven element of another length, of a loop another perimeter [mm]."""
    if driven.form == "loop":
        return replace(driven, perimeter_mm=length_mm)
    return replace(driven, length_mm=length_mm)


def trial_design(request: Request, stock: Stock, gaps_mm: tuple[float, float]) -> Design:
    """A design of common lengths with the driven element at these distances from its neighbours [mm]."""
    wave = request.wavelength_mm
    driven = 1.1 * wave if stock.driven.form == "loop" else 0.45 * wave
    last = sum(gaps_mm) + 0.3 * wave
    lengths = np.array([0.48, 0.0, 0.41, 0.4]) * wave + np.array([0.0, driven, 0.0, 0.0])
    return draft_design(request, stock, lengths, np.array([0.0, gaps_mm[0], sum(gaps_mm), last]))


def frame_of(request: Request, stock: Stock, gaps: Gaps, boom_mm: float) -> Frame:
    """The frame of a stock; resonant lengths come from the solver."""
    centre_hz = hz_from_mhz(request.centre_mhz)
    wave_m = m_from_mm(request.wavelength_mm)
    conductors = _conductors(request, stock)
    resonant = [length_of_reactance_m(wire, 0.0, centre_hz) for wire in conductors if isinstance(wire, Wire)]
    if len(resonant) == 3:
        return Frame(request, stock, gaps, (resonant[0], resonant[1], resonant[2]), boom_mm)
    driven = wave_m if stock.driven.form == "loop" else _folded_length_m(stock, centre_hz)
    return Frame(request, stock, gaps, (resonant[0], driven, resonant[1]), boom_mm)


def _folded_length_m(stock: Stock, centre_hz: float) -> float:
    """About where a folded element is resonant: as a rod of its wire."""
    return length_of_reactance_m(Wire("DE", 0.0, 1.0, m_from_mm(stock.driven.diameter_mm) / 2.0), 0.0, centre_hz)


def _conductors(request: Request, stock: Stock) -> tuple[Conductor, Conductor, Conductor]:
    design = trial_design(request, stock, (0.2 * request.wavelength_mm, 0.3 * request.wavelength_mm))
    reflector, director = (replace(rod_of(rod), at_m=0.0) for rod in design.rods[:2])
    return reflector, replace(driven_of(design.driven), at_m=0.0), director


def family_of(frame: Frame, most_mm: float, relative: Family | None = None) -> Family:
    """The family of a frame.

    most_mm   longest array [mm]
    relative  a family that differs in the driven element only
    """
    reflector, driven, director = _conductors(frame.request, frame.stock)
    wave_m = m_from_mm(frame.request.wavelength_mm)
    spans = [
        tuple(resonant * share for share in span)
        for resonant, span in zip(frame.resonant_m, (REFLECTOR_SPAN, DRIVEN_SPAN, DIRECTOR_SPAN), strict=True)
    ]
    if frame.stock.driven.form == "loop":
        spans[1] = tuple(share * wave_m for share in LOOP_SPAN_WL)
    kinds = []
    for conductor, span, count in zip((reflector, driven, director), spans, TABLE_LENGTHS, strict=True):
        shift_m = m_from_mm(frame.stock.spacing_mm) if conductor is driven else 0.0
        kinds.append(Kind(conductor, span[0], span[1], count, shift_m))
    least_m = m_from_mm(least_distance_mm(frame.gaps, frame.stock))
    placed = (reflector, replace(driven, at_m=0.2 * wave_m), replace(director, at_m=0.2 * wave_m + 0.3 * wave_m))
    planner = replace(planner_of(Wires(placed), frame.frequencies_hz[-1], Options()), mode=PLAIN)
    span_m = (least_m, m_from_mm(most_mm))
    return Family((kinds[0], kinds[1], kinds[2]), planner, span_m, frame.frequencies_hz, relative)


def least_distance_mm(gaps: Gaps, stock: Stock) -> float:
    """Least free distance between neighbours [mm], a flat folded element counted from its second conductor."""
    return min(gaps.behind_mm, gaps.ahead_mm - stock.spacing_mm, gaps.between_mm)


def bounds_of(frame: Frame, family: Family, count: int, boom_mm: float | None) -> Bounds:
    """Bounds of an array of `count` conductors on a boom [mm], None = as long as it likes."""
    kinds = [family.kinds[min(n, 2)] for n in range(count)]
    lengths = np.array([[kind.low_m, kind.high_m] for kind in kinds])
    widest = WIDEST_GAP_WL * frame.request.wavelength_mm
    least = [frame.gaps.behind_mm, frame.gaps.ahead_mm, *([frame.gaps.between_mm] * (count - 3))][: count - 1]
    gaps = np.array([[m_from_mm(value), m_from_mm(max(widest, 1.2 * value))] for value in least])
    return Bounds(lengths, gaps, None if boom_mm is None else m_from_mm(boom_mm))


def rounded_mm(values_m: Floats, step_mm: float) -> Floats:
    """Sizes [m] as whole steps [mm]."""
    digits = max(0, math.ceil(-math.log10(step_mm) - 1e-9) + 1)
    result: Floats = np.round(np.round(np.array([mm_from_m(v) for v in values_m]) / step_mm) * step_mm, digits)
    return result

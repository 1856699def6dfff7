"""What the book is written from: one run's plan, prediction, manifest and audit, and what follows from them."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from boomwright.audit import Audit
from boomwright.data.tables import Cable, cables, materials
from boomwright.design.model import Design
from boomwright.manifest import Manifest
from boomwright.plan.cradle import held_conductors
from boomwright.plan.mounting import Mounting, plan_mounting
from boomwright.plan.plan import Plan
from boomwright.prediction import Prediction
from boomwright.rf.arrays import Complexes
from boomwright.rf.choke import Choke, choose_choke
from boomwright.rf.line import Line
from boomwright.rf.matching import Advice, Task, advise
from boomwright.shop.profile import Shop
from boomwright.units import hz_from_mhz, m_from_mm

VSWR_WISHED = 1.5
"""What a match is made for where the spec names no VSWR (common practice)."""

COAX_CUT_MM = 0.5
"""How true coax is cut and prepared by hand (common practice)."""

LINES_AT_HAND = (
    Line("75 ohm coax of solid polyethylene", 75.0, 0.66),
    Line("two such 75 ohm coaxes side by side", 37.5, 0.66),
)
"""Other lines than the feed's, for matching sections: RG-59, MIL-DTL-17 slash sheet 29; value from memory."""

NOT_ASKED = "not asked for in this run"
CRADLES = ("cradle", "sheet-cradle")


@dataclass(frozen=True)
class Run:
    """One run.

    plan         every size
    prediction   the design solved over its sweep
    manifest     files and parts made, parts left out with why
    audit        what was measured on the files; None = not measured
    volumes_mm3  of the printed pieces, by file stem [mm³]
    areas_mm2    of the parts cut from sheet, by file stem [mm²]; the spacing comb's follows from the plan
    """

    plan: Plan
    prediction: Prediction
    manifest: Manifest
    audit: Audit | None = None
    volumes_mm3: Mapping[str, float] = field(default_factory=dict)
    areas_mm2: Mapping[str, float] = field(default_factory=dict)

    @property
    def design(self) -> Design:
        """The design."""
        return self.plan.design

    @property
    def shop(self) -> Shop:
        """The shop."""
        return self.plan.shop

    def has(self, *parts: str) -> bool:
        """Whether one of these parts was made."""
        return any(part in self.manifest.parts for part in parts)

    def why_not(self, part: str) -> str:
        """Why a part was not made, in words."""
        return self.manifest.left_out.get(part, NOT_ASKED)

    def files(self, part: str) -> tuple[str, ...]:
        """Paths of a part's files."""
        return tuple(entry.path for entry in self.manifest.entries if entry.part == part)

    def pieces(self, part: str) -> tuple[str, ...]:
        """File stems of a part's printed pieces."""
        paths = [path for path in self.files(part) if path.startswith("print/") and path.endswith(".stl")]
        return tuple(path.removeprefix("print/").removesuffix(".stl") for path in paths)

    @cached_property
    def _sizes(self) -> dict[str, float]:
        return {size.key: size.value for size in self.plan.sizes}

    def size(self, key: str) -> float:
        """A size of the plan by its key."""
        return self._sizes[key]

    @property
    def held_tags(self) -> tuple[str, ...]:
        """Tags of the conductors that lie in the cradle, in order along the boom."""
        return tuple(held.tag for held in held_conductors(self.design))

    @property
    def axis_height_mm(self) -> float:
        """Height of the rods' axes above the bench in the cradle that was made, the printed one first [mm]."""
        return self.plan.cradle.axis_height_mm if self.has("cradle") else self.plan.sheet_cradle.axis_height_mm

    @property
    def saddles(self) -> int:
        """Number of saddles that carry the boom in that cradle."""
        if self.has("cradle"):
            return len(self.plan.cradle.saddles)
        return sum(1 for standing in self.plan.sheet_cradle.plates if standing.plate.kind == "saddle")

    @property
    def driven_lies(self) -> bool:
        """Whether the driven element lies in the cradle with the rods; else it is fitted once they have cured."""
        return "DE" in self.held_tags

    @property
    def is_glued(self) -> bool:
        """Whether anything is glued to the boom."""
        return bool(self.plan.seat.bond_lines)

    @property
    def first_glued(self) -> tuple[str, ...]:
        """Tags of the seats that are glued with the rods; an upright driven element follows once they have cured."""
        seat, held = self.plan.seat, self.held_tags
        return tuple(bond.tag for bond in seat.bond_lines if bond.tag in held)

    @property
    def tips(self) -> int:
        """Number of free conductor ends: two a rod, two of a straight driven element."""
        return 2 * len(self.design.rods) + (2 if self.design.driven.form == "straight" else 0)

    @property
    def has_metal_boom(self) -> bool:
        """Whether the boom conducts."""
        name = self.plan.boom.material
        return name not in materials() or materials()[name].permittivity is None

    @property
    def has_resin(self) -> bool:
        """Whether the feed point is cast in resin."""
        return self.has("mould")

    @cached_property
    def mounting(self) -> Mounting:
        """Mass, balance and wind areas."""
        return plan_mounting(self.plan, self.has_resin)

    @property
    def cable(self) -> Cable | None:
        """The coax; None when the design names none."""
        return cables()[self.design.feed.coax] if self.design.feed.coax else None

    @property
    def centre_hz(self) -> float:
        """The band's centre [Hz]."""
        return hz_from_mhz(self.design.band.centre_mhz)

    @property
    def feed_ohm(self) -> complex:
        """Predicted impedance at the gap, at the band's centre [ohm]."""
        return complex(self.prediction.sweep.impedance_ohm[self.prediction.middle])

    @cached_property
    def choke(self) -> Choke | None:
        """The choke or balun; None without a cable."""
        if self.cable is None:
            return None
        return choose_choke(self.feed_ohm, self.design.feed.system_ohm, self.centre_hz, self.cable)

    @property
    def divides(self) -> float:
        """By how much the balun divides the feed impedance."""
        return self.choke.divides if self.choke is not None else 1.0

    @cached_property
    def cable_ohm(self) -> Complexes:
        """Impedance behind the balun over the sweep [ohm], (F,)."""
        return np.asarray(self.prediction.sweep.impedance_ohm / self.divides)

    @cached_property
    def match(self) -> Advice | None:
        """Whether and how to match behind the balun; None without a cable."""
        if self.cable is None:
            return None
        band = self.design.band
        task = Task(
            self.prediction.sweep.frequency_hz,
            self.cable_ohm,
            (hz_from_mhz(band.low_mhz), self.centre_hz, hz_from_mhz(band.high_mhz)),
            Line(self.cable.name, self.cable.impedance_ohm, self.cable.velocity_factor),
            LINES_AT_HAND,
            self.vswr_wished,
            m_from_mm(COAX_CUT_MM),
        )
        return advise(task)

    @property
    def vswr_wished(self) -> float:
        """The spec's VSWR, or what is common."""
        spec = self.design.spec
        return spec.vswr_max if spec is not None and spec.vswr_max is not None else VSWR_WISHED

    @cached_property
    def most_gain_dbi(self) -> float:
        """The largest gain in the band in both principal planes [dBi]."""
        solutions = [self.prediction.sweep.solutions[i] for i in self.prediction.in_band]
        return max(max(float(s.e_plane.max()), float(s.h_plane.max()), s.gain_dbi) for s in solutions)

    @property
    def across_mm(self) -> float:
        """The antenna's largest size: from corner to corner of what carries current [mm]."""
        rods, driven = self.design.rods, self.design.driven
        places = [*(rod.at_mm for rod in rods), driven.at_mm]
        widths = [*(rod.length_mm for rod in rods), driven.length_mm or (driven.perimeter_mm or 0.0) / 2.0]
        return math.hypot(max(places) - min(places), max(widths))

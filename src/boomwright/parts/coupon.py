"""The calibration pieces, one line each: parts that follow from a shop alone, made by `boomwright coupon`."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING

from boomwright.pieces import Expectation, Piece, Process
from boomwright.registry import Catalogue

if TYPE_CHECKING:
    from boomwright.plan.coupon import CouponPlan

_OWN = (
    "boomwright.parts.coupon_sheet:CouponSheet",
    "boomwright.parts.coupon_print:OutlineBlock",
    "boomwright.parts.coupon_print:HoleLadder",
    "boomwright.parts.coupon_print:FitPlug",
    "boomwright.parts.coupon_print:SlideLadder",
    "boomwright.parts.coupon_print:PressLadder",
    "boomwright.parts.coupon_laser:KerfCombPart",
    "boomwright.parts.coupon_laser:SlotLadderPart",
)


class CouponPart:
    """Base of every calibration piece; as `Part`, but its plan follows from the shop alone. None is ever left out."""

    name: str = ""
    purpose: str = ""
    processes: tuple[Process, ...] = ()

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """The pieces, in their files' frames."""
        raise NotImplementedError

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """What the files must show, by arithmetic from the plan."""
        raise NotImplementedError


def _fill(catalogue: Catalogue[CouponPart]) -> None:
    for line in _OWN:
        module, name = line.split(":")
        part = getattr(import_module(module), name)()
        catalogue.enter(part.name, part)


COUPONS: Catalogue[CouponPart] = Catalogue("calibration piece", _fill)

"""The plan: every size the parts need, worked out from design and shop, each with where it came from."""

from __future__ import annotations

from dataclasses import dataclass, field

from boomwright.design.model import Boom, Design, Seat
from boomwright.design.rules import require_boom
from boomwright.errors import Fault, PlanFault
from boomwright.plan.comb import CombPlan, plan_comb
from boomwright.plan.cradle import CradlePlan, cradle_left_out, plan_cradle
from boomwright.plan.cut_block import plan_cut_block
from boomwright.plan.former import plan_former
from boomwright.plan.gauge import plan_gauge
from boomwright.plan.guide import plan_guide
from boomwright.plan.mould import MouldPlan, plan_mould
from boomwright.plan.seat import SeatPlan, plan_seat
from boomwright.plan.sheet_cradle import SheetCradlePlan, plan_sheet_cradle
from boomwright.plan.size import Size
from boomwright.plan.stock import plan_stock
from boomwright.plan.wrap import plan_wrap
from boomwright.shop.profile import Shop


@dataclass(frozen=True)
class Plan:
    """A whole plan.

    faults  by part name: why this shop cannot make that part of this design; empty when it can
    """

    design: Design
    shop: Shop
    boom: Boom
    wished_seat: Seat
    seat: SeatPlan
    comb: CombPlan
    mould: MouldPlan
    sheet_cradle: SheetCradlePlan
    sizes: tuple[Size, ...]
    laid: CradlePlan | None = None
    faults: dict[str, tuple[Fault, ...]] = field(default_factory=dict)

    @property
    def cradle(self) -> CradlePlan:
        """The cradle's plan; raises PlanFault for a design that has no cradle."""
        if self.laid is None:
            raise PlanFault([Fault("rod", cradle_left_out(self.design) or "no cradle", "leave the cradle out")])
        return self.laid


def make_plan(design: Design, shop: Shop) -> Plan:
    """Work out every size.

    Raises DesignFault when the design has no boom, PlanFault when its seats cannot be cut at all. What only one part
    stumbles over stands in `Plan.faults` under that part's name.
    """
    boom, wished = require_boom(design)
    seat, sizes, faults = plan_seat(design, boom, wished)
    if faults:
        raise PlanFault(faults)
    comb, comb_sizes = plan_comb(design, shop, seat)
    mould, mould_sizes, mould_faults = plan_mould(design, shop, seat)
    by_part = {"mould": tuple(mould_faults)}
    laid = None
    if cradle_left_out(design) is None:
        laid, cradle_sizes, cradle_faults = plan_cradle(design, boom, shop, seat)
        sizes = sizes + cradle_sizes
        by_part["cradle"] = tuple(cradle_faults)
    sheet, sheet_sizes, sheet_faults = plan_sheet_cradle(design, boom, shop, seat)
    by_part["sheet-cradle"] = tuple(sheet_faults)
    _, stock_sizes, by_part["stock-plan"] = plan_stock(design, shop)
    _, wrap_sizes = plan_wrap(design, boom, wished)
    _, gauge_sizes = plan_gauge(design, shop)
    _, former_sizes = plan_former(design, shop)
    _, block_sizes = plan_cut_block(design, shop)
    _, guide_sizes = plan_guide(design, boom, wished, shop)
    sizes = [
        *sizes,
        *mould_sizes,
        *comb_sizes,
        *sheet_sizes,
        *stock_sizes,
        *wrap_sizes,
        *gauge_sizes,
        *former_sizes,
        *guide_sizes,
        *block_sizes,
    ]
    return Plan(design, shop, boom, wished, seat, comb, mould, sheet, tuple(sizes), laid, by_part)

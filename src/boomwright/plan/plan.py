"""The plan: every size the parts need, worked out from design and shop, each with where it came from."""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.design.model import Boom, Design, Seat
from boomwright.plan.seat import SeatPlan
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop


@dataclass(frozen=True)
class Plan:
    """A whole plan. `left_out` says for a sub-plan that is None why the design has no such part."""

    design: Design
    shop: Shop
    boom: Boom
    seat_wish: Seat
    seat: SeatPlan
    sizes: tuple[Size, ...]

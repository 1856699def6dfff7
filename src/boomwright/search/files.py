"""`propose` and `rescale` from files to files."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

from boomwright.design.document import escaped
from boomwright.design.tomlfile import load_design
from boomwright.errors import DesignFault
from boomwright.search.carry import Target
from boomwright.search.document import check_target_file, proposal_text, rescaled_text, write_text
from boomwright.search.propose import Proposal, propose
from boomwright.search.request import Request
from boomwright.search.rescale import Rescaled, rescale
from boomwright.search.tries import Progress
from boomwright.shop.tomlfile import load_shop


def propose_file(request: Request, shop_path: Path | None, out: Path, progress: Progress) -> Proposal:
    """Find a design and write it.

    request    what is wanted
    shop_path  the shop file, None = the built-in shop
    out        the design file
    progress   called with a word or two before each step

    Raises InputFault for what the user gave, AccessError for what could not be read or written.
    """
    check_target_file(out)
    found = propose(request, load_shop(shop_path), progress)
    write_text(out, proposal_text(found))
    progress("")
    return found


def rescale_file(design_path: Path, target: Target, shop_path: Path | None, out: Path, progress: Progress) -> Rescaled:
    """Carry the design of a file and write it; arguments and errors as `propose_file`."""
    check_target_file(out)
    design, shop = load_design(design_path), load_shop(shop_path)
    progress("scaling")
    try:
        found = rescale(design, target, shop, progress)
    except DesignFault as fault:
        raise DesignFault(replace(each, file=each.file or escaped(str(design_path))) for each in fault.faults) from None
    write_text(out, rescaled_text(found, design.name))
    progress("")
    return found

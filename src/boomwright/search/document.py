"""A found design as a file: comments that say where it came from and what it does, then the design."""

from __future__ import annotations

import os
import tempfile
import textwrap
from pathlib import Path

from boomwright import __version__
from boomwright.design.document import escaped
from boomwright.design.model import Design
from boomwright.design.tomlfile import write_design
from boomwright.errors import AccessError, Fault, InputFault
from boomwright.prediction import Prediction
from boomwright.search.propose import Proposal
from boomwright.search.rescale import Rescaled

MARK = "boomwright"
WIDTH = 110


def proposal_text(proposal: Proposal) -> str:
    """The design file of a proposal."""
    design = proposal.design
    band = design.band
    lines = [
        f"Proposed by {MARK} {__version__} for {band.low_mhz:g} to {band.high_mhz:g} MHz, seed {proposal.seed}.",
        f"Start: {proposal.start}.",
        f"Result: {figures_line(proposal.prediction)}.",
        f"Published array of this boom, solved alike at one frequency: {proposal.table_dbi:.2f} dBi.",
        *(f"Limit: {limit}." for limit in proposal.limits),
        *(f"Not met: {shortfall}." for shortfall in proposal.shortfalls),
        *(f"This shop cannot make it as it stands: {fault.path}: {fault.found}." for fault in proposal.unbuilt),
        *dimension_lines(design),
    ]
    return commented(lines) + write_design(design)


def rescaled_text(rescaled: Rescaled, source: str) -> str:
    """The design file of a carried design; `source` names the one it came from."""
    design = rescaled.design
    lines = [
        f"Rescaled by {MARK} {__version__} from {source} to {design.band.centre_mhz:g} MHz.",
        *rescaled.lines,
        *(f"Not met: {shortfall}." for shortfall in rescaled.shortfalls),
        *dimension_lines(design),
    ]
    return commented(lines) + write_design(design)


def dimension_lines(design: Design) -> list[str]:
    """What a reader of the numbers below must know."""
    lines = ["Lengths and positions are as cut and as built; boom, adhesive and resin are not in the equations."]
    if design.feed.coax is None:
        lines.append('Name your cable under [feed], as coax = "RG-316", and the mould gets a channel for it.')
    return lines


def figures_line(prediction: Prediction) -> str:
    """The worst figures over the band, in words."""
    return prediction.band_line.split("; spec")[0]


def commented(lines: list[str]) -> str:
    """Lines of text as TOML comments, wrapped."""
    wrapped = [part for line in lines for part in textwrap.wrap(escaped(line), WIDTH, subsequent_indent="  ")]
    return "".join(f"# {line}\n" for line in wrapped)


def check_target_file(path: Path) -> None:
    """Raises InputFault unless a design may be written there: a new file, or one that a run like this wrote."""
    if path.is_dir():
        raise InputFault([Fault("--out", f"{escaped(str(path))} is a folder", "name a file, as beam.toml")])
    if not path.exists():
        return
    try:
        with path.open("rb") as stream:
            first = stream.readline(200)
    except OSError as error:
        raise AccessError(error.errno, f"{escaped(str(path))}: cannot be read: {error.strerror}") from error
    if not (first.startswith(b"# ") and f" by {MARK} ".encode() in first):
        found = f"{escaped(str(path))} exists and no run has written it"
        raise InputFault([Fault("--out", found, "name a new file, or remove this one first")])


def write_text(path: Path, text: str) -> None:
    """Write a file beside its place and put it there in one step.

    Raises InputFault as `check_target_file`, AccessError when it cannot be written.
    """
    check_target_file(path)
    staged: str | None = None
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        handle, staged = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.parent)
        with os.fdopen(handle, "w", encoding="utf-8") as stream:
            stream.write(text)
            stream.flush()
            os.fsync(stream.fileno())
        Path(staged).chmod(0o666 & ~_mask())
        Path(staged).replace(path)
        staged = None
    except OSError as error:
        raise AccessError(error.errno, f"cannot write {escaped(str(path))}: {error.strerror or error}") from error
    finally:
        if staged is not None:
            Path(staged).unlink(missing_ok=True)


def _mask() -> int:
    """The process's file mode mask."""
    mask = os.umask(0)
    os.umask(mask)
    return mask

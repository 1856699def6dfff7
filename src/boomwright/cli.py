"""The command line: parse, call, print, exit status. No logic."""

from __future__ import annotations

import os
import signal
import sys
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from enum import StrEnum
from pathlib import Path
from typing import Annotated, NoReturn

import typer

from boomwright import __version__
from boomwright.errors import AccessError, BoomwrightError, InputFault

DONE, FAULT, NOT_MET, NO_ACCESS, INTERRUPTED = 0, 2, 3, 4, 130
MOST_FAILURES_SHOWN = 20

app = typer.Typer(
    name="boomwright",
    help="From the electrical figures of a small beam antenna to checked fabrication files.",
    no_args_is_help=True,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)

Quiet = Annotated[bool, typer.Option("-q", "--quiet", help="Print faults and failures only.")]
Jobs = Annotated[
    int | None,
    typer.Option(min=1, envvar="BOOMWRIGHT_JOBS", help="Processes that work beside each other; absent = as fits."),
]
AsJson = Annotated[bool, typer.Option("--json", help="Print one JSON document on stdout and nothing else there.")]


class Subject(StrEnum):
    """What `show` can list."""

    parts = "parts"
    materials = "materials"
    cables = "cables"
    shop = "shop"
    schema = "schema"


class Form(StrEnum):
    """Forms of a driven element."""

    straight = "straight"
    folded = "folded"
    loop = "loop"


def _version(wanted: bool) -> None:
    if wanted:
        typer.echo(f"boomwright {__version__}")
        raise typer.Exit


@app.callback()
def _root(
    version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Print the version and exit.")
    ] = False,
) -> None:
    pass


@app.command()
def make(
    design: Annotated[Path, typer.Argument(help="The design file (TOML).")],
    *,
    shop: Annotated[Path | None, typer.Option(help="The shop file (TOML); absent = the built-in shop.")] = None,
    out: Annotated[Path | None, typer.Option(help="The output folder; absent = outputs/NAME.")] = None,
    only: Annotated[list[str] | None, typer.Option(help="Make only this part (may be repeated).")] = None,
    jobs: Jobs = None,
    quiet: Quiet = False,
) -> None:
    """Make every file a design needs, measure each one, and judge audit and spec."""
    from boomwright.crew import jobs_for_one
    from boomwright.pipeline import make as run

    made = run(design, shop, out, only or (), progress=_progress, jobs=jobs or jobs_for_one())
    if not quiet:
        for size in made.plan.sizes:
            typer.echo(str(size))
        for name, reason in made.manifest.left_out.items():
            typer.echo(f"left out: {name}: {reason}")
        typer.echo(f"{len(made.manifest.entries)} files in {made.folder}")
        typer.echo(made.prediction.band_line)
    _judge(made.audit, quiet, made.prediction.shortfalls)


@app.command()
def predict(
    design: Annotated[Path, typer.Argument(help="The design file (TOML).")],
    *,
    at_mhz: Annotated[list[float] | None, typer.Option(help="Only this frequency in MHz (may be repeated).")] = None,
    points: Annotated[int | None, typer.Option(help="Number of frequencies of the sweep; absent = 61.")] = None,
    as_json: AsJson = False,
    out: Annotated[Path | None, typer.Option(help="Also write tables, charts and a Touchstone file there.")] = None,
    quiet: Quiet = False,
) -> None:
    """Solve the antenna: impedance, gain, front-to-back and beamwidths over the band, and its spec judged."""
    from boomwright.prediction import predict_file

    found = predict_file(design, at_mhz or (), points)
    if out is not None:
        from boomwright.output import write_prediction

        write_prediction(found, out)
    if as_json:
        typer.echo(found.as_json(), nl=False)
    elif not quiet:
        typer.echo(found.as_text())
    _tell_shortfalls(found.shortfalls)
    raise typer.Exit(NOT_MET if found.shortfalls else DONE)


@app.command()
def audit(
    folder: Annotated[Path, typer.Argument(metavar="DIR", help="A folder that make wrote.")],
    as_json: AsJson = False,
    quiet: Quiet = False,
) -> None:
    """Measure the files of a folder again and hold them against the design kept beside them."""
    from boomwright.audit import audit_folder

    result = audit_folder(folder)
    if as_json:
        typer.echo(result.as_json(), nl=False)
        raise typer.Exit(DONE if result.ok else NOT_MET)
    _judge(result, quiet)


@app.command()
def propose(
    band: Annotated[str, typer.Option(metavar="LOW:HIGH", help="The band in MHz.")],
    out: Annotated[Path, typer.Option(help="The design file to write.")],
    *,
    boom_mm: Annotated[float | None, typer.Option(help="Reflector to last director.")] = None,
    rods: Annotated[
        int | None, typer.Option(help="Reflector and directors together, instead of or beside a boom.")
    ] = None,
    rod_mm: Annotated[float | None, typer.Option(help="Rod diameter; absent = from the shelf or the band.")] = None,
    reflector_mm: Annotated[
        float | None, typer.Option(help="Reflector's diameter; absent = as the directors'.")
    ] = None,
    boom_width_mm: Annotated[float | None, typer.Option(help="Boom's diameter or side; absent = as it needs.")] = None,
    driven: Annotated[Form | None, typer.Option(help="Driven element; absent = folded or straight as fits.")] = None,
    ohm: Annotated[float, typer.Option(help="System impedance.")] = 50.0,
    gain_min: Annotated[float | None, typer.Option(help="Least gain in dBi over the band.")] = None,
    front_to_back_min: Annotated[float | None, typer.Option(help="Least front-to-back in dB over the band.")] = None,
    vswr_max: Annotated[float, typer.Option(help="Greatest VSWR over the band.")] = 1.5,
    seed: Annotated[int, typer.Option(help="Of the starts: the same seed gives the same design.")] = 0,
    name: Annotated[str | None, typer.Option(help="The design's name; absent = from the band.")] = None,
    shop: Annotated[Path | None, typer.Option(help="The shop file (TOML); absent = the built-in shop.")] = None,
    quiet: Quiet = False,
) -> None:
    """Find a design for a band and write the design file."""
    _use_one_thread()
    from boomwright.search.files import propose_file
    from boomwright.search.request import Request, band_of, form_of

    low_mhz, high_mhz = band_of(band)
    form = form_of(driven)
    wishes = (gain_min, front_to_back_min, vswr_max)
    request = Request(
        low_mhz, high_mhz, boom_mm, rods, rod_mm, reflector_mm, boom_width_mm, form, ohm, *wishes, seed, name
    )
    found = propose_file(request, shop, out, _progress)
    if not quiet:
        typer.echo(found.summary)
        typer.echo(f"written: {out}")
    _tell_shortfalls(found.shortfalls)
    raise typer.Exit(NOT_MET if found.shortfalls else DONE)


@app.command()
def rescale(
    design: Annotated[Path, typer.Argument(help="The design file (TOML).")],
    to_mhz: Annotated[float, typer.Option(help="The new centre frequency; the band scales along.")],
    out: Annotated[Path, typer.Option(help="The design file to write.")],
    *,
    rod_mm: Annotated[float | None, typer.Option(help="Diameter of all rods; absent = the nearest on sale.")] = None,
    boom_width_mm: Annotated[
        float | None, typer.Option(help="Boom's diameter or side; absent = nearest on sale.")
    ] = None,
    shop: Annotated[Path | None, typer.Option(help="The shop file (TOML); absent = the built-in shop.")] = None,
    as_json: AsJson = False,
    quiet: Quiet = False,
) -> None:
    """Carry a proven design to another band and stock, and report its figures before and after."""
    _use_one_thread()
    from boomwright.search.carry import Target
    from boomwright.search.files import rescale_file

    found = rescale_file(design, Target(to_mhz, rod_mm, boom_width_mm), shop, out, _progress)
    if as_json:
        typer.echo(found.as_json(), nl=False)
    elif not quiet:
        typer.echo("\n".join(found.lines))
        typer.echo(f"written: {out}")
    _tell_shortfalls(found.shortfalls)
    raise typer.Exit(NOT_MET if found.shortfalls else DONE)


@app.command()
def coupon(
    shop: Annotated[Path | None, typer.Option(help="The shop file (TOML); absent = the built-in shop.")] = None,
    out: Annotated[Path | None, typer.Option(help="The output folder; absent = outputs/coupon.")] = None,
    jobs: Jobs = None,
    quiet: Quiet = False,
) -> None:
    """Make the calibration pieces for a shop's printer and laser, with a sheet that says how to read them."""
    from boomwright.coupon import make_coupon
    from boomwright.crew import jobs_for_one

    made = make_coupon(shop, out, progress=_progress, jobs=jobs or jobs_for_one())
    if not quiet:
        for size in made.plan.sizes:
            typer.echo(str(size))
        typer.echo(f"{len(made.manifest.entries)} files in {made.folder}; begin with bench/coupon-sheet.pdf")
    _judge(made.audit, quiet)


@app.command()
def show(subject: Annotated[Subject, typer.Argument(help="What to list.")]) -> None:
    """List what the program knows: parts, materials, cables, the built-in shop, the design file's schema."""
    from boomwright.listing import listing

    typer.echo(listing(subject.value))


@app.command()
def fleet(
    table: Annotated[Path, typer.Argument(help="The table of variants (TOML).")],
    *,
    shop: Annotated[Path | None, typer.Option(help="The shop of variants without their own.")] = None,
    out: Annotated[
        Path | None, typer.Option(help="The fleet's folder; absent = outputs/ and the table's name.")
    ] = None,
    jobs: Jobs = None,
    scheduler: Annotated[str | None, typer.Option(metavar="ADDRESS", help="A dask scheduler to work on.")] = None,
    as_json: AsJson = False,
    quiet: Quiet = False,
) -> None:
    """Make many variants at once; what is up to date is left, and a fault of one does not stop the others."""
    from boomwright.crew import processors
    from boomwright.fleet.cluster import executor_at
    from boomwright.fleet.run import run_fleet

    with executor_at(scheduler) as executor, _bar() as progress:
        made = run_fleet(table, shop, out, executor=executor, jobs=jobs or processors(), progress=progress)
    if as_json:
        typer.echo((made.folder / "fleet.json").read_text("utf-8"), nl=False)
    elif not quiet:
        for one in made.outcomes:
            typer.echo(f"{one.name}: {one.state}")
        typer.echo(f"{len(made.outcomes)} variants in {made.folder}, {len(made.failed)} failed")
    for one in made.failed:
        typer.echo(f"failed: {one.name}: {one.reason}", err=True)
    raise typer.Exit(NOT_MET if made.failed else DONE)


@contextmanager
def _bar() -> Iterator[Callable[[int, int, str], None]]:
    """A progress bar, on a terminal only."""
    from rich.console import Console
    from rich.progress import Progress

    with Progress(console=Console(stderr=True), disable=not sys.stderr.isatty(), transient=True) as bar:
        task = bar.add_task("making", total=None)
        yield lambda done, of, name: bar.update(task, completed=done, total=of, description=name or "making")


def _tell_shortfalls(shortfalls: Sequence[object]) -> None:
    for shortfall in shortfalls:
        typer.echo(f"not met: {shortfall}", err=True)


def _judge(result: object, quiet: bool, shortfalls: Sequence[object] = ()) -> NoReturn:
    from boomwright.audit import Audit

    assert isinstance(result, Audit)
    for finding in result.failures[:MOST_FAILURES_SHOWN]:
        typer.echo(f"not met: {finding}", err=True)
    more = len(result.failures) - MOST_FAILURES_SHOWN
    if more > 0:
        typer.echo(f"not met: {more} more, see audit.json or --json", err=True)
    if not quiet:
        typer.echo(f"audit: {len(result.findings)} quantities measured, {len(result.failures)} not met")
    _tell_shortfalls(shortfalls)
    raise typer.Exit(DONE if result.ok and not shortfalls else NOT_MET)


def _use_one_thread() -> None:
    """Before numpy loads: the search's matrices are small, and its result must not follow the number of cores."""
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    os.environ.setdefault("OMP_NUM_THREADS", "1")


def _progress(step: str) -> None:
    """One line that is written over, on a terminal only."""
    if sys.stderr.isatty():
        sys.stderr.write(f"\r\x1b[K{step}")
        sys.stderr.flush()


def main() -> None:
    """Run the command line; every error raised on purpose becomes a message and an exit status."""
    interrupts: list[int] = []

    def interrupt(number: int, frame: object) -> NoReturn:
        interrupts.append(number)
        raise KeyboardInterrupt

    signal.signal(signal.SIGINT, interrupt)
    try:
        app()
    except KeyboardInterrupt:
        sys.exit(INTERRUPTED)
    except Exception as error:
        # An interrupt inside a compiled module's loading comes out as an ImportError: the signal tells the truth.
        sys.exit(INTERRUPTED if interrupts else _status(error))


def _status(error: Exception) -> int:
    """Say what went wrong and give its exit status; what nobody raised on purpose is raised again."""
    if isinstance(error, InputFault):
        typer.echo(str(error), err=True)
        return FAULT
    if isinstance(error, AccessError):
        typer.echo(f"boomwright: {error.strerror or error}", err=True)
        return NO_ACCESS
    if isinstance(error, OSError):
        typer.echo(f"boomwright: {error.filename or 'cannot read or write'}: {error.strerror or error}", err=True)
        return NO_ACCESS
    if isinstance(error, BoomwrightError):
        typer.echo(f"boomwright: {error}", err=True)
        return NO_ACCESS
    raise error

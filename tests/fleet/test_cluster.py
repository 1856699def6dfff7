"""The same fleet on a dask scheduler with two workers in processes of their own."""

from pathlib import Path

import pytest
from samples import LONE_LOOP
from typer.testing import CliRunner

from boomwright.cli import app
from boomwright.design.tomlfile import write_design
from boomwright.errors import AccessError, InputFault
from boomwright.fleet.cluster import executor_at
from boomwright.fleet.run import run_fleet

VARIANT = '[[variant]]\nname = "{}"\ndesign = "beam.toml"\nset = {{ "boom.nose_mm" = {} }}\n'


@pytest.mark.slow
def test_two_workers_make_what_one_process_makes(tmp_path: Path) -> None:
    from distributed import LocalCluster

    (tmp_path / "beam.toml").write_text(write_design(LONE_LOOP), "utf-8")
    names = [("a", "12.0"), ("broken", '"long"'), ("thin", "0.0")]
    (tmp_path / "beams.toml").write_text("schema = 1\n" + "".join(VARIANT.format(*each) for each in names), "utf-8")
    alone = run_fleet(tmp_path / "beams.toml", out=tmp_path / "alone")
    with LocalCluster(
        n_workers=2,
        threads_per_worker=1,
        processes=True,
        dashboard_address=None,
        local_directory=str(tmp_path / "dask"),
    ) as cluster:
        arguments = ["fleet", str(tmp_path / "beams.toml"), "--scheduler", cluster.scheduler_address, "-q"]
        done = CliRunner().invoke(app, [*arguments, "--out", str(tmp_path / "cluster")])
    assert [one.state for one in alone.outcomes] == ["made", "failed", "failed"]
    assert done.exit_code == 3
    for path in (tmp_path / "alone").rglob("*"):
        if path.is_file():
            assert (tmp_path / "cluster" / path.relative_to(tmp_path / "alone")).read_bytes() == path.read_bytes()


def test_an_address_that_is_none() -> None:
    with pytest.raises((InputFault, AccessError), match="nowhere"), executor_at("nowhere:"):
        raise AssertionError("connected")


def test_without_a_scheduler_there_is_no_executor() -> None:
    with executor_at(None) as executor:
        assert executor is None

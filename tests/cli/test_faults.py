"""Whatever a user gives: exit status 2, file, key path and fix on stderr, no traceback, nothing written."""

import subprocess
import sys
from pathlib import Path

import pytest
import samples

from boomwright.design.tomlfile import write_design

GOOD = write_design(samples.GAUGE)


def boomwright(*arguments: str, cwd: Path) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "boomwright", *arguments], cwd=cwd, capture_output=True, text=True, check=False
    )


def replaced(old: str, new: str) -> str:
    assert old in GOOD
    return GOOD.replace(old, new, 1)


BROKEN = {
    "unknown key": (GOOD + "\n[specs]\ngain_dbi_min = 9.0\n", "specs"),
    "name with a path": (replaced('"gauge-868"', '"../gauge"'), "name"),
    "name with a control character": (replaced('"gauge-868"', '"gauge\\u0007"'), "name"),
    "not a number": (replaced("low_mhz = 863.0", "low_mhz = nan"), "band.low_mhz"),
    "too large": (replaced("width_mm = 12.0", "width_mm = 1e308"), "boom.width_mm"),
    "long title": (f'title = "{"x" * 10_000}"\n' + GOOD, "title"),
    "groove too deep": (replaced("width_mm = 12.0", "width_mm = 5.0"), "boom.width_mm"),
    "two reflectors": (GOOD.replace('role = "director"', 'role = "reflector"'), "rod[1].role"),
    "touching rods": (replaced("at_mm = 95.0", "at_mm = 148.0"), "rod[2].at_mm"),
    "no boom": (GOOD.split("[boom]")[0] + "[[rod]]" + GOOD.split("[[rod]]", 1)[1], "boom"),
    "unknown cable": (replaced('"RG-316"', '"RG-361"'), "feed.coax"),
    "65 rods": (GOOD + GOOD[GOOD.index("[[rod]]") : GOOD.index("[driven]")] * 22, "rod"),
    "larger than 1 MiB": (GOOD + "#" * (2 << 20), "larger than 1 MiB"),
    "syntax": (GOOD + "\n[feed\n", "line"),
}


@pytest.mark.parametrize("case", BROKEN)
def test_broken_design(case: str, tmp_path: Path) -> None:
    text, key = BROKEN[case]
    (tmp_path / "broken.toml").write_text(text)
    done = boomwright("make", "broken.toml", cwd=tmp_path)
    assert done.returncode == 2, done.stderr
    assert "broken.toml" in done.stderr
    assert key in done.stderr
    assert "fix: " in done.stderr
    assert "Traceback" not in done.stderr
    assert done.stdout == ""
    assert [p.name for p in tmp_path.iterdir()] == ["broken.toml"]


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["make", "missing.toml"], "missing.toml"),
        (["make", "good.toml", "--only", "cradel"], "did you mean cradle?"),
        (["make", "good.toml", "--shop", "missing.toml"], "missing.toml"),
        (["make", "good.toml", "--out", "good.toml"], "--out: good.toml is not a folder"),
        (["make", "good.toml", "--out", "."], "holds files that no run has written"),
        (["audit", "nowhere"], "DIR: nowhere is not a folder"),
        (["audit", "."], "holds neither manifest.json nor design.toml"),
    ],
    ids=lambda value: value if isinstance(value, str) else " ".join(value),
)
def test_broken_arguments(arguments: list[str], words: str, tmp_path: Path) -> None:
    (tmp_path / "good.toml").write_text(GOOD)
    done = boomwright(*arguments, cwd=tmp_path)
    assert done.returncode == 2, done.stderr
    assert words in done.stderr
    assert "Traceback" not in done.stderr
    assert [p.name for p in tmp_path.iterdir()] == ["good.toml"]


def test_all_faults_come_at_once(tmp_path: Path) -> None:
    text = GOOD.replace("width_mm = 12.0", "width_mm = -12.0").replace("gap_mm = 4.0", "gap_mm = 0.0")
    (tmp_path / "broken.toml").write_text(text)
    done = boomwright("make", "broken.toml", cwd=tmp_path)
    assert "boom.width_mm" in done.stderr
    assert "driven.gap_mm" in done.stderr


def test_a_bed_that_is_too_small_names_the_shop_file(tmp_path: Path) -> None:
    (tmp_path / "good.toml").write_text(GOOD)
    (tmp_path / "small.toml").write_text("schema = 1\n[printer]\nbed_mm = [40.0, 40.0, 100.0]\n")
    done = boomwright("make", "good.toml", "--shop", "small.toml", cwd=tmp_path)
    assert done.returncode == 2
    assert done.stderr.startswith("small.toml: printer.bed_mm: ")
    assert not (tmp_path / "outputs").exists()

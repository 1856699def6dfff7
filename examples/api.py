"""The main job from Python: make the files of a design, and ask the audit what it found."""

from pathlib import Path

from boomwright.pipeline import make

design = Path(__file__).with_name("stream-gauge-868.toml")
made = make(design, shop_path=design.with_name("shop.toml"))
print(f"{len(made.manifest.entries)} files in {made.folder}, {len(made.audit.findings)} quantities measured")
for finding in made.audit.failures:
    print("not met:", finding)

"""Proposals for eight bands and three booms against the published array's gain. Run it by hand on a quiet machine:

python tests/bench/bench_propose.py [BOOM_WL ...]. Gain is the worst over the band; 60 s each on two cores are wanted.
"""

import sys
import time

from boomwright.search.propose import propose
from boomwright.search.published import published_gain_dbi
from boomwright.search.request import Request
from boomwright.units import wavelength_mm

BANDS_MHZ = (
    (144.0, 146.0), (430.0, 440.0), (863.0, 870.0), (902.0, 928.0),
    (1240.0, 1300.0), (2400.0, 2483.5), (3400.0, 3475.0), (5725.0, 5875.0),
)  # fmt: skip
BOOMS_WL = (0.8, 1.5, 2.2)


def main() -> None:
    """A line a proposal."""
    booms = [float(each) for each in sys.argv[1:]] or BOOMS_WL
    for low, high in BANDS_MHZ:
        for boom_wl in booms:
            started = time.perf_counter()
            found = propose(Request(low, high, boom_mm=round(boom_wl * wavelength_mm((low + high) / 2.0), 1)))
            inside, sweep = list(found.prediction.in_band), found.prediction.sweep
            over_db = sweep.gain_dbi[inside].min() - published_gain_dbi(boom_wl)
            print(
                f"{low:g}:{high:g} MHz, {boom_wl:g} wl: {over_db:+.2f} dB to the published array, "
                f"VSWR {sweep.vswr[inside].max():.2f}, {len(found.design.rods)} rods, "
                f"{time.perf_counter() - started:.0f} s, {len(found.unbuilt)} parts not buildable"
            )


if __name__ == "__main__":
    main()

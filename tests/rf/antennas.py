"""Antennas that the solver's tests share. Invented figures of the sizes that are built."""

from boomwright.rf.conductors import Folded, Rod, Wires

MM = 1e-3
COPPER_S_M, BRASS_S_M = 5.8e7, 1.57e7
ONE_METRE_HZ = 299_792_458.0


def directors(places_mm, lengths_mm, diameter_mm, conductivity_s_m=BRASS_S_M):
    """Directors D1, D2, ... as rods."""
    return tuple(
        Rod(f"D{n + 1}", at * MM, length * MM, diameter_mm / 2 * MM, conductivity_s_m=conductivity_s_m)
        for n, (at, length) in enumerate(zip(places_mm, lengths_mm, strict=True))
    )


def gauge_868():
    """868 MHz, 3 mm rods, folded driven element of 2 mm."""
    return Wires(
        (
            Rod("R", 0.0, 168 * MM, 1.5 * MM, conductivity_s_m=BRASS_S_M),
            Folded("DE", 62 * MM, 158 * MM, 12 * MM, 1 * MM, 4 * MM, conductivity_s_m=COPPER_S_M),
            *directors([95, 150, 215, 290, 370], [148, 146, 144, 142, 140], 3.0),
        )
    )


def camera_5g8():
    """5.8 GHz, 2 mm rods, straight driven element."""
    return Wires(
        (
            Rod("R", 0.0, 25 * MM, 1 * MM, conductivity_s_m=BRASS_S_M),
            Rod("DE", 10 * MM, 22 * MM, 1 * MM, gap_m=2 * MM, conductivity_s_m=COPPER_S_M),
            *directors([16, 26, 38], [20.5, 20, 19.5], 2.0),
        )
    )


def gateway_433():
    """433 MHz, 4 mm rods, folded driven element of 4 mm."""
    return Wires(
        (
            Rod("R", 0.0, 335 * MM, 2 * MM, conductivity_s_m=BRASS_S_M),
            Folded("DE", 130 * MM, 315 * MM, 40 * MM, 2 * MM, 8 * MM, conductivity_s_m=COPPER_S_M),
            *directors([220, 350], [295, 290], 4.0),
        )
    )


def thick_five(spacing_mm, diameter_mm=4.0, scale=1.0):
    """Five perfect rods, thick and close: 4 mm rods for 5.8 GHz, or scaled."""
    lengths_mm = (24.0, 22.0, 20.5, 20.0, 20.0)
    return Wires(
        tuple(
            Rod(
                "R" if n == 0 else "DE" if n == 1 else f"D{n - 1}",
                n * spacing_mm * MM,
                length * scale * MM,
                diameter_mm / 2 * MM,
                gap_m=2 * scale * MM if n == 1 else 0.0,
            )
            for n, length in enumerate(lengths_mm)
        )
    )

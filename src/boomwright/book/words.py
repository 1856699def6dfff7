"""Numbers and lists as the book writes them: one way everywhere, so that the same number reads the same."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

LEAST_ROUGH = 1e-4
"""A change smaller than this of anything in the book is none."""


SPOKEN_WITH_VOWEL = tuple(str(number) for number in (11, 18))


def figure(value: float, decimals: int = 2) -> str:
    """A number with at most so many decimals, without zeros at its end."""
    text = f"{value:.{decimals}f}"
    text = text.rstrip("0").rstrip(".") if "." in text else text
    return "0" if text in ("-0", "") else text


def rough(value: float, digits: int = 2) -> str:
    """A number with so many digits that count, for what is known no better; never with a power of ten."""
    if abs(value) < LEAST_ROUGH:
        return "0"
    decimals = max(digits - 1 - math.floor(math.log10(abs(value))), 0)
    return figure(value, decimals)


def mm(value: float, decimals: int = 2) -> str:
    """A length [mm] with its unit."""
    return f"{figure(value, decimals)} mm"


def mhz(value: float) -> str:
    """A frequency [MHz] with its unit."""
    return f"{value:.7g} MHz"


def metres(value: float) -> str:
    """A distance [m], rounded up in its second decimal: a distance to keep is never rounded down."""
    return f"{figure(-(-value * 100.0 // 1) / 100.0)} m"


def ohms(value: complex) -> str:
    """An impedance [ohm]."""
    sign = "+" if value.imag >= 0.0 else "-"
    return f"{figure(value.real, 1)} {sign} j{figure(abs(value.imag), 1)} ohm"


def listed(words: Iterable[str], last: str = "and") -> str:
    """Words as a list in a sentence."""
    found = list(words)
    if len(found) < 2:
        return "".join(found)
    return f"{', '.join(found[:-1])} {last} {found[-1]}"


def with_article(words: str) -> str:
    """Words with the article that is spoken before them: a beam, an upright one, an 8 mm rod."""
    number = words.split(".", maxsplit=1)[0].split(" ", maxsplit=1)[0]
    spoken_vowel = words[:1].lower() in "aeiou" or number.startswith("8") or number in SPOKEN_WITH_VOWEL
    return f"{'an' if spoken_vowel else 'a'} {words}"


def counted(count: int, one: str, many: str | None = None) -> str:
    """A count with its noun."""
    return f"{count} {one if count == 1 else many or one + 's'}"


def span(values: Sequence[float], decimals: int = 2) -> str:
    """From and to, once where they are alike."""
    low, high = figure(min(values), decimals), figure(max(values), decimals)
    return low if low == high else f"{low} to {high}"

"""Reference heating seasons as data: hours at each outdoor temperature, and the design temperature."""
from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Season:
    """A season's bins.

    ``coldest`` is the outdoor temperature of the first bin in °C, the others
    follow by steps of 1 K; ``hours`` are those of each bin in h; ``design`` is
    the design temperature and ``limit`` the outdoor temperature above which
    nothing is heated, in °C.
    """

    name: str
    coldest: int
    hours: tuple[int, ...]
    design: int
    limit: int = 16

    @property
    def bins(self) -> tuple[tuple[int, int], ...]:
        """Pairs of outdoor temperature in °C and hours."""
        return tuple((self.coldest + index, hours) for index, hours in enumerate(self.hours))


SOURCE = "EN 14825:2018, reference heating season (table of bins at second hand)"
"""Each list closes against the equivalent full-load hours of Regulation (EU) 811/2013, Annex VII 4(c):
2066 h average, 1336 h warmer, 2465 h colder. The totals of 4910 h, 3590 h and 6446 h are from memory."""

SEASONS: dict[str, Season] = {season.name: season for season in (
    Season("average", -10, (1, 25, 23, 24, 27, 68, 91, 89, 165, 173, 240, 280, 320, 357, 356, 303, 330, 326, 348, 335,
                            315, 215, 169, 151, 105, 74), -10),
    Season("warmer", 2, (3, 22, 63, 63, 175, 162, 259, 360, 428, 430, 503, 444, 384, 294), 2),
    Season("colder", -22, (1, 6, 13, 17, 19, 26, 39, 41, 35, 52, 37, 41, 43, 54, 90, 125, 169, 195, 278, 306, 454, 385,
                           490, 533, 380, 228, 261, 279, 229, 269, 233, 230, 243, 191, 146, 150, 97, 61), -22),
)}

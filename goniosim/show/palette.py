"""Colours: the Okabe-Ito palette, published for colour-blind readers (2008), and greys for print."""

from __future__ import annotations

BLACK = "#000000"
ORANGE = "#E69F00"
SKY_BLUE = "#56B4E9"
GREEN = "#009E73"
YELLOW = "#F0E442"
BLUE = "#0072B2"
VERMILION = "#D55E00"
PURPLE = "#CC79A7"
GREY = "#707070"
PALE = "#EDEDED"
MIDDLE = "#BDBDBD"

BANDS = {
    "schwalbe-line": BLACK,
    "clear-meshwork": YELLOW,
    "pigmented-meshwork": VERMILION,
    "scleral-spur": SKY_BLUE,
    "ciliary-band": PURPLE,
    "iris-root": GREEN,
    "mark": VERMILION,
}
"""Colour of each structure of the angle."""

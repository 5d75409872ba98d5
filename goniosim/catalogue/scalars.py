"""What an unquoted word of a file means: nothing, true or false, a number, else text.

No other guess is made: yes, off, 12:30, 2024-01-02, 1_000 and 017 stay text.
"""

from __future__ import annotations

import re
from typing import Any

NOTHING = re.compile(r"|~|null")
FLAG = re.compile(r"true|false")
INTEGER = re.compile(r"[-+]?(?:0|[1-9][0-9]*)")
DECIMAL = re.compile(r"[-+]?(?:(?:0|[1-9][0-9]*)(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?")
NOT_A_NUMBER = re.compile(r"[-+]?\.?(?:nan|inf|infinity)", re.IGNORECASE)
LEADING_ZERO = re.compile(r"[-+]?0[0-9]+(?:\.[0-9]*)?")

EXACT_DIGITS = 15  # whole numbers of more digits are kept as decimals


def meaning_of(word: str) -> Any:
    """Value of an unquoted scalar: None, bool, int, float or the word itself."""
    if NOTHING.fullmatch(word):
        return None
    if FLAG.fullmatch(word):
        return word == "true"
    if INTEGER.fullmatch(word) and len(word) <= EXACT_DIGITS:
        return int(word)
    if DECIMAL.fullmatch(word):
        return float(word)
    return word


def why_no_number(text: str) -> str:
    """What keeps a text from being a number, in brackets; empty where nothing does."""
    if NOT_A_NUMBER.fullmatch(text):
        return " (numbers must be finite)"
    if LEADING_ZERO.fullmatch(text):
        return " (a number must not begin with 0)"
    if DECIMAL.fullmatch(text):
        return " (leave out the quotes)"
    return ""

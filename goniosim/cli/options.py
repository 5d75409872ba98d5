"""Options that every command takes, and how outputs end."""

from __future__ import annotations

import argparse
import json
import textwrap
from typing import Any

from ..cautions import CAUTION


def add_common_options(parser: argparse.ArgumentParser) -> None:
    """--plugins, --json and --debug."""
    parser.add_argument("--plugins", metavar="DIR", action="append", default=[], dest="plugin_folders",
                        help="look for plugins in this folder first; may be given several times")
    parser.add_argument("--json", action="store_true", help="print the result as JSON alone")
    parser.add_argument("--debug", action="store_true", help="show the traceback of an error")


def print_json(value: Any) -> None:
    """Plain data as JSON; numbers in full, missing as null, never NaN."""
    print(json.dumps(value, indent=2, ensure_ascii=False, allow_nan=False))


def print_caution() -> None:
    """The caution that ends every output for a reader."""
    print()
    print(textwrap.fill(CAUTION, 100))

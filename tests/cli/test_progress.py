"""The progress bar: only on a terminal, only for work that lasts, and gone at the end."""

from __future__ import annotations

import io

from goniosim.cli.progress import SHOW_AFTER_S, Progress


class Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


def test_nothing_where_the_stream_is_no_terminal():
    stream = io.StringIO()
    progress = Progress(stream)
    progress.begun -= 10.0 * SHOW_AFTER_S
    progress("cut-offs", 2, 5)
    progress.close()
    assert stream.getvalue() == ""


def test_nothing_within_the_first_second():
    stream = Terminal()
    progress = Progress(stream)
    progress("cut-offs", 2, 5)
    progress.close()
    assert stream.getvalue() == ""


def test_a_bar_after_a_second_and_a_clean_line_at_the_end():
    stream = Terminal()
    progress = Progress(stream)
    progress.begun -= 2.0 * SHOW_AFTER_S
    progress("cut-offs", 1, 2)
    shown = stream.getvalue()
    assert shown.startswith("\r[############............] cut-offs")
    progress.close()
    wiped = stream.getvalue().removeprefix(shown)
    assert wiped.strip("\r ") == "" and len(wiped.strip("\r")) >= len(shown.strip("\r"))

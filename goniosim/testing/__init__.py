"""Checks that authors of faces run on their own shapes; the project runs them on all its own."""

from __future__ import annotations

from .shapes import check_shape

__all__ = ["check_shape"]

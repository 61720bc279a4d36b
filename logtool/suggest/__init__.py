"""From an unknown text to a recipe for it."""

from __future__ import annotations

from logtool.suggest.suggestion import Suggestion, suggest

__all__ = ["Suggestion", "suggest"]

"""The form of call signs, as patterns in the syntax of the engine's matcher."""

from __future__ import annotations

# ITU Radio Regulations, Article 19, Nos. 19.67 to 19.69 (from memory): one character of those that stand for a
# country alone, or two, or three where the third tells half a series; one digit; up to four characters, the last a
# letter. 19.68A allows more on special occasions. Q is in no series and stands for invented stations.
_ALONE = "[BFGIKMNRWQ]"
_SERIES = f"(?:{_ALONE}|[A-Z][A-Z0-9]|[0-9][A-Z]{{1,2}}|[A-Z]{{3}})"
CALL = rf"{_SERIES}[0-9][A-Z0-9]{{0,6}}[A-Z]"
# Compound ones: what stands before or after a stroke is common practice, no source.
COMPOUND_CALL = rf"(?:[A-Z0-9]{{1,4}}/)?{CALL}(?:/[A-Z0-9]{{1,4}})?"
UNRESOLVED = "<...>"  # a short code that the decoder could not resolve: it names nobody
GIVEN_CALL = rf"(?:{COMPOUND_CALL}|<{COMPOUND_CALL}>|<\.\.\.>)"

"""What is not sure, as sentences that begin with what they are about."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Doubt:
    """One thing that the text does not tell.

    Attributes
    ----------
    about : str
        Name of a piece or a key of the recipe; several with a comma and a blank between.
    why : str
        The sentence's rest.
    essential : bool
        Whether records may come out wrong; else it is what no text could tell, or what is only left out.
    """

    about: str
    why: str
    essential: bool = True

    def __str__(self) -> str:
        return f"{self.about}: {self.why}"

"""How words in order are written as a rule."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from logtool.suggest.toml import escaped, plain, text_of
from logtool.suggest.values import is_word

FORMS = {
    "number": r"[+-]?[0-9]+(?:[.,][0-9]+)?",
    "time": ".+?",
    "call": r"[^ \t]+",
    "locator": r"[^ \t]+",
    "word": r"[^ \t]+",
}


@dataclass(frozen=True)
class OrderWay:
    """Words in order: the signs before each, and the words that are always the same.

    Attributes
    ----------
    glue : tuple of str
        The signs before each column.
    kinds : tuple of str
        The kind of each column.
    always : tuple of str
        The word that a column always is; empty where it varies.
    text : int
        Place of the column that is any text; -1 where there is none.
    end : str
        Signs at the line's end.
    empties : tuple of tuple of str
        The words for nothing in each column.
    """

    glue: tuple[str, ...]
    kinds: tuple[str, ...]
    always: tuple[str, ...]
    text: int
    end: str
    blanks_inside: bool
    empties: tuple[tuple[str, ...], ...]
    tabs: bool
    strict: bool = False
    may_end: bool = False  # the line may end before the text

    def rule(self, names: Mapping[int, str], forms: Mapping[int, str]) -> list[str]:
        """Return the rule's TOML lines."""
        at_end = self.text in (-1, len(self.glue) - 1)
        plain_blanks = (
            at_end
            and not self.may_end
            and all(not glue.strip(" \t") for glue in self.glue)
            and not self.end
            and not self.blanks_inside
        )
        if plain_blanks and all(self.glue[1:]) and not self.strict:
            columns = [names.get(k, "") for k in range(len(self.glue))]
            if self.text < 0 and columns[-1] == "" and any(columns):
                while columns[-1] == "":
                    columns.pop()
                columns.append("...")
            return ['separator = "space"', "columns = [" + ", ".join(map(plain, columns)) + "]"]
        return [f"pattern = {text_of(self._pattern(names, forms))}"]

    def _pattern(self, names: Mapping[int, str], forms: Mapping[int, str]) -> str:
        out = ""
        count = len(self.glue)
        for k in range(count):
            glue = self.glue[k]
            if k == 0 and not glue.strip():
                out += r"[ \t]*"
            else:
                out += escaped(glue) if glue else ""
            is_text = k == self.text
            if is_text and self.may_end:
                text = f"(?P<{names[k]}>.*?)" if k in names else ".*?"
                return self._ended(out.removesuffix(escaped(glue)) + f"(?:{escaped(glue)}{text})?")
            form = ".*?" if is_text else forms.get(k) or FORMS.get(self.kinds[k], r"[^ \t]+")
            if self.empties[k] and form == FORMS["number"]:
                form = "|".join([form, *map(escaped, self.empties[k])])
            if k in names:
                out += f"(?P<{names[k]}>{form})"
            elif self.always[k] and is_word(self.always[k]):
                out += escaped(self.always[k])
            else:
                out += f"(?:{form})" if "|" in form else form
        return self._ended(out)

    def _ended(self, out: str) -> str:
        out += escaped(self.end.rstrip()) + r"[ \t]*"
        return out.replace(" +", r"[ \t]+") if self.tabs else out

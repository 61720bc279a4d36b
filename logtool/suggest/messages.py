"""Messages and call signs: which call is the sender's, by evidence from what the lines say."""

from __future__ import annotations

import re

from logtool.suggest.call_columns import Calls, are_named_locators, may_be, name_calls, name_locators
from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of
from logtool.suggest.message_order import (
    GOOD_SHARE,
    SENDER_FIRST,
    by_column,
    by_locators,
    by_words,
    pairs_of,
    read_usually,
)
from logtool.suggest.tables import Column, begins_with_numbers, holds_call
from logtool.suggest.values import quoted

_STRANGE = re.compile(r"[+-]?\d+[.,]\d+|\d{3,}|[A-Za-z_]+=.*|\d+:\d\d.*|[;|].*|.*[;|]|.*\"")
_STUCK_LOCATOR = re.compile(r"(?:^| )[A-R]{2}[0-9]{2}(?:[A-Xa-x]{2})?[,.;:!?)]")
_STRANGE_SHARE = 0.3


def find_calls(columns: list[Column], taken: set[int]) -> Calls:
    """Return which columns hold senders, addressees, locators and messages."""
    found = Calls()
    kinds = {k: column.kind for k, column in enumerate(columns) if k not in taken}
    texts = [k for k, kind in kinds.items() if kind == "text"]
    named = [
        k for k in kinds if "text" in meanings_of(columns[k].hint) and any(map(holds_call, columns[k].values))
    ]
    if named:
        text: int | None = named[-1]
    else:
        text = max(texts, key=lambda k: (sum(map(holds_call, columns[k].values)), k), default=None)
    loose = [k for k, kind in kinds.items() if kind == "other" and "text" in meanings_of(columns[k].hint)]
    if text is None and loose:
        text = loose[-1]
    if text is not None:
        found.names[text] = "text"
    name_locators(
        found,
        columns,
        [
            k
            for k, kind in kinds.items()
            if k != text
            and (
                (kind == "locator" and may_be(columns[k], "locator"))
                or (kind == "word" and are_named_locators(columns[k]))
            )
        ],
    )
    name_calls(found, columns, [k for k, kind in kinds.items() if kind == "call" and k != text], text)
    if text is not None and any(map(holds_call, columns[text].values)):
        _settle_message(found, columns, columns[text].values)
    return found


def _settle_message(found: Calls, columns: list[Column], texts: list[str]) -> None:
    found.message = True
    about = [name for name in ("sender", "addressee") if name not in found.names.values()]
    with_calls = [text for text in texts if holds_call(text)]
    odd = [text for text in with_calls if not read_usually(text)]
    if len(odd) > (1 - GOOD_SHARE) * len(with_calls) and about:
        found.doubts.append(
            Doubt(
                ", ".join([*about, "locator"]),
                f"{len(odd)} of {len(with_calls)} messages with call signs are not of the usual forms, as"
                f" {quoted(odd)}; write their form into [message] patterns",
            )
        )
    stuck = [
        text for text in with_calls if "locator" not in read_usually(text) and _STUCK_LOCATOR.search(text)
    ]
    if stuck:
        found.doubts.append(
            Doubt(
                "locator",
                f"a sign sticks to the locator in {len(stuck)} texts, as {quoted(stuck, 1)}, which is then not read",
            )
        )
    strange = [text for text in with_calls if _strange_words(text)]
    if begins_with_numbers(texts):
        strange = strange or with_calls
        found.doubts.append(
            Doubt(
                "snr_db, audio_hz, late_s, dial_hz",
                f"some texts begin with a number, as {quoted(text for text in texts if text[:1] in '+-0123456789')}: a"
                " column may be missing in some lines",
            )
        )
    if len(strange) > _STRANGE_SHARE * len(with_calls):
        words = quoted(word for text in strange for word in _strange_words(text))
        found.doubts.append(
            Doubt(
                "snr_db, audio_hz, late_s, mode, locator",
                f"many texts hold more than a message, as {words}: it may be one of these",
            )
        )
    pairs = pairs_of(texts)
    sender = next((k for k, name in found.names.items() if name == "sender"), None)
    order = ""
    if sender is not None:
        order = by_column(pairs, columns[sender].values)
        if order == "neither":
            found.doubts.append(
                Doubt("sender, addressee", "the column of the sender and the messages contradict each other")
            )
            order = ""
    order = order or by_locators(pairs) or by_words(texts)
    if not any(pairs.second):
        return
    if order == "first":
        found.patterns = SENDER_FIRST
    elif not order and about:
        found.doubts.append(
            Doubt(
                ", ".join(about),
                "nothing in the messages tells which of two call signs is the sender's; taken is common practice: the"
                " station called first, the caller second",
            )
        )


def _strange_words(text: str) -> list[str]:
    """Return the words of a text that rather belong to a log than to a message."""
    return [word for word in text.split() if _STRANGE.fullmatch(word) and word not in ("73", "88")]

"""Messages and call signs: which call is the sender's, by evidence from what the lines say."""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from dataclasses import dataclass, field
from functools import cache

from logtool.records.recipes.loading import DEFAULT_MESSAGES
from logtool.records.recipes.patterns import template_pattern
from logtool.suggest.doubts import Doubt
from logtool.suggest.hints import meanings_of
from logtool.suggest.tables import FEW_LOCATORS, Column, begins_with_numbers, holds_call
from logtool.suggest.values import CALLING_WORDS, EMPTY_WORDS, given, is_call, is_locator, quoted

SENDER_FIRST = (
    "{sender} [TO] CQ|QRZ|ALL [{locator}] ...",
    "CQ|QRZ [{word}] [DE] {sender} [{locator}] ...",
    "{sender} [TO] {addressee} [R] {locator} ...",
    "{sender} [TO] {addressee} {report_db} ...",
    "{sender} [TO] {addressee} ...",
)
_GOOD_SHARE = 0.8  # of the messages with call signs have to be of the usual form
_LEAST_VOTES = 3
_CLEARLY = 4
_STRANGE = re.compile(r"[+-]?\d+[.,]\d+|\d{3,}|[A-Za-z_]+=.*|\d+:\d\d.*|[;|].*|.*[;|]|.*\"")
_STUCK_LOCATOR = re.compile(r"(?:^| )[A-R]{2}[0-9]{2}(?:[A-Xa-x]{2})?[,.;:!?)]")
_STRANGE_SHARE = 0.3
_WORDS = re.compile(r"\s+")


@dataclass
class Calls:
    """What was found of call signs, locators and messages."""

    names: dict[int, str] = field(default_factory=dict)
    values: dict[str, dict[str, str]] = field(default_factory=dict)
    message: bool = False
    patterns: tuple[str, ...] = ()  # other than the usual ones
    doubts: list[Doubt] = field(default_factory=list)
    notes: dict[int, str] = field(default_factory=dict)


@dataclass
class _Pairs:
    """For each row two call signs in the order in which they stand (empty where there is none), and a locator."""

    first: list[str]
    second: list[str]
    locator: list[str]
    caller: list[str]  # of general calls


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
    _name_locators(
        found,
        columns,
        [
            k
            for k, kind in kinds.items()
            if k != text
            and (
                (kind == "locator" and _may_be(columns[k], "locator"))
                or (kind == "word" and _named_locators(columns[k]))
            )
        ],
    )
    _name_calls(found, columns, [k for k, kind in kinds.items() if kind == "call" and k != text], text)
    if text is not None and any(map(holds_call, columns[text].values)):
        _settle_message(found, columns, columns[text].values)
    return found


def _may_be(column: Column, name: str) -> bool:
    """Return whether a column's own name does not speak against a meaning."""
    means = meanings_of(column.hint)
    return not means or name in means


def _named_locators(column: Column) -> bool:
    return "locator" in meanings_of(column.hint) and all(map(is_locator, given(column.values)))


def _name_locators(found: Calls, columns: list[Column], candidates: list[int]) -> None:
    varying = [k for k in candidates if len(set(given(columns[k].values))) > 1]
    for k in candidates:
        if k not in varying and "locator" not in meanings_of(columns[k].hint):
            found.notes[k] = "always the same locator: the receiver's place, not the sender's"
    named = [k for k in varying if "locator" in meanings_of(columns[k].hint)]
    if len(varying) == 1:
        found.names[varying[0]] = "locator"
        if not named and len(set(given(columns[varying[0]].values))) <= FEW_LOCATORS:
            found.doubts.append(
                Doubt(
                    "locator, mode",
                    f"{columns[varying[0]].label} ({quoted(columns[varying[0]].values)}) is taken as the sender's locator; it could be the mode",
                )
            )
    elif len(named) == 1:
        found.names[named[0]] = "locator"
    elif varying:
        labels = ", ".join(columns[k].label for k in varying)
        found.doubts.append(Doubt("locator, mode", f"NOT SURE which is the sender's: {labels}; none is read"))


def _name_calls(found: Calls, columns: list[Column], candidates: list[int], text: int | None) -> None:
    varying = [k for k in candidates if len(set(given(columns[k].values))) > 1]
    for k in candidates:
        if k not in varying:
            found.notes[k] = "always the same call sign: the receiver's own, not the sender's"
            if len(candidates) == 1 and text is None:
                found.doubts.append(
                    Doubt(
                        "sender",
                        f"{columns[k].label} is always {quoted(columns[k].values, 1)}, so not read as the sender",
                    )
                )
    for k in varying:
        for word in CALLING_WORDS:
            if word in columns[k].values:
                found.values.setdefault("addressee", {})[word] = ""
    calling = [k for k in varying if set(columns[k].values) & CALLING_WORDS]
    by_name = {
        name: [k for k in varying if name in meanings_of(columns[k].hint)] for name in ("sender", "addressee")
    }
    if len(by_name["addressee"]) == 1 and len(varying) <= 2:
        found.names[by_name["addressee"][0]] = "addressee"
        rest = [k for k in varying if k not in by_name["addressee"]]
        if len(rest) == 1:
            found.names[rest[0]] = "sender"
    elif len(varying) == 1:
        if calling:
            found.names[varying[0]] = "addressee"
            found.doubts.append(
                Doubt(
                    "sender",
                    f"{columns[varying[0]].label} holds {quoted(sorted(CALLING_WORDS & set(columns[varying[0]].values)))}, so it is read as the addressee; no column is the sender's",
                )
            )
        else:
            found.names[varying[0]] = "sender"
            if columns[varying[0]].hint.strip() and not by_name["sender"] and text is None:
                found.doubts.append(
                    Doubt(
                        "sender",
                        f"{columns[varying[0]].label} is taken as the sender, its name does not say so",
                    )
                )
    elif len(by_name["sender"]) == 1 and len(varying) == 2:
        found.names[by_name["sender"][0]] = "sender"
        other = next(k for k in varying if k not in by_name["sender"])
        found.names[other] = "addressee"
        if other not in calling:
            found.doubts.append(
                Doubt(
                    "addressee",
                    f"{columns[other].label} is taken as the addressee because the other column is the sender",
                )
            )
    elif len(varying) == 2:
        _order_of_two(found, columns, varying, calling)
    elif varying:
        labels = ", ".join(columns[k].label for k in varying)
        found.doubts.append(
            Doubt("sender, addressee", f"NOT SURE which columns are meant: {labels}; none is read")
        )
    if "addressee" not in found.names.values():
        found.values.pop("addressee", None)


def _order_of_two(found: Calls, columns: list[Column], pair: list[int], calling: list[int]) -> None:
    if len(calling) == 1:
        found.names[calling[0]] = "addressee"
        found.names[next(k for k in pair if k not in calling)] = "sender"
        return
    empty = [k for k in pair if any(not v or v in EMPTY_WORDS for v in columns[k].values)]
    locator = next((k for k, name in found.names.items() if name == "locator"), None)
    if locator is not None:
        verdict = _by_locators(
            _Pairs(columns[pair[0]].values, columns[pair[1]].values, columns[locator].values, [])
        )
        if verdict:
            sender = pair[0] if verdict == "first" else pair[1]
            found.names[sender] = "sender"
            found.names[pair[0] if sender == pair[1] else pair[1]] = "addressee"
            return
    first, second = pair
    labels = f"{columns[first].label} and {columns[second].label}"
    if len(empty) == 1:
        found.names[empty[0]] = "addressee"
        found.names[next(k for k in pair if k not in empty)] = "sender"
        found.doubts.append(
            Doubt(
                "sender, addressee",
                f"NOT SURE which of {labels} is which: the one that may be empty is taken as the addressee",
            )
        )
    else:
        found.names[first], found.names[second] = "addressee", "sender"
        found.doubts.append(
            Doubt(
                "sender, addressee",
                f"NOT SURE which of {labels} is which: taken is the station called first, the caller second",
            )
        )


def _by_locators(pairs: _Pairs) -> str:
    """Return `first` or `second`: whose locator the lines give, or an empty text where they do not tell.

    A station keeps its locator, so the sender is the one that has the same locator in all its lines.
    """
    kept = {"first": 0, "second": 0}
    changed = {"first": 0, "second": 0}
    for name, calls in (("first", pairs.first), ("second", pairs.second)):
        seen: dict[str, Counter[str]] = defaultdict(Counter)
        for call, locator in zip(calls, pairs.locator, strict=True):
            if is_call(call) and is_locator(locator):
                seen[call.strip("<>")][locator[:4].upper()] += 1
        if pairs.caller:
            for call, locator in zip(pairs.caller, pairs.locator, strict=True):
                if call and is_locator(locator):
                    seen[call.strip("<>")][locator[:4].upper()] += 1
        for locators in seen.values():
            if sum(locators.values()) > 1:
                kept[name] += sum(locators.values()) - 1 if len(locators) == 1 else 0
                changed[name] += sum(locators.values()) - 1 if len(locators) > 1 else 0
    good = {name for name in kept if kept[name] >= _LEAST_VOTES and changed[name] * _CLEARLY <= kept[name]}
    bad = {
        name for name in kept if changed[name] >= _LEAST_VOTES and kept[name] * _CLEARLY <= changed[name] * 2
    }
    for one, other in (("first", "second"), ("second", "first")):
        if one in good and other in bad:
            return one
    return ""


@cache
def _usual() -> tuple[re.Pattern[str], ...]:
    return tuple(re.compile(template_pattern(template)) for template in DEFAULT_MESSAGES)


def read_usually(text: str) -> dict[str, str]:
    """Return what the usual message patterns read out of a text; empty where none holds."""
    for pattern in _usual():
        match = pattern.fullmatch(text)
        if match:
            return {name: value for name, value in match.groupdict().items() if value}
    return {}


def _settle_message(found: Calls, columns: list[Column], texts: list[str]) -> None:
    found.message = True
    about = [name for name in ("sender", "addressee") if name not in found.names.values()]
    with_calls = [text for text in texts if holds_call(text)]
    odd = [text for text in with_calls if not read_usually(text)]
    if len(odd) > (1 - _GOOD_SHARE) * len(with_calls) and about:
        found.doubts.append(
            Doubt(", ".join([*about, "locator"]), f"{len(odd)} of {len(with_calls)} messages with call signs are not of the usual"
                  f" forms, as {quoted(odd)}; write their form into [message] patterns")
        )  # fmt: skip
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
            Doubt("snr_db, audio_hz, late_s, dial_hz", f"some texts begin with a number, as {quoted(t for t in texts if t[:1] in '+-0123456789')}:"
                  " a column may be missing in some lines")
        )  # fmt: skip
    if len(strange) > _STRANGE_SHARE * len(with_calls):
        words = quoted(word for text in strange for word in _strange_words(text))
        found.doubts.append(
            Doubt(
                "snr_db, audio_hz, late_s, mode, locator",
                f"many texts hold more than a message, as {words}: it may be one of these",
            )
        )
    pairs = _pairs_of(texts)
    sender = next((k for k, name in found.names.items() if name == "sender"), None)
    order = ""
    if sender is not None:
        order = _by_column(pairs, columns[sender].values)
        if order == "neither":
            found.doubts.append(
                Doubt("sender, addressee", "the column of the sender and the messages contradict each other")
            )
            order = ""
    order = order or _by_locators(pairs) or _by_words(texts)
    if not any(pairs.second):
        return
    if order == "first":
        found.patterns = SENDER_FIRST
    elif not order and about:
        found.doubts.append(
            Doubt(", ".join(about), "nothing in the messages tells which of two call signs is the sender's; taken is common practice:"
                  " the station called first, the caller second")
        )  # fmt: skip


def _strange_words(text: str) -> list[str]:
    """Return the words of a text that rather belong to a log than to a message."""
    return [word for word in text.split() if _STRANGE.fullmatch(word) and word not in ("73", "88")]


def _pairs_of(texts: list[str]) -> _Pairs:
    pairs = _Pairs([], [], [], [])
    for text in texts:
        words = [word for word in _WORDS.split(text.strip()) if word]
        general = bool(words) and words[0] in CALLING_WORDS
        calls = [word for word in words if is_call(word) and not is_locator(word)][:2]
        locators = [word for word in words if is_locator(word)]
        two = len(calls) == 2 and not general
        pairs.first.append(calls[0] if two else "")
        pairs.second.append(calls[1] if two else "")
        pairs.caller.append(calls[0] if general and calls else "")
        pairs.locator.append(locators[0] if locators else "")
    return pairs


def _by_column(pairs: _Pairs, senders: list[str]) -> str:
    votes = Counter(
        "first" if sender == first else "second" if sender == second else "neither"
        for sender, first, second in zip(senders, pairs.first, pairs.second, strict=True)
        if first and sender
    )
    if not votes:
        return ""
    verdict, times = votes.most_common(1)[0]
    return verdict if times >= _GOOD_SHARE * sum(votes.values()) else ""


def _by_words(texts: list[str]) -> str:
    """Return the order by `DE` (from) or `TO` between two call signs, or by a general call that comes second."""
    votes: Counter[str] = Counter()
    for text in texts:
        words = text.split()
        if len(words) > 2 and is_call(words[0]) and is_call(words[2]):
            votes["second"] += words[1] in ("DE", "de")
            votes["first"] += words[1] in ("TO", "to")
        elif len(words) > 1 and is_call(words[0]) and words[1] in ("CQ", "QRZ"):
            votes["first"] += 1
    verdict, times = votes.most_common(1)[0] if votes else ("", 0)
    return verdict if times >= _LEAST_VOTES and times >= _CLEARLY * (sum(votes.values()) - times) else ""

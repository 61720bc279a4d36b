"""Which of two call signs is the sender's: by locators, by words, by another column."""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from dataclasses import dataclass
from functools import cache

from logtool.records.recipes.loading import DEFAULT_MESSAGES
from logtool.records.recipes.patterns import template_pattern
from logtool.suggest.values import CALLING_WORDS, is_call, is_locator

SENDER_FIRST = (
    "{sender} [TO] CQ|QRZ|ALL [{locator}] ...",
    "CQ|QRZ [{word}] [DE] {sender} [{locator}] ...",
    "{sender} [TO] {addressee} [R] {locator} ...",
    "{sender} [TO] {addressee} {report_db} ...",
    "{sender} [TO] {addressee} ...",
)


GOOD_SHARE = 0.8  # of the messages with call signs have to be of the usual form


_LEAST_VOTES = 3


_CLEARLY = 4


_WORDS = re.compile(r"\s+")


@dataclass
class Pairs:
    """For each row two call signs in the order in which they stand (empty where there is none), and a locator."""

    first: list[str]
    second: list[str]
    locator: list[str]
    caller: list[str]  # of general calls


def by_locators(pairs: Pairs) -> str:
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


def pairs_of(texts: list[str]) -> Pairs:
    pairs = Pairs([], [], [], [])
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


def by_column(pairs: Pairs, senders: list[str]) -> str:
    votes = Counter(
        "first" if sender == first else "second" if sender == second else "neither"
        for sender, first, second in zip(senders, pairs.first, pairs.second, strict=True)
        if first and sender
    )
    if not votes:
        return ""
    verdict, times = votes.most_common(1)[0]
    return verdict if times >= GOOD_SHARE * sum(votes.values()) else ""


def by_words(texts: list[str]) -> str:
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

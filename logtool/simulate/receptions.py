"""Heard lines: the receptions, those that break the layout, and the false decodes."""

from __future__ import annotations

import numpy as np

from logtool.simulate.cast import CALLS, Cast, call_numbers, call_sign, random_locators
from logtool.simulate.laws import US_PER_S, IntArray
from logtool.simulate.receiving import JITTER_S, Received, label_and_late
from logtool.simulate.scenario import Scenario, ScenarioError
from logtool.simulate.sending import Sent
from logtool.simulate.streams import stream
from logtool.simulate.timeline import Timeline
from logtool.simulate.times import HOUR_US, slots_of, written_times
from logtool.simulate.writing import BAD, FALSE, HEARD, Lines

FALSE_SURE_MOST = 0.5
FALSE_DB = 4  # false decodes have an SNR in so many dB from the lowest that is written
PER_THOUSAND = 1000.0
_TIME, _KIND, _DIAL, _AUDIO, _SNR, _SENDER, _LOCATOR, _TEXT = 0, 1, 3, 4, 5, 8, 10, 12
_CUT_AFTER = 5
# The reason for which a damaged line is set aside, the field, and what takes its place.
_DAMAGES = (
    ("bad-kind", _KIND, "herd"),
    ("missing-dial_hz", _DIAL, ""),
    ("bad-audio_hz", _AUDIO, "1e3"),
    ("bad-snr_db", _SNR, "+3"),
    ("range-snr_db", _SNR, "-99"),
    ("bad-locator", _LOCATOR, "ZZ99"),
    ("not-utf8", _SENDER, "Q\udcff"),
    ("control-character", _TEXT, "\x00"),
    ("too-many-fields", _TEXT, "TNX\t73"),
    ("bad-time", _TIME, "2026-02-31T04:00:00Z"),
    ("too-few-fields", _CUT_AFTER, None),
)


def add_heard(
    lines: Lines,
    scenario: Scenario,
    timeline: Timeline,
    cast: Cast,
    sent: Sent,
    got: Received,
    which: int,
    seed: int,
) -> None:
    """Add one receiver's receptions, and beside some of them a line that breaks the layout."""
    given, air = timeline.receiver, scenario.air
    heard = np.flatnonzero(got.heard)
    calls = cast.call
    ends = _calling(cast)
    tails = [
        f"{ends[one]}sure={sure:.2f}"
        if to < 0
        else f"{calls[one]}\t{calls[to]}\t\t\t{calls[to]} DE {calls[one]} {report:+d}\t"
        f"sure={sure:.2f}; report_db={report}"
        for one, to, report, sure in zip(
            *(values[heard].tolist() for values in (sent.sender, sent.addressee, sent.report_db, got.sure)),
            strict=True,
        )
    ]
    head, mode = f"\theard\t{given.name}\t{air.dial_hz}\t", air.mode
    audio_hz, late_s = np.round(got.audio_hz[heard], 1) + 0.0, np.round(got.late_s[heard], 2) + 0.0
    texts = [
        f"{time}{head}{hz:.1f}\t{db}\t{late:.2f}\t{mode}\t{tail}"
        for time, hz, db, late, tail in zip(
            written_times(got.label_us[heard]), audio_hz.tolist(), got.snr_db[heard].tolist(), late_s.tolist(), tails,
            strict=True,
        )
    ]  # fmt: skip
    lines.add(texts, sent.at_us[heard], order=HEARD, receiver=which, place=2 * heard)
    draws = stream(seed, "bad lines", which).random((len(got.heard), 2))[heard]
    hit = np.flatnonzero(draws[:, 0] < given.bad_per_thousand / PER_THOUSAND)
    ways = (draws[hit, 1] * len(_DAMAGES)).astype(int).tolist()
    lines.add(
        [_damaged(texts[i], way) for i, way in zip(hit.tolist(), ways, strict=True)], sent.at_us[heard[hit]],
        order=HEARD, receiver=which, place=2 * heard[hit] + 1, mark=BAD, notes=[_DAMAGES[way][0] for way in ways],
    )  # fmt: skip


def _calling(cast: Cast) -> list[str]:
    """Each sender's fields from `sender` on when it calls everybody, up to `more`."""
    ends = []
    for i, call in enumerate(cast.call):
        locator = cast.sent_locator[i] if cast.with_locator[i] else ""
        power = f"{cast.power_dbm[i]:g}" if cast.with_power[i] else ""
        text = " ".join(part for part in ("CQ DE", call, locator, power) if part)
        ends.append(f"{call}\t\t{locator}\t{power}\t{text}\t")
    return ends


def _damaged(text: str, way: int) -> str:
    _, place, put = _DAMAGES[way]
    fields = text.split("\t")
    if put is None:
        return "\t".join(fields[:place])
    fields[place] = put
    return "\t".join(fields)


def add_false(lines: Lines, scenario: Scenario, timelines: tuple[Timeline, ...], seed: int) -> None:
    """Add false decodes: a call sign that is nobody's, a locator anywhere, and a low sureness.

    They are drawn for whole nights, and those of times in which a receiver did not listen left out.
    """
    slot_us = round(scenario.nights.slot_s * US_PER_S)
    numbers, used = call_numbers(seed), 0
    for which, timeline in enumerate(timelines):
        for number, night in enumerate(timeline.nights):
            dice = stream(seed, "false decodes", which, number)
            slots = slots_of(night, slot_us)
            hours = (night.end_us - night.start_us) / HOUR_US
            many = int(dice.poisson(timeline.receiver.false_per_hour * hours)) if len(slots) else 0
            used += many
            if used > CALLS - scenario.senders.number:
                raise ScenarioError(
                    "[[receiver]]: there are more false decodes than call signs; lower `false_per_hour`"
                )
            at_us = slots[(dice.random(many) * len(slots)).astype(np.int64)]
            calls = [call_sign(one) for one in numbers[CALLS - used : CALLS - used + many]]
            texts = _false_texts(scenario, timeline, at_us, calls, dice)
            kept = np.flatnonzero(timeline.listens(at_us, at_us + slot_us))
            place = len(timelines) * CALLS * 2 + kept  # after the receptions of the same slot
            lines.add(
                [texts[i] for i in kept.tolist()], at_us[kept], order=HEARD, receiver=which, place=place, mark=FALSE,
                notes=[calls[i] for i in kept.tolist()],
            )  # fmt: skip


def _false_texts(
    scenario: Scenario, timeline: Timeline, at_us: IntArray, calls: list[str], dice: np.random.Generator
) -> list[str]:
    air, given, many = scenario.air, timeline.receiver, len(calls)
    locators = random_locators(many, dice)
    shares = dice.random((3, many))
    audio_hz = air.passband_low_hz + (air.passband_high_hz - air.passband_low_hz) * shares[0]
    snr_db = np.minimum(given.lowest_db + (FALSE_DB * shares[1]).astype(np.int64), given.highest_db)
    sure = FALSE_SURE_MOST * shares[2]
    slot_us = round(scenario.nights.slot_s * US_PER_S)
    late_s = air.late_most_s * (2.0 * dice.random(many) - 1.0) + JITTER_S
    label_us, _ = label_and_late(at_us, late_s, timeline.clock_s(at_us), slot_us)
    columns = (
        written_times(label_us),
        audio_hz.tolist(),
        snr_db.tolist(),
        late_s.tolist(),
        calls,
        locators,
        sure.tolist(),
    )
    return [
        f"{time}\theard\t{given.name}\t{air.dial_hz}\t{hz:.1f}\t{db}\t{late:.2f}\t{air.mode}\t{call}\t\t{place}\t\t"
        f"CQ DE {call} {place}\tsure={one:.2f}"
        for time, hz, db, late, call, place, one in zip(*columns, strict=True)
    ]

"""Time zones: the offsets of the IANA data, the hour that comes twice and the one that never comes."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta
from random import Random
from zoneinfo import ZoneInfo, available_timezones

import numpy as np
import pytest

from logtool.records.recipes.zones import both_utc_us, transitions
from tests.recipes.comparing import compare, engine_lines, in_blocks_of, recipe, rule

EPOCH = datetime(1970, 1, 1)
MICROSECOND = timedelta(microseconds=1)
# Rules of all sorts: half hours, half an hour of summer time, none, changes of the date line, months of fasting.
ALWAYS = [
    "UTC", "Europe/Berlin", "America/St_Johns", "Australia/Lord_Howe", "Asia/Kathmandu", "Pacific/Apia",
    "Africa/Casablanca", "Antarctica/Troll", "America/Recife", "America/Caracas", "Asia/Pyongyang", "Africa/Monrovia",
]  # fmt: skip
ZONES = [*ALWAYS, *Random(19).sample(sorted(available_timezones() - set(ALWAYS)), 25)]
HOURS_PER_YEAR = 8766


def offset_s(zone: ZoneInfo, at_s: int) -> float:
    offset = datetime.fromtimestamp(at_s, zone).utcoffset()
    assert offset is not None
    return offset.total_seconds()


@pytest.mark.parametrize("name", ZONES)
def test_local_times_near_every_change(name: str) -> None:
    zone = ZoneInfo(name)
    instants_s, _ = transitions(name)
    rng = Random(name)
    near = [int(s) + rng.choice([-7201, -3601, -3600, -1800, -1, 0, 1, 1799, 3600, 7200]) for s in instants_s]
    near += [rng.randrange(0, 4_102_444_800) for _ in range(40)]
    local = [
        (EPOCH + timedelta(seconds=s + round(offset_s(zone, s)))).replace(
            microsecond=rng.choice([0, 250_000])
        )
        for s in near
    ]
    local += [at + timedelta(minutes=rng.choice([-90, -30, 30, 90])) for at in local]
    earlier_us, later_us, skipped = both_utc_us(
        np.array([(at - EPOCH) // MICROSECOND for at in local], np.int64), name
    )
    for i, at in enumerate(local):
        first, second = (
            (at.replace(tzinfo=zone, fold=fold).astimezone(UTC).replace(tzinfo=None) - EPOCH) // MICROSECOND
            for fold in (0, 1)
        )
        assert (earlier_us[i], later_us[i]) == (first, max(first, second)), at
        assert skipped[i] == (first > second), at


@pytest.mark.parametrize("name", ZONES[:14])
def test_no_change_is_missed_in_any_hour(name: str) -> None:
    """All zones were so compared once, over all hours from 1970 to 2037; here some zones and years."""
    zone = ZoneInfo(name)
    instants_s, offsets_s = transitions(name)
    for year in Random(name).sample(range(68), 4):
        start_s = year * HOURS_PER_YEAR * 3600
        hours_s = np.arange(start_s, start_s + HOURS_PER_YEAR * 3600, 3600)
        wanted = [offset_s(zone, int(s)) for s in hours_s]
        assert offsets_s[np.searchsorted(instants_s, hours_s, side="right")].tolist() == wanted


def heard(zone: str) -> str:
    columns = ["time", "sender"]
    return recipe(rule(separator=",", columns=columns, time_form="%Y-%m-%d %H:%M"), f"zone = '{zone}'\n")


def utc_of(zone: str, day: str, times: list[str]) -> list[str]:
    found = compare(heard(zone), "\n".join(f"{day} {at},Q1A" for at in times))
    return [line.became[11:16] for line in found]


@pytest.mark.parametrize("size", [25, 1 << 20])
def test_the_hour_that_comes_twice_is_read_by_order(size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    times = ["01:59", "02:00", "02:30", "02:29", "02:59", "02:00", "02:10", "02:59", "03:00"]
    wanted = ["23:59", "00:00", "00:30", "00:29", "00:59", "01:00", "01:10", "01:59", "02:00"]
    assert utc_of("Europe/Berlin", "2026-10-25", times) == wanted
    data = "\n".join(f"2026-10-25 {at},Q1A" for at in times).encode()
    (note,) = engine_lines(heard("Europe/Berlin"), data)[1].notes()
    assert note == (
        "7 lines, first line 2, stand in an hour that the clock of Europe/Berlin had twice: read by their order"
    )


@pytest.mark.parametrize("size", [20, 1 << 20])
def test_the_order_is_that_of_all_lines(size: int, monkeypatch: pytest.MonkeyPatch) -> None:
    in_blocks_of(monkeypatch, size)
    rules = rule(separator=",", columns=["time", "sender"])
    text = recipe(rules, "zone = 'Europe/Berlin'\n")
    lines = "2026-10-25T01:30:00Z,Q1A\n2026-10-25 02:10:00,Q1B\n2026-10-25 02:45:00,Q1C\n"
    assert [line.became[11:16] for line in compare(text, lines)] == ["01:30", "01:10", "01:45"]


def test_half_an_hour_that_comes_twice() -> None:
    times = ["01:29", "01:31", "01:59", "01:30", "01:45", "02:00"]
    assert utc_of("Australia/Lord_Howe", "2026-04-05", times) == [
        "14:29", "14:31", "14:59", "15:00", "15:15", "15:30",
    ]  # fmt: skip


def test_the_hour_that_never_was_is_told() -> None:
    times = ["01:59", "02:00", "02:30", "03:00"]
    assert utc_of("Europe/Berlin", "2026-03-29", times) == ["00:59", "01:00", "01:30", "01:00"]
    data = "\n".join(f"2026-03-29 {at},Q1A" for at in times).encode()
    (note,) = engine_lines(heard("Europe/Berlin"), data)[1].notes()
    assert note.startswith("2 lines have a time that the clock of Europe/Berlin never showed")


def test_a_time_with_its_offset_is_not_shifted() -> None:
    text = recipe(rule(separator=",", columns=["time", "sender"]), "zone = 'Asia/Kathmandu'\n")
    lines = "2026-03-01T18:00:00Z,Q1A\n2026-03-01T18:00:00,Q1A\n2026-03-01T18:00:00+01:00,Q1A\n"
    assert [line.became[11:16] for line in compare(text, lines)] == ["18:00", "12:15", "17:00"]


def test_a_day_that_a_zone_left_out() -> None:
    """Apia went over the date line: there was no 30 December 2011."""
    assert utc_of("Pacific/Apia", "2011-12-29", ["23:59"]) == ["09:59"]
    assert utc_of("Pacific/Apia", "2011-12-31", ["00:00"]) == ["10:00"]

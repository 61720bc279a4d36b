"""A bare Polars script (streaming) with the columns of `reach`: no check, no ledger, no repeats, one receiver."""

from __future__ import annotations

import sys

import polars as pl

from logtool.records.layout import COLUMN_NAMES as NAMES
from tests.benchmarks.peer import COLUMNS, distances, print_rows


def _group(path: str) -> pl.DataFrame:
    types = {"snr_db": pl.Float64, "dial_hz": pl.Int64}
    log = pl.scan_csv(
        path,
        separator="\t",
        has_header=False,
        quote_char=None,
        comment_prefix="#",
        schema={name: types.get(name, pl.String) for name in NAMES},
    )
    heard = log.filter(pl.col("kind") == "heard").select(
        pl.col("time").str.to_datetime("%Y-%m-%dT%H:%M:%SZ"),
        "receiver",
        "dial_hz",
        "mode",
        "sender",
        "locator",
        "snr_db",
    )
    own = pl.col("locator").filter(pl.col("locator").str.len_bytes() >= 4)
    return (
        heard.with_columns(hour=pl.col("time").dt.truncate("1h"))
        .group_by("hour", "receiver", "dial_hz", "mode", "sender")
        .agg(
            n=pl.len(),
            t0=pl.col("time").min(),
            t1=pl.col("time").max(),
            snr=pl.col("snr_db").median(),
            times=pl.col("time").unique(),
            locators=own,
        )
        .collect(engine="streaming")
    )


def _placed(group: pl.DataFrame) -> pl.DataFrame:
    own = (
        group.select("hour", "sender", pl.col("locators").alias("locator"))
        .explode("locator")
        .drop_nulls("locator")
        .with_columns(pl.col("locator").str.to_uppercase())
        .group_by("hour", "sender", "locator")
        .len()
        .sort("len", pl.col("locator").str.len_bytes(), descending=True)
        .group_by("hour", "sender", maintain_order=True)
        .first()
        .select("hour", "sender", "locator")
        .sort("hour")
    )
    without = group.select("hour", "sender").join(own, on=["hour", "sender"], how="anti").sort("hour")
    lender = own.with_columns(lent=pl.col("hour"))
    early = without.join_asof(lender, on="hour", by="sender", strategy="backward")
    late = without.join_asof(lender, on="hour", by="sender", strategy="forward")
    both = early.with_columns(
        to_early=pl.col("hour") - pl.col("lent"),
        late_locator=late["locator"],
        to_late=late["lent"] - late["hour"],
    )
    use_late = pl.col("to_early").is_null() | (pl.col("to_late") < pl.col("to_early")).fill_null(False)
    lent = both.filter(pl.min_horizontal("to_early", "to_late") <= pl.duration(days=14)).select(
        "hour", "sender", locator=pl.when(use_late).then("late_locator").otherwise("locator")
    )
    return pl.concat([own, lent])


def _minutes(group: pl.DataFrame) -> pl.DataFrame:
    step = group.select(pl.col("times").explode().unique().sort().alias("t"))
    step = step.with_columns(u=pl.col("t").shift(-1)).filter(
        pl.col("u") - pl.col("t") <= pl.duration(minutes=10)
    )
    step = step.with_columns(hour=pl.col("t").dt.truncate("1h"), next=pl.col("u").dt.truncate("1h"))
    first = step.select("hour", a="t", b=pl.min_horizontal("u", pl.col("hour") + pl.duration(hours=1)))
    second = step.filter(pl.col("next") > pl.col("t")).select(hour="next", a="next", b="u")
    piece = pl.concat([first, second])
    return piece.group_by("hour").agg(minutes=(pl.col("b") - pl.col("a")).dt.total_microseconds().sum() / 6e7)


def main(path: str) -> None:
    """Print the rows of `reach` for one log."""
    group = _group(path)
    placed = _placed(group)
    locators = placed["locator"].unique().sort()
    distance_km, uncertainty_km = distances(locators.to_list())
    pair = pl.DataFrame({"locator": locators, "km": distance_km, "u": uncertainty_km})
    minute, day = pl.duration(minutes=1), pl.duration(days=1)
    where = ["receiver", "sender"]
    again = (
        (pl.col("t1") - pl.col("t0") >= minute)
        | ((pl.col("t1") - pl.col("p0") >= minute) & (pl.col("t0") - pl.col("p1") < day)).fill_null(False)
        | ((pl.col("n1") - pl.col("t0") >= minute) & (pl.col("n0") - pl.col("t1") < day)).fill_null(False)
    )
    joined = (
        group.drop("times", "locators")
        .sort("hour")
        .with_columns(
            p0=pl.col("t0").shift(1).over(where),
            p1=pl.col("t1").shift(1).over(where),
            n0=pl.col("t0").shift(-1).over(where),
            n1=pl.col("t1").shift(-1).over(where),
        )
        .with_columns(again=again)
        .join(placed, on=["hour", "sender"], how="left")
        .join(pair, on="locator", how="left")
        .join(_minutes(group), on="hour", how="left")
    )
    km, heard_again = pl.col("km"), pl.col("again")
    far = joined.filter(pl.col("again") & pl.col("km").is_not_null()).sort(
        ["km", "sender"], descending=[True, False]
    )
    farthest = far.group_by("hour", maintain_order=True).agg(farthest_sender=pl.col("sender").first())
    rows = (
        joined.group_by("hour")
        .agg(
            listening_min=pl.col("minutes").first(),
            receptions=pl.col("n").sum(),
            senders=pl.len(),
            heard_once=(~heard_again).sum(),
            senders_in_30=(1 - (1 - 30 / pl.col("minutes")) ** pl.col("n")).sum(),
            located=km.count(),
            squares=pl.col("locator").str.slice(0, 4).drop_nulls().n_unique(),
            nearest_km=km.filter(pl.col("u") <= km / 2).min(),
            median_km=km.quantile(0.5, "linear"),
            p90_km=km.quantile(0.9, "linear"),
            farthest_km=km.filter(heard_again).max(),
            farthest_once_km=km.filter(~heard_again).max(),
            snr_median_db=pl.col("snr").median(),
        )
        .join(farthest, on="hour", how="left")
        .sort("hour")
        .with_columns(hour=pl.col("hour").dt.strftime("%Y-%m-%dT%H:%M:%SZ"))
    )
    print_rows(rows.select(COLUMNS).rows())


if __name__ == "__main__":
    main(sys.argv[1])

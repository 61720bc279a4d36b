"""Equal lines within one step of a text's times: different messages, so each gets a number."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import duckdb


class Steps:
    """Numbers equal made lines within one step; holds what goes from one block to the next."""

    def __init__(self, connection: duckdb.DuckDBPyConnection) -> None:
        self._connection = connection
        self._time_us: int | None = None  # of the last step
        self._copies: dict[str, int] = {}  # how often each line came in it

    def tell_apart(self) -> None:
        """Add `nth=2` and so on to the details of equal lines of the table `made` within one run of one time.

        A text that is there twice has two runs of each time, so that its lines still count as repeated.
        """
        self._connection.execute("""
            CREATE OR REPLACE TEMP TABLE stepped AS
            SELECT i, out, time_us, sum(new) OVER (ORDER BY i ROWS UNBOUNDED PRECEDING) AS step FROM (
                SELECT i, out, time_us, (time_us IS DISTINCT FROM lag(time_us) OVER (ORDER BY i))::INTEGER AS new
                FROM made WHERE time_us IS NOT NULL AND NOT starts_with(out, '!'))""")
        # `fetchall`, since a result that is not read to its end would keep the connection busy.
        first = self._connection.execute("SELECT arg_min(time_us, i), max(step) FROM stepped").fetchall()[0]
        if first[1] is None:
            return
        goes_on = self._time_us == first[0]
        before = self._copies if goes_on else {}
        self._connection.execute("CREATE OR REPLACE TEMP TABLE before (out VARCHAR, n BIGINT)")
        self._connection.execute(
            "INSERT INTO before SELECT unnest(?::VARCHAR[]), unnest(?::BIGINT[])",
            [list(before), list(before.values())],
        )
        self._connection.execute("""
            CREATE OR REPLACE TEMP TABLE numbered AS
            SELECT stepped.i, stepped.out, time_us, step,
                row_number() OVER (PARTITION BY step, stepped.out ORDER BY stepped.i)
                    + CASE WHEN step = 1 THEN coalesce(before.n, 0) ELSE 0 END AS nth
            FROM stepped LEFT JOIN before ON stepped.out = before.out""")
        last = self._connection.execute(
            "SELECT out, max(nth), any_value(time_us) FROM numbered WHERE step = ? GROUP BY out", [first[1]]
        ).fetchall()
        kept = before if first[1] == 1 else {}
        self._time_us = last[0][2]
        self._copies = {**kept, **{out: nth for out, nth, _ in last}}
        self._connection.execute("""
            UPDATE made SET out = made.out || CASE WHEN ends_with(made.out, chr(9)) THEN '' ELSE '; ' END
                || 'nth=' || nth
            FROM numbered WHERE made.i = numbered.i AND nth > 1""")

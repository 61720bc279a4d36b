"""Logs with a known truth, to prove with what is estimated from logs; imports `places` only.

`simulate` makes whole logs from a scenario, `table` quick tables of receptions on two sides.
"""

from logtool.simulate.loading import load_scenario, scenario_of
from logtool.simulate.making import Simulated, simulate
from logtool.simulate.pairs import PairTable, Plan, table
from logtool.simulate.printing import default_scenario
from logtool.simulate.scenario import Scenario, ScenarioError

__all__ = [
    "PairTable",
    "Plan",
    "Scenario",
    "ScenarioError",
    "Simulated",
    "default_scenario",
    "load_scenario",
    "scenario_of",
    "simulate",
    "table",
]

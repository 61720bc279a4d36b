"""Long trials, run by hand: how true the verdicts are on invented data whose truth is known."""

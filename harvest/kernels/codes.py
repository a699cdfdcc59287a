"""Whole-number codes that kernels and their callers share."""

#: Seasons.
SHORT, ALL_YEAR = 0, 1
SEASON_CODES = {"short": SHORT, "all year": ALL_YEAR}

#: When a count happens: at the start of the year (before a short season), or after a short season.
BEFORE, AFTER = 0, 1
WHEN_CODES = {"before": BEFORE, "start": BEFORE, "after": AFTER}

#: What a rule has in a year: a count to be simulated, one that is on record, none.
SIMULATED, RECORDED, MISSING = 0, 1, 2

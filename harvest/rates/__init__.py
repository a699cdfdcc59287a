"""Rates, the hinge of the program: a table of draws, one row a state of nature that the evidence allows."""

from harvest.rates.draw import DRAWS, draw_rates
from harvest.rates.table import COLUMNS, Rates

__all__ = ["COLUMNS", "DRAWS", "Rates", "draw_rates"]

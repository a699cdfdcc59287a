"""From the legal take to all deaths that people cause, draw by draw: the one home of this formula."""

from __future__ import annotations

import numpy as np
import pandas as pd


def removals_factor(table: pd.DataFrame) -> np.ndarray:
    """Total removals per unit of legal take, without the other deaths: 1 + wounding + unreported; shape (draws,)."""
    return np.ascontiguousarray(1.0 + table["wounding"].to_numpy(float) + table["unreported"].to_numpy(float))


def total_removals(table: pd.DataFrame, legal: np.ndarray | float) -> np.ndarray:
    """Total removals that a legal take brings: legal × (1 + wounding + unreported) + other.

    Parameters
    ----------
    table : DataFrame
        Draws with the columns ``wounding``, ``unreported`` and ``other``.
    legal : ndarray or float
        Legal take in the record's unit: one number, or as broadcast against (draws,).
    """
    return np.asarray(legal * removals_factor(table) + table["other"].to_numpy(float))

"""Results that are kept by what they follow from: the record's digest, seed and settings."""

from __future__ import annotations

from collections import OrderedDict
from collections.abc import Callable, Hashable
from threading import Lock
from typing import Any, TypeVar

import streamlit as st

T = TypeVar("T")
#: Results kept at most: the oldest unused go.
MOST = 200


class Results:
    """Values by key, shared by all windows; the least recently used go when there are too many."""

    def __init__(self, most: int = MOST):
        self._most = most
        self._kept: OrderedDict[Hashable, Any] = OrderedDict()
        self._lock = Lock()

    def find(self, key: Hashable) -> Any:
        """The value, or None."""
        with self._lock:
            if key in self._kept:
                self._kept.move_to_end(key)
            return self._kept.get(key)

    def keep(self, key: Hashable, value: Any) -> None:
        """Keep a value."""
        with self._lock:
            self._kept[key] = value
            self._kept.move_to_end(key)
            while len(self._kept) > self._most:
                self._kept.popitem(last=False)

    def get(self, key: Hashable, make: Callable[[], T]) -> T:
        """The value, made where it is not there; two windows may both make it."""
        found: T | None = self.find(key)
        if found is None:
            found = make()
            self.keep(key, found)
        return found


@st.cache_resource(show_spinner=False)
def results() -> Results:
    """The results of this program's run."""
    return Results()

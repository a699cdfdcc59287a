"""Results are made once, and the least recently used go."""

from __future__ import annotations

import threading

from harvest.desk.results import Results


def test_a_result_is_made_once() -> None:
    kept, made = Results(), []

    def make() -> int:
        made.append(1)
        return 0

    assert [kept.get("a", make), kept.get("a", make)] == [0, 0]
    assert made == [1]
    assert (kept.find("a"), kept.find("b")) == (0, None)


def test_nothing_is_no_result() -> None:
    kept, made = Results(), []
    for _ in range(2):
        assert kept.get("a", lambda: made.append(1)) is None
    assert made == [1, 1]


def test_the_least_recently_used_go() -> None:
    kept = Results(most=2)
    kept.keep("a", 1)
    kept.keep("b", 2)
    assert kept.find("a") == 1
    kept.keep("c", 3)
    assert [kept.find(key) for key in "abc"] == [1, None, 3]
    kept.keep("a", 4)
    kept.keep("d", 5)
    assert [kept.find(key) for key in "acd"] == [4, None, 5]


def test_many_windows_keep_the_bound() -> None:
    kept = Results(most=5)

    def work(start: int) -> None:
        for number in range(start, start + 500):
            kept.get(number % 17, lambda n=number: n + 1)

    threads = [threading.Thread(target=work, args=(start,)) for start in range(4)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert sum(kept.find(key) is not None for key in range(17)) == 5

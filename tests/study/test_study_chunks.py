"""Chunks come back in their order; a failure or a wish to stop ends them."""

from concurrent.futures import ThreadPoolExecutor
from threading import Event

import pytest

from modalview.errors import CancelledError
from modalview.study.chunks import Errand, in_chunks


def squared(number):
    return number**2


def failing(number):
    if number == 2:
        raise ValueError("two")
    return number


@pytest.mark.parametrize("workers", [0, 3])
def test_results_are_in_order(workers):
    told = []
    with ThreadPoolExecutor(workers or 1) as executor:
        errand = Errand(
            "squares", progress=lambda _, share: told.append(share), executor=executor if workers else None
        )
        assert in_chunks(errand, squared, range(6)) == [0, 1, 4, 9, 16, 25]
    assert told[0] == 0
    assert told[-1] == 1
    assert told == sorted(told)


def test_a_failure_is_handed_on():
    with ThreadPoolExecutor(1) as executor, pytest.raises(ValueError, match="two"):
        in_chunks(Errand("", executor=executor), failing, range(5))


def test_what_was_not_begun_is_called_off():
    begun, go = [], Event()

    def waiting(number):
        begun.append(number)
        go.wait(5)

    def stop():
        return bool(begun)

    with ThreadPoolExecutor(1) as executor:
        with pytest.raises(CancelledError, match="Stopped by the user: slow"):
            in_chunks(Errand("slow", cancelled=stop, executor=executor), waiting, range(50))
        go.set()
    assert len(begun) < 50

"""Dense work on one BLAS thread."""

from contextlib import AbstractContextManager
from functools import cache

from threadpoolctl import ThreadpoolController  # type: ignore[import-untyped]


@cache
def _controller() -> ThreadpoolController:
    return ThreadpoolController()


def one_blas_thread() -> AbstractContextManager[object]:
    """Hold BLAS to one thread: a second one gains little and cost seventyfold on a busy machine (n = 520)."""
    # Looking the libraries up takes milliseconds, once; holding them 20 us.
    limit: AbstractContextManager[object] = _controller().limit(limits=1, user_api="blas")
    return limit

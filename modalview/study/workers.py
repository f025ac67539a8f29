"""Executors for work in chunks: processes of this machine, or a cluster."""

import multiprocessing
from collections.abc import Iterator
from concurrent.futures import Executor, ProcessPoolExecutor
from contextlib import contextmanager

from modalview.errors import InputError

MOST_WORKERS = 1024


@contextmanager
def local_workers(number: int) -> Iterator[Executor]:
    """Yield an executor of so many processes of this machine; they end with it.

    Raises
    ------
    InputError
        A number that is none.
    """
    if not 1 <= number <= MOST_WORKERS:
        raise InputError(f"workers: 1 to {MOST_WORKERS}; found {number}.")
    # A fresh interpreter: a fork of a process with threads may hold their locks for ever.
    with ProcessPoolExecutor(number, mp_context=multiprocessing.get_context("spawn")) as executor:
        yield executor


@contextmanager
def cluster_workers(address: str) -> Iterator[Executor]:
    """Yield an executor of a cluster's workers, which have the same version of this program installed.

    Parameters
    ----------
    address : str
        Of its scheduler, such as "tcp://10.0.0.5:8786".

    Raises
    ------
    InputError
        The optional library is not installed, or nothing answers at the address.
    """
    try:
        from distributed import Client  # noqa: PLC0415  (optional, and slow to load)
    except ImportError:
        raise InputError(
            'A cluster needs the library dask.distributed: pip install "keepclear[cluster]", here and on its '
            "workers."
        ) from None
    try:
        client = Client(address, timeout="10s")
    except (OSError, ValueError, TimeoutError) as error:
        raise InputError(f"No cluster answers at {address}: {error}") from None
    with client:
        executor: Executor = client.get_executor()
        yield executor

"""Work shared among processes, in order."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import ProcessPoolExecutor
from itertools import islice
from typing import Any, TypeAlias, TypeVar

from ..errors import ValuesError

Workers: TypeAlias = int | Callable[..., Iterable[Any]]
"""How many processes, or a callable like `map` (of a pool, a cluster ...)."""

T = TypeVar("T")
R = TypeVar("R")


def mapped(function: Callable[[T], R], tasks: Iterable[T], workers: Workers) -> Iterator[R]:
    """function(task) for every task, in the order of the tasks.

    Raises
    ------
    ValuesError
        When `workers` is neither a positive int nor callable.
    """
    if callable(workers):
        return iter(workers(function, tasks))
    if workers < 1:
        raise ValuesError(f"workers={workers!r}; give a number of processes, 1 or more, or a map")
    return map(function, tasks) if workers == 1 else _in_processes(function, tasks, workers)


def _in_processes(function: Callable[[T], R], tasks: Iterable[T], workers: int) -> Iterator[R]:
    """No more tasks are taken than the processes can hold, so that memory stays bounded."""
    waiting = iter(tasks)
    with ProcessPoolExecutor(workers) as pool:
        running = [pool.submit(function, t) for t in islice(waiting, 2 * workers)]
        while running:
            yield running.pop(0).result()
            running += [pool.submit(function, t) for t in islice(waiting, 1)]

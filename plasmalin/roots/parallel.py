"""Work shared among processes, in order; results come back through shared memory."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import Future, ProcessPoolExecutor
from itertools import islice
from multiprocessing import resource_tracker, shared_memory
from typing import Any, NamedTuple, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ..errors import ValuesError

Workers: TypeAlias = int | Callable[..., Iterable[Any]]
"""How many processes, or a callable like `map` (of a pool, a cluster ...)."""

Work: TypeAlias = Callable[[Any], list[NDArray[Any]]]
"""Takes a task, returns arrays; a function of a module, since processes must find it."""


def mapped(work: Work, tasks: Iterable[Any], workers: Workers) -> Iterator[list[NDArray[Any]]]:
    """work(task) for every task, in the order of the tasks.

    Raises
    ------
    ValuesError
        When `workers` is a number below 1.
    """
    if callable(workers):
        return iter(workers(work, tasks))
    if workers < 1:
        raise ValuesError(f"workers={workers!r}; give a number of processes, 1 or more, or a map")
    return map(work, tasks) if workers == 1 else _in_processes(work, tasks, workers)


class _Parcel(NamedTuple):
    """Arrays in one segment of shared memory."""

    name: str
    kinds: list[tuple[tuple[int, ...], str]]


def _in_processes(work: Work, tasks: Iterable[Any], workers: int) -> Iterator[list[NDArray[Any]]]:
    """Only as many tasks are under way as keep the processes busy, so that memory stays bounded."""
    resource_tracker.ensure_running()  # one for all processes, or each would start its own
    waiting, running = iter(tasks), list[Future[_Parcel]]()
    with ProcessPoolExecutor(workers) as pool:
        try:
            running += [pool.submit(_sent, work, t) for t in islice(waiting, 2 * workers)]
            while running:
                arrays = _received(running.pop(0).result())
                running += [pool.submit(_sent, work, t) for t in islice(waiting, 1)]
                yield arrays
        finally:
            for future in running:
                _received(future.result())


def _sent(work: Work, task: Any) -> _Parcel:
    arrays = work(task)
    segment = shared_memory.SharedMemory(create=True, size=max(1, sum(a.nbytes for a in arrays)))
    kinds = [(a.shape, a.dtype.str) for a in arrays]
    for view, array in zip(_views(segment, kinds), arrays, strict=True):
        view[...] = array
    segment.close()
    return _Parcel(segment.name, kinds)


def _received(parcel: _Parcel) -> list[NDArray[Any]]:
    segment = shared_memory.SharedMemory(parcel.name)
    arrays = [view.copy() for view in _views(segment, parcel.kinds)]
    segment.close()
    segment.unlink()
    return arrays


def _views(
    segment: shared_memory.SharedMemory, kinds: list[tuple[tuple[int, ...], str]]
) -> Iterator[NDArray[Any]]:
    place = 0
    for shape, kind in kinds:
        view: NDArray[Any] = np.ndarray(shape, kind, segment.buf, place)
        place += view.nbytes
        yield view

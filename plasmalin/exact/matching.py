"""Structure of a sparse square matrix: matchings and block-triangular form."""

from __future__ import annotations

from collections.abc import Iterable, Mapping


def maximum_matching(
    pairs: Iterable[tuple[int, int]],
    rows: int,
    columns: int,
    start: Mapping[int, int] | None = None,
) -> dict[int, int]:
    """A largest set of (row, column) pairs without a row or column in common, by augmenting paths.

    Parameters
    ----------
    pairs : iterable of (int, int)
        Where entries are.
    rows, columns : int
    start : mapping of int to int, optional
        A matching to begin with; its rows stay matched.

    Returns
    -------
    dict of int to int
        Column by row.
    """
    near: dict[int, list[int]] = {i: [] for i in range(rows)}
    for i, j in sorted(pairs):
        near[i].append(j)
    owner = {j: i for i, j in (start or {}).items()}
    for i in range(rows):
        if len(owner) < columns and i not in (start or {}):
            _augment(i, near, owner, set())
    return {i: j for j, i in owner.items()}


def _augment(i: int, near: Mapping[int, list[int]], owner: dict[int, int], seen: set[int]) -> bool:
    for j in near[i]:
        if j not in seen:
            seen.add(j)
            if j not in owner or _augment(owner[j], near, owner, seen):
                owner[j] = i
                return True
    return False


def diagonal_blocks(
    pairs: Iterable[tuple[int, int]], matching: Mapping[int, int]
) -> list[tuple[list[int], list[int]]]:
    """Rows and columns of the diagonal blocks of the block-triangular form.

    The blocks are the strongly connected components of the rows, row i pointing to the row whose matched
    column it uses (Tarjan 1972, SIAM J. Comput. 1, 146).
    """
    row_of = {j: i for i, j in matching.items()}
    graph: dict[int, list[int]] = {i: [] for i in matching}
    for i, j in pairs:
        graph[i].append(row_of[j])
    return [(sorted(c), sorted(matching[i] for i in c)) for c in _components(graph)]


def _components(graph: Mapping[int, list[int]]) -> list[list[int]]:
    index: dict[int, int] = {}
    low: dict[int, int] = {}
    stack: list[int] = []
    found: list[list[int]] = []

    def visit(v: int) -> None:
        index[v] = low[v] = len(index)
        stack.append(v)
        for w in graph[v]:
            if w not in index:
                visit(w)
                low[v] = min(low[v], low[w])
            elif w in stack:
                low[v] = min(low[v], index[w])
        if low[v] == index[v]:
            cut = stack.index(v)
            found.append(stack[cut:])
            del stack[cut:]

    for v in graph:
        if v not in index:
            visit(v)
    return found

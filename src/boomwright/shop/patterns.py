"""Packing pieces into bars with a proof: patterns of one bar, priced by linear programmes, chosen by an integer one.

Column generation as in common practice for cutting stock. A linear programme over patterns bounds the cost from
below; where whole numbers of the patterns found do not reach the bound, every pattern whose reduced cost leaves it a
chance is added: then the integer programme's answer is the best there is.
"""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations_with_replacement
from typing import Any

import numpy as np
from numpy.typing import NDArray

NODE_LIMIT, QUICK_NODES = 5_000, 3_000
"""Most branches of an integer programme over all patterns (cut short there: not proven) and of the first attempt."""

MOST_PATTERNS = 40_000
"""Most patterns handed to the last integer programme; beyond them the result is reported as not proven."""

EPSILON = 1e-7
Numbers = NDArray[Any]


@dataclass(frozen=True)
class Packing:
    """Bars as (room, indices of the pieces in it), the longest first; pieces without room; whether it is proven."""

    bars: tuple[tuple[int, tuple[int, ...]], ...]
    missing: tuple[int, ...]
    proven: bool


@dataclass(frozen=True)
class _Pattern:
    """What one bar of a kind takes of each length."""

    kind: int
    counts: tuple[int, ...]


@dataclass(frozen=True)
class _Task:
    """Distinct needs, the longest first, with how many are wanted; kinds of bars with room, how many, and cost.

    A bar costs 1 and a share for its room, so small that a bar less always counts for more.
    """

    needs: tuple[int, ...]
    wanted: tuple[int, ...]
    rooms: tuple[int, ...]
    most: tuple[int, ...]

    @property
    def costs(self) -> tuple[float, ...]:
        """The cost of one bar of each kind."""
        scale = 2.0 * sum(self.wanted) * max(self.rooms)
        return tuple(1.0 + room / scale for room in self.rooms)


def pack(needs: Sequence[int], rooms: Mapping[int, int]) -> Packing:
    """The fewest bars, then the least room in all, that take all pieces.

    needs  what each piece takes, the longest first, in whole units
    rooms  how many bars there are of each room, in the same unit

    Returns the packing. Where the bars cannot take all, `missing` holds what a simple packing of all bars leaves out.
    """
    task = _task(needs, rooms)
    if not needs or not task.rooms:
        return Packing((), tuple(range(len(needs))), True)
    simple = [found for found in (best_fit(needs, task), _fullest_first(task)) if found is not None]
    first = min(simple, key=lambda found: _cost(task, found), default=None)
    if first is not None and len(task.rooms) == 1 and len(first) <= _plain_bound(task):
        return _packing(needs, task, first, True)
    chosen, proven = _Search(task, simple).run(first)
    return _short(needs, task, proven) if chosen is None else _packing(needs, task, chosen, proven)


def _task(needs: Sequence[int], rooms: Mapping[int, int]) -> _Task:
    wanted = Counter(needs)
    distinct = tuple(sorted(wanted, reverse=True))
    kinds = tuple(
        sorted((room for room, count in rooms.items() if count > 0 and room >= min(needs, default=0)), reverse=True)
    )
    return _Task(distinct, tuple(wanted[n] for n in distinct), kinds, tuple(rooms[k] for k in kinds))


def _plain_bound(task: _Task) -> int:
    """No packing uses fewer bars than the pieces' total asks for."""
    return math.ceil(sum(n * w for n, w in zip(task.needs, task.wanted, strict=True)) / task.rooms[0])


def _cost(task: _Task, patterns: Sequence[_Pattern]) -> float:
    return sum(task.costs[p.kind] for p in patterns)


def best_fit(needs: Sequence[int], task: _Task) -> list[_Pattern] | None:
    """A simple packing: each piece, longest first, where it leaves least, else on a new bar, the longest left."""
    filled, left_out = _fill(needs, task)
    if left_out:
        return None
    counts = [Counter(needs[i] for i in members) for _, members in filled]
    return [
        _Pattern(kind, tuple(count[n] for n in task.needs)) for (kind, _), count in zip(filled, counts, strict=True)
    ]


def _fill(needs: Sequence[int], task: _Task) -> tuple[list[tuple[int, list[int]]], list[int]]:
    bars, free, left = list[tuple[int, list[int]]](), list[int](), list(task.most)
    missing = []
    for index, need in enumerate(needs):
        fitting = [(room - need, bar) for bar, room in enumerate(free) if room >= need]
        kind = next((k for k, room in enumerate(task.rooms) if left[k] and room >= need), None)
        if fitting:
            bar = min(fitting)[1]
        elif kind is not None:
            left[kind] -= 1
            bars.append((kind, []))
            free.append(task.rooms[kind])
            bar = len(bars) - 1
        else:
            missing.append(index)
            continue
        bars[bar][1].append(index)
        free[bar] -= need
    return bars, missing


def _fullest_first(task: _Task) -> list[_Pattern] | None:
    """A simple packing for many small pieces: each bar, longest kind first, as full as what is left allows."""
    patterns, left, bars = list[_Pattern](), list(task.wanted), list(task.most)
    while any(left):
        kind = next((k for k, count in enumerate(bars) if count), None)
        if kind is None:
            return None
        over = _Task(task.needs, tuple(left), task.rooms, task.most)
        counts = _Knapsack(over, np.array(task.needs, dtype=float), task.rooms[kind]).pattern()
        patterns.append(_Pattern(kind, counts))
        bars[kind] -= 1
        left = [have - taken for have, taken in zip(left, counts, strict=True)]
    return patterns


class _Search:
    """Patterns found so far, and the programmes over them."""

    def __init__(self, task: _Task, start: Sequence[Sequence[_Pattern]]) -> None:
        self.task = task
        alone = [
            _Pattern(k, tuple(int(i == j) for j in range(len(task.needs))))
            for k, room in enumerate(task.rooms)
            for i, need in enumerate(task.needs)
            if need <= room
        ]
        self.patterns = list(dict.fromkeys([*(pattern for packing in start for pattern in packing), *alone]))

    def run(self, chosen: list[_Pattern] | None) -> tuple[list[_Pattern] | None, bool]:
        """The cheapest choice of patterns (None = the bars cannot take all), and whether it is proven.

        chosen  the best choice already known, if any
        """
        bound, prices, rents, short = self._relax()
        if short:
            return None, True
        most = len(chosen) if chosen is not None else sum(self.task.wanted)
        for target in self._targets(most):
            if target < bound - EPSILON:
                continue
            if chosen is not None and target > _cost(self.task, chosen) - EPSILON:
                return chosen, True
            better, certain = self._choose(self.patterns, target, QUICK_NODES)
            if better is None:
                chances = self._chances(prices, rents, target - bound + EPSILON)
                if chances is None:
                    return chosen, False
                better, certain = self._choose(chances, target, NODE_LIMIT)
            if better is not None:
                return better, True
            if not certain:
                return chosen, False
        return chosen, True

    def _relax(self) -> tuple[float, Numbers, Numbers, bool]:
        """The linear bound, a price a length, a rent (0 or below) a kind, and whether pieces stay over."""
        from scipy.optimize import linprog

        task = self.task
        lengths, kinds = len(task.needs), len(task.rooms)
        penalty = 4.0 * sum(task.wanted)
        while True:
            columns = np.array([p.counts for p in self.patterns], dtype=float).T
            of_kind = np.array([[float(p.kind == k) for p in self.patterns] for k in range(kinds)])
            costs = np.array([task.costs[p.kind] for p in self.patterns] + [penalty] * lengths)
            cover = np.hstack([columns, np.eye(lengths)])
            limit = np.hstack([of_kind, np.zeros((kinds, lengths))])
            right = np.concatenate([-np.array(task.wanted, dtype=float), np.array(task.most, dtype=float)])
            result: Any = linprog(costs, A_ub=np.vstack([-cover, limit]), b_ub=right, method="highs")
            prices, rents = -result.ineqlin.marginals[:lengths], result.ineqlin.marginals[lengths:]
            fresh = [p for p in self._priced(prices, rents) if p not in self.patterns]
            if not fresh:
                over = float(result.x[len(self.patterns) :].sum())
                return float(result.fun), prices, rents, over > EPSILON
            self.patterns += fresh

    def _priced(self, prices: Numbers, rents: Numbers) -> Iterator[_Pattern]:
        """For each kind of bar the pattern of the highest price, if it is worth more than the bar."""
        for kind, room in enumerate(self.task.rooms):
            table = _Knapsack(self.task, prices, room)
            if table.best > self.task.costs[kind] - rents[kind] + EPSILON:
                yield _Pattern(kind, table.pattern())

    def _choose(self, patterns: Sequence[_Pattern], target: float, nodes: int) -> tuple[list[_Pattern] | None, bool]:
        """Whole numbers of these patterns that give all pieces within a cost; None = none do, when it is certain."""
        from scipy.optimize import LinearConstraint, milp

        task = self.task
        costs = np.array([task.costs[p.kind] for p in patterns])
        cover = np.array([p.counts for p in patterns]).T
        of_kind = np.array([[p.kind == k for p in patterns] for k in range(len(task.rooms))]).astype(float)
        # Any choice within the cost will do, so the programme has nothing else to minimise.
        result: Any = milp(
            np.zeros(len(patterns)),
            integrality=np.ones(len(patterns), dtype=np.int64),
            constraints=[
                LinearConstraint(cover, np.array(task.wanted), np.inf),
                LinearConstraint(of_kind, -np.inf, np.array(task.most)),
                LinearConstraint(costs[None, :], -np.inf, target + EPSILON),
            ],
            options={"node_limit": nodes},
        )
        if result.x is None:
            return None, result.status == 2
        times = np.rint(result.x).astype(int)
        return [p for p, n in zip(patterns, times, strict=True) for _ in range(n)], True

    def _targets(self, most: int) -> list[float]:
        """The costs that sets of up to so many bars can have, in order."""
        task, costs = self.task, []
        kinds = range(len(task.rooms))
        for count in range(1, min(sum(task.most), most) + 1):
            for chosen in combinations_with_replacement(kinds, count):
                if all(n <= task.most[k] for k, n in Counter(chosen).items()):
                    costs.append(sum(task.costs[k] for k in chosen))
        return sorted(set(costs))

    def _chances(self, prices: Numbers, rents: Numbers, gap: float) -> list[_Pattern] | None:
        """Every pattern whose reduced cost is at most `gap`: no choice that cheap holds any other; None = too many."""
        found = list[_Pattern]()
        for kind, room in enumerate(self.task.rooms):
            least = self.task.costs[kind] - rents[kind] - gap
            for counts in _Knapsack(self.task, prices, room).at_least(least):
                found.append(_Pattern(kind, counts))
                if len(found) > MOST_PATTERNS:
                    return None
        return found


class _Knapsack:
    """The highest total price that the lengths from each one on can give in any room, up to the whole bar."""

    def __init__(self, task: _Task, prices: Numbers, room: int) -> None:
        self._needs, self._wanted, self._room = task.needs, task.wanted, room
        self._prices = [float(p) for p in prices]
        table = [np.zeros(room + 1)]
        for need, wanted, price in zip(
            reversed(task.needs), reversed(task.wanted), reversed(self._prices), strict=True
        ):
            without = table[-1]
            best = without.copy()
            for times in range(1, min(wanted, room // need) + 1):
                taken = times * need
                np.maximum(best[taken:], without[: room + 1 - taken] + times * price, out=best[taken:])
            table.append(best)
        self._table = table[::-1]
        self.best = float(self._table[0][room])

    def pattern(self) -> tuple[int, ...]:
        """One pattern of the highest price."""
        counts, left = [], self._room
        for index, (need, wanted, price) in enumerate(zip(self._needs, self._wanted, self._prices, strict=True)):
            choices = range(min(wanted, left // need) + 1)
            worth = [times * price + float(self._table[index + 1][left - times * need]) for times in choices]
            counts.append(int(np.argmax(worth)))
            left -= counts[-1] * need
        return tuple(counts)

    def at_least(self, price: float) -> Iterator[tuple[int, ...]]:
        """Every pattern of at least this price, of no more pieces than are wanted."""
        yield from self._from(0, self._room, price)

    def _from(self, index: int, left: int, price: float) -> Iterator[tuple[int, ...]]:
        if self._table[index][left] < price:
            return
        if index == len(self._needs):
            yield ()
            return
        need = self._needs[index]
        for times in range(min(self._wanted[index], left // need), -1, -1):
            for rest in self._from(index + 1, left - times * need, price - times * self._prices[index]):
                yield (times, *rest)


def _packing(needs: Sequence[int], task: _Task, patterns: Sequence[_Pattern], proven: bool) -> Packing:
    """Pieces handed out to the patterns, the longest first; a pattern may offer more places than there are pieces."""
    left = {need: [i for i, n in enumerate(needs) if n == need] for need in task.needs}
    bars = []
    for pattern in sorted(patterns, key=lambda p: (p.kind, tuple(-n for n in p.counts))):
        members: list[int] = []
        for need, count in zip(task.needs, pattern.counts, strict=True):
            members += left[need][:count]
            left[need] = left[need][count:]
        if members:
            bars.append((task.rooms[pattern.kind], tuple(members)))
    return Packing(tuple(bars), (), proven)


def _short(needs: Sequence[int], task: _Task, proven: bool) -> Packing:
    filled, missing = _fill(needs, task)
    return Packing(tuple((task.rooms[kind], tuple(members)) for kind, members in filled), tuple(missing), proven)

"""A small model of a whole family of antennas, taken from the solver once and then evaluated in milliseconds.

Conductors of one kind differ in length only. Their current is written in a few shapes, found from solved cases of the
kind (isolated in plane waves, beside a neighbour, fed); a Galerkin reduction, so that what it leaves out enters the
impedance as a square. The solver's blocks between the shapes run smoothly with length and distance: they are tabulated
at Chebyshev nodes and interpolated. Nothing of the solver's physics is left out or done anew.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, wavenumber_rad_m
from boomwright.rf.basis import Mode, Piece, Planner
from boomwright.rf.clearance import thickest_m
from boomwright.rf.conductors import Conductor
from boomwright.rf.feed import excitation
from boomwright.rf.impedance import coupling_block, own_action, own_block
from boomwright.rf.pattern import pattern_vector
from boomwright.rf.solve import factored

FORWARD, BACKWARD = np.array([1.0, 0.0, 0.0]), np.array([-1.0, 0.0, 0.0])
SHAPES_TOLERANCE = 2e-4
"""Singular values below this share of the largest carry no shape of their own."""

NEIGHBOURS_WL = (0.06, 0.12, 0.25)
OWN_NODES = 6
FEWEST_NODES, NODES_PER_WIDTH = 3, 20.0


@dataclass(frozen=True)
class Kind:
    """Conductors that differ in length only.

    conductor      one of them, at x = 0
    low_m, high_m  the span of lengths
    nodes          lengths at which couplings are tabulated
    shift_m        x of its foremost axis ahead of its own place [m]: the spacing of a flat folded element
    """

    conductor: Conductor
    low_m: float
    high_m: float
    nodes: int
    shift_m: float = 0.0


@dataclass(frozen=True)
class Axis:
    """A coordinate of a table: Chebyshev polynomials over a span."""

    low: float
    high: float
    count: int

    @property
    def places(self) -> Floats:
        """The nodes, (count,)."""
        turns = (2.0 * np.arange(self.count) + 1.0) / (2.0 * self.count) * np.pi
        places: Floats = (self.low + self.high) / 2.0 - (self.high - self.low) / 2.0 * np.cos(turns)
        return places

    @cached_property
    def _cardinal(self) -> Floats:
        values = np.polynomial.chebyshev.chebvander(self._unit(self.places), self.count - 1)
        return np.asarray(np.linalg.inv(values), dtype=np.float64)

    def _unit(self, value: Floats) -> Floats:
        unit: Floats = (2.0 * value - self.low - self.high) / (self.high - self.low)
        return unit

    def weights(self, value: Floats) -> tuple[Floats, Floats]:
        """Shares of the nodes in the value at places (P,), and the shares of its slope; (P, count) each."""
        unit = np.clip(self._unit(value), -1.0, 1.0)
        plain = np.polynomial.chebyshev.chebvander(unit, self.count - 1)
        turn = np.arccos(np.clip(unit, -1.0 + 1e-12, 1.0 - 1e-12))[:, None]
        order = np.arange(self.count)
        slope = order * np.sin(order * turn) / np.sin(turn) * (2.0 / (self.high - self.low))
        return plain @ self._cardinal, slope @ self._cardinal


class Shapes:
    """One kind of conductor meshed at several lengths, and the few current shapes it is reduced to."""

    def __init__(self, kind: Kind, planner: Planner, frequencies_hz: tuple[float, ...], neighbour: Conductor) -> None:
        self.kind, self.planner = kind, planner
        middle = replace(kind.conductor, length_m=(kind.low_m + kind.high_m) / 2.0)
        self.template = planner.piece(middle)
        self.own_axis = Axis(kind.low_m, kind.high_m, OWN_NODES)
        self.axis = Axis(kind.low_m, kind.high_m, kind.nodes)
        self.basis = self._shapes(frequencies_hz, planner.piece(replace(neighbour, tag="D1")))

    def piece(self, length_m: float, at_m: float = 0.0) -> Piece:
        """A conductor of the kind, meshed like all others of it."""
        return self.planner.alike(self.template, replace(self.kind.conductor, length_m=length_m, at_m=at_m))

    def row(self, at_m: float, free_m: float) -> list[Piece]:
        """A conductor of every tabulated length, sampled for others whose axes are `free_m` away."""
        tag, radius_m = self.kind.conductor.tag, thickest_m(self.kind.conductor)
        planner = replace(
            self.planner, spacing_m={tag: free_m}, gap_m={tag: max(free_m - 2.0 * radius_m, 0.2 * free_m)}
        )
        lengths_m = [float(length_m) for length_m in self.axis.places]
        conductors = [replace(self.kind.conductor, length_m=length_m, at_m=at_m) for length_m in lengths_m]
        return [planner.alike(self.template, conductor) for conductor in conductors]

    def _shapes(self, frequencies_hz: tuple[float, ...], neighbour: Piece) -> Floats:
        """Orthonormal real shapes, (U, M), of the currents in solved cases."""
        found = []
        for frequency_hz in {frequencies_hz[0], frequencies_hz[-1]}:
            for length_m in (self.kind.low_m, (self.kind.low_m + self.kind.high_m) / 2.0, self.kind.high_m):
                piece = self.piece(length_m)
                right = self._drives(piece, neighbour, frequency_hz)
                own = own_block(piece, own_action(piece, self.planner.mode), frequency_hz, self.planner.mode)
                currents = factored(own).solve(np.asfortranarray(right))
                found.append(currents / np.abs(currents).max(axis=0))
        every = np.concatenate(found, axis=1)
        left, sizes, _ = np.linalg.svd(np.concatenate([every.real, every.imag], axis=1), full_matrices=False)
        kept: Floats = left[:, sizes > SHAPES_TOLERANCE * sizes[0]]
        return kept

    def _drives(self, piece: Piece, neighbour: Piece, frequency_hz: float) -> Complexes:
        """Right-hand sides (U, n): plane waves from ahead and behind, neighbours at both sides, the feed."""
        k, mode = wavenumber_rad_m(frequency_hz), self.planner.mode
        drives = [pattern_vector(piece, toward, k)[:, 1] for toward in (FORWARD, BACKWARD)]
        own = own_block(neighbour, own_action(neighbour, mode), frequency_hz, mode)
        current = factored(own).solve(pattern_vector(neighbour, FORWARD, k)[:, 1])
        for share in NEIGHBOURS_WL:
            for side_m in (-share * 2.0 * math.pi / k, self.kind.shift_m + share * 2.0 * math.pi / k):
                beside = self.planner.alike(neighbour, replace(neighbour.conductor, at_m=side_m))
                drives.append(coupling_block(piece, beside, frequency_hz, mode) @ current)
        if piece.conductor.gap_m > 0.0:
            drives.append(excitation((piece,)))
        return np.column_stack(drives)


class OwnTable:
    """A kind's own block, its feed and its field, by length."""

    def __init__(self, shapes: Shapes, frequencies_hz: tuple[float, ...]) -> None:
        self.axis, basis, mode = shapes.own_axis, shapes.basis, shapes.planner.mode
        blocks, fields = [], []
        for length_m in self.axis.places:
            piece = shapes.piece(float(length_m))
            action = own_action(piece, mode)
            blocks.append([basis.T @ own_block(piece, action, f, mode) @ basis for f in frequencies_hz])
            fields.append(
                [
                    [
                        basis.T @ pattern_vector(piece, toward, wavenumber_rad_m(f))[:, 1]
                        for toward in (FORWARD, BACKWARD)
                    ]
                    for f in frequencies_hz
                ]
            )
        self.blocks, self.fields = np.array(blocks), np.array(fields)
        self.feed = basis.T @ excitation((shapes.template,)).real if shapes.kind.conductor.gap_m > 0.0 else None


def _few(frequencies_hz: tuple[float, ...]) -> tuple[tuple[float, ...], Floats]:
    """Frequencies that couplings are filled at, and their shares in each one wanted: without their phase they are

    smooth, and a few nodes carry a band.
    """
    low, high = frequencies_hz[0], frequencies_hz[-1]
    count = FEWEST_NODES + math.ceil(NODES_PER_WIDTH * (high - low) / (high + low))
    if count >= len(frequencies_hz):
        return frequencies_hz, np.eye(len(frequencies_hz))
    axis = Axis(low, high, count)
    return tuple(float(value) for value in axis.places), axis.weights(np.array(frequencies_hz))[0]


class PairTable:
    """Blocks between two kinds, the first behind the second, by both lengths and by distance."""

    def __init__(
        self, behind: Shapes, ahead: Shapes, span_m: tuple[float, float], frequencies_hz: tuple[float, ...]
    ) -> None:
        self.shift_m = behind.kind.shift_m
        low, high = (math.log(value - self.shift_m) for value in span_m)
        k = np.array([wavenumber_rad_m(f) for f in frequencies_hz])
        count = 6 + math.ceil(3.0 * (high - low) + 1.2 * k[-1] * (span_m[1] - span_m[0]) / math.pi)
        self.axes = (behind.axis, ahead.axis, Axis(low, high, count))
        self.wavenumbers = k
        nodes, shares = _few(frequencies_hz)
        mode: Mode = behind.planner.mode
        shape = (behind.axis.count, ahead.axis.count, count, len(nodes), behind.basis.shape[1], ahead.basis.shape[1])
        values = np.empty(shape, dtype=np.complex128)
        for n, place in enumerate(self.axes[2].places):
            free_m = math.exp(place)
            rears, fronts = behind.row(0.0, free_m), ahead.row(free_m + self.shift_m, free_m)
            for f, frequency_hz in enumerate(nodes):
                turned = free_m * np.exp(1j * wavenumber_rad_m(frequency_hz) * free_m)
                for i, rear in enumerate(rears):
                    for j, front in enumerate(fronts):
                        block = coupling_block(rear, front, frequency_hz, mode)
                        values[i, j, n, f] = turned * (behind.basis.T @ block @ ahead.basis)
        values = np.ascontiguousarray(np.einsum("kf,ijnfab->ijnkab", shares, values))
        shape = values.shape
        self.shape = shape[3:]
        self.values = values.reshape(math.prod(shape[:3]), -1).view(np.float64)

    def blocks(self, lengths_m: tuple[Floats, Floats], distance_m: Floats) -> tuple[Complexes, ...]:
        """Blocks (P, F, M1, M2) of pairs (P,), and their slopes with the first length, the second, the distance."""
        free = distance_m - self.shift_m
        one, two = (axis.weights(value) for axis, value in zip(self.axes, lengths_m, strict=False))
        far = self.axes[2].weights(np.log(free))
        rows = []
        for a, b, c in ((one[0], two[0], far[0]), (one[1], two[0], far[0]), (one[0], two[1], far[0])):
            rows.append(np.einsum("pi,pj,pn->pijn", a, b, c).reshape(len(free), -1))
        rows.append(np.einsum("pi,pj,pn->pijn", one[0], two[0], far[1] / free[:, None]).reshape(len(free), -1))
        found = (np.concatenate(rows) @ self.values).view(np.complex128).reshape(4, len(free), *self.shape)
        turn = np.exp(-1j * np.outer(free, self.wavenumbers)) / free[:, None]
        found *= turn[None, :, :, None, None]
        found[3] -= (1j * self.wavenumbers[None, :, None, None] + 1.0 / free[:, None, None, None]) * found[0]
        return tuple(found)

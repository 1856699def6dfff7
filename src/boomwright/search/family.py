"""Antennas of one family (reflector, driven element, directors of given stock) solved by the reduced model."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from boomwright.rf.arrays import WAVE_IMPEDANCE_OHM, Complexes, Floats, wavenumber_rad_m
from boomwright.rf.basis import Planner
from boomwright.search.reduced import Kind, OwnTable, PairTable, Shapes

DECIBEL_PER_NEPER = 10.0 / math.log(10.0)
TABLE_MARGIN = 0.98
"""Tables reach this share nearer than the least distance asked for."""


@dataclass(frozen=True)
class Figures:
    """What an array does at the family's frequencies, with slopes to the lengths and the places of all conductors.

    impedance_ohm     (F,); its slopes (F, 2 N) [ohm/m]
    gain_dbi          toward +x (F,); slopes (F, 2 N) [dB/m]
    front_to_back_db  (F,); slopes (F, 2 N) [dB/m]
    """

    impedance_ohm: Complexes
    gain_dbi: Floats
    front_to_back_db: Floats
    impedance_slopes: Complexes
    gain_slopes: Floats
    front_to_back_slopes: Floats


class Family:
    """Arrays of a reflector, a driven element and directors, in this order along the boom.

    kinds           reflector, driven element, director
    planner         meshes them all
    span_m          least and most distance between two conductors, from the rear one's foremost axis
    frequencies_hz  at which arrays are solved
    relative        a family that differs in the driven element only: what they share is taken from it
    """

    def __init__(
        self,
        kinds: tuple[Kind, Kind, Kind],
        planner: Planner,
        span_m: tuple[float, float],
        frequencies_hz: tuple[float, ...],
        relative: Family | None = None,
    ) -> None:
        self.kinds, self.frequencies_hz = kinds, frequencies_hz
        self.wavenumbers = np.array([wavenumber_rad_m(f) for f in frequencies_hz])
        if relative is None:
            self.shapes = [Shapes(kind, planner, frequencies_hz, kinds[2].conductor) for kind in kinds]
            self.own = [OwnTable(each, frequencies_hz) for each in self.shapes]
        else:
            fed = Shapes(kinds[1], planner, frequencies_hz, kinds[2].conductor)
            self.shapes = [relative.shapes[0], fed, relative.shapes[2]]
            self.own = [relative.own[0], OwnTable(fed, frequencies_hz), relative.own[2]]
        self.sizes = [each.basis.shape[1] for each in self.shapes]
        self.pairs: dict[tuple[int, int], PairTable] = {}
        for behind, ahead in ((0, 1), (0, 2), (1, 2), (2, 2)):
            if relative is not None and 1 not in (behind, ahead):
                self.pairs[behind, ahead] = relative.pairs[behind, ahead]
                continue
            rear, front = self.shapes[behind], self.shapes[ahead]
            low_m = rear.kind.shift_m + TABLE_MARGIN * span_m[0]
            self.pairs[behind, ahead] = PairTable(rear, front, (low_m, span_m[1] + rear.kind.shift_m), frequencies_hz)

    def figures(self, lengths_m: Floats, places_m: Floats) -> Figures:
        """Solve an array: lengths and places (N,) of reflector, driven element, directors."""
        return _Solving(self, lengths_m, places_m).figures()


class _Solving:
    """One array of a family being solved."""

    def __init__(self, family: Family, lengths_m: Floats, places_m: Floats) -> None:
        self.family, self.lengths_m, self.places_m = family, lengths_m, places_m
        self.kinds = np.array([min(index, 2) for index in range(len(lengths_m))])
        sizes = [family.sizes[kind] for kind in self.kinds]
        starts = np.concatenate([[0], np.cumsum(sizes)])
        self.rows = [slice(int(a), int(b)) for a, b in pairwise(starts)]
        self.size = int(starts[-1])
        self._own()
        self._pairs()

    def _own(self) -> None:
        family, count = self.family, len(self.family.frequencies_hz)
        self.matrix = np.zeros((count, self.size, self.size), dtype=np.complex128)
        self.fields = np.zeros((2, count, self.size), dtype=np.complex128)
        self.feed = np.zeros(self.size)
        self.own_slopes: list[Complexes] = [self.matrix] * len(self.kinds)
        self.field_slopes: list[Complexes] = [self.matrix] * len(self.kinds)
        for kind, own in enumerate(family.own):
            members = np.flatnonzero(self.kinds == kind)
            plain, slope = own.axis.weights(self.lengths_m[members])
            wave = np.exp(1j * np.outer(self.places_m[members], family.wavenumbers))
            turns = np.stack([wave, wave.conj()], axis=1)[..., None]
            blocks, fields = np.tensordot(plain, own.blocks, axes=1), np.tensordot(plain, own.fields, axes=1)
            block_slopes, field_slopes = (np.tensordot(slope, part, axes=1) for part in (own.blocks, own.fields))
            for n, index in enumerate(members):
                rows = self.rows[index]
                self.matrix[:, rows, rows] = blocks[n]
                self.fields[:, :, rows] = turns[n] * fields[n].swapaxes(0, 1)
                self.own_slopes[index] = block_slopes[n]
                self.field_slopes[index] = turns[n] * field_slopes[n].swapaxes(0, 1)
                if own.feed is not None:
                    self.feed[rows] = own.feed

    def _pairs(self) -> None:
        first, second = np.triu_indices(len(self.kinds), 1)
        self.groups = []
        for (behind, ahead), table in self.family.pairs.items():
            chosen = (self.kinds[first] == behind) & (self.kinds[second] == ahead)
            a, b = first[chosen], second[chosen]
            if not len(a):
                continue
            found = table.blocks((self.lengths_m[a], self.lengths_m[b]), self.places_m[b] - self.places_m[a])
            self.groups.append((a, b, found))
            for n, (i, j) in enumerate(zip(a, b, strict=True)):
                self.matrix[:, self.rows[i], self.rows[j]] = found[0][n]
                self.matrix[:, self.rows[j], self.rows[i]] = found[0][n].swapaxes(1, 2)

    def figures(self) -> Figures:
        """Figures and slopes by the adjoint method."""
        right = np.stack([np.broadcast_to(self.feed, self.fields[0].shape), *self.fields], axis=-1)
        solved = np.asarray(np.linalg.solve(self.matrix, right.astype(np.complex128)), dtype=np.complex128)
        currents: Complexes = solved[:, :, 0]
        feed = currents @ self.feed
        moments = np.einsum("dfu,fu->df", self.fields, currents)
        by_matrix, by_field = self._matrix_slopes(solved), self._field_slopes(currents)
        feed_slopes = by_matrix[0]
        moment_slopes = by_field + by_matrix[1:]
        powers = np.abs(moments) ** 2
        levels = DECIBEL_PER_NEPER * 2.0 * (moments.conj()[:, :, None] * moment_slopes).real / powers[:, :, None]
        k = self.family.wavenumbers
        gain = 4.0 * np.pi * WAVE_IMPEDANCE_OHM * k**2 / (32.0 * np.pi**2) * powers[0] / (feed.real / 2.0)
        return Figures(
            1.0 / feed,
            10.0 * np.log10(np.maximum(gain, 1e-20)),
            10.0 * np.log10(powers[0] / powers[1]),
            -feed_slopes / (feed**2)[:, None],
            levels[0] - DECIBEL_PER_NEPER * feed_slopes.real / feed.real[:, None],
            levels[0] - levels[1],
        )

    def _matrix_slopes(self, solved: Complexes) -> Complexes:
        """-a^T dZ I for a the currents, the forward and the backward adjoint: (3, F, 2 N)."""
        count = len(self.kinds)
        total = np.zeros((3, solved.shape[0], 2 * count), dtype=np.complex128)
        for index, rows in enumerate(self.rows):
            here = solved[:, rows]
            total[:, :, index] -= np.einsum("fax,fab,fb->xf", here, self.own_slopes[index], here[:, :, 0])
        for a, b, found in self.groups:
            rear = np.stack([solved[:, self.rows[i]] for i in a])
            front = np.stack([solved[:, self.rows[j]] for j in b])
            for slope, onto in ((1, ((a, 1.0),)), (2, ((b, 1.0),)), (3, ((count + b, 1.0), (count + a, -1.0)))):
                onward = (found[slope] @ front[..., :1])[..., 0]
                back = (rear[..., None, :, 0] @ found[slope])[..., 0, :]
                change = np.einsum("pfax,pfa->xfp", rear, onward) + np.einsum("pfbx,pfb->xfp", front, back)
                for columns, sign in onto:
                    spread = np.zeros((len(a), 2 * count))
                    spread[np.arange(len(a)), columns] = sign
                    total -= change @ spread
        return total

    def _field_slopes(self, currents: Complexes) -> Complexes:
        """Change of the moments toward +x and -x by their own change of place and length: (2, F, 2 N)."""
        count = len(self.kinds)
        total = np.zeros((2, currents.shape[0], 2 * count), dtype=np.complex128)
        turn = 1j * self.family.wavenumbers
        for index, rows in enumerate(self.rows):
            here = currents[:, rows]
            total[:, :, index] = np.einsum("dfu,fu->df", self.field_slopes[index], here)
            moment = np.einsum("dfu,fu->df", self.fields[:, :, rows], here)
            total[0, :, count + index] = turn * moment[0]
            total[1, :, count + index] = -turn * moment[1]
        return total

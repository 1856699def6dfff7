"""Triangles and lines to pixels without a graphics card: parallel projection, depth buffer, hidden lines left out.

Everything is drawn on a grid twice as fine as the picture and averaged at the end. Screen axes: x right, y down,
depth growing toward the viewer.
"""

from __future__ import annotations

import struct
import zlib
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

FINE = 2
"""Samples a pixel, along each side; `picture` adds four of them up."""

BATCH = 2_000_000
"""Samples worked on at a time, so that memory stays small."""

DEPTH_STEPS = float(2**31)
LEVELS = 63
"""Steps of a colour channel in a file, each of four of 255: nobody sees them, and files are smaller."""

OWNER_BITS = 24
OWNERS = np.int64((1 << OWNER_BITS) - 1)
NOTHING = np.int64(-1)

Points = NDArray[np.float64]
Colours = NDArray[np.uint8]


@dataclass(frozen=True)
class Canvas:
    """Size of the picture in samples, and the depth that counts as farthest and nearest."""

    width: int
    height: int
    far: float
    near: float


class Sheet:
    """A picture in the making."""

    def __init__(self, canvas: Canvas, paper: tuple[int, int, int]) -> None:
        self.canvas = canvas
        self._keys = np.full(canvas.width * canvas.height, NOTHING)
        self._ink = np.zeros((canvas.height, canvas.width), dtype=np.uint16)
        self._inks: list[tuple[int, int, int]] = [paper]
        self._shades: Colours = np.array([paper], dtype=np.uint8)

    def fill(self, corners: Points, shades: Colours) -> None:
        """Triangles, once for all, with one colour each: corners in samples and depth, (m, 3, 3); colours (m, 3)."""
        self._shades = shades
        b, c = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
        size = b[:, 0] * c[:, 1] - b[:, 1] * c[:, 0]
        owner = np.flatnonzero(size != 0.0)
        spans = _Spans(corners[owner], size[owner], self.canvas)
        counts = np.cumsum(spans.last - spans.first)
        start = 0
        while start < len(counts):
            done = counts[start - 1] if start else 0
            stop = max(start + 1, int(np.searchsorted(counts, done + BATCH, side="right")))
            self._put(spans, slice(start, stop), owner)
            start = stop

    def _put(self, spans: _Spans, some: slice, owner: NDArray[np.int64]) -> None:
        canvas, first, count = self.canvas, spans.first[some], (spans.last - spans.first)[some]
        span = np.repeat(np.arange(len(first)), count)
        along = np.arange(len(span)) - np.repeat(np.cumsum(count) - count, count)
        depth = spans.depth[some][span] + spans.slope[some][span] * along
        depth = np.clip(depth, spans.least[some][span], spans.most[some][span])
        level = (depth - canvas.far) * ((DEPTH_STEPS - 1.0) / (canvas.near - canvas.far))
        key = (level.astype(np.int64) << OWNER_BITS) | owner[spans.triangle[some]][span]
        place = (spans.row[some] * canvas.width + first)[span] + along
        np.maximum.at(self._keys, place, key)

    def depth(self) -> NDArray[np.float32]:
        """Depth of what stands at every sample, minus infinity where there is nothing, (height, width)."""
        canvas = self.canvas
        found = np.full(canvas.width * canvas.height, -np.inf, dtype=np.float32)
        there = np.flatnonzero(self._keys >= 0)
        level = (self._keys[there] >> OWNER_BITS) * ((canvas.near - canvas.far) / (DEPTH_STEPS - 1.0))
        found[there] = level + canvas.far
        return found.reshape(canvas.height, canvas.width)

    def owner(self) -> NDArray[np.int64]:
        """Number of the triangle at every sample; means nothing where there is none, (height, width)."""
        return (self._keys & OWNERS).reshape(self.canvas.height, self.canvas.width)

    def draw(
        self, lines: Points, ink: tuple[int, int, int], thickness: int, behind: NDArray[np.float32] | None
    ) -> None:
        """Straight lines, (k, 2, 3), samples thick; `behind` hides what is farther off than it says, None = nothing."""
        low, high = lines[:, :, :2].min(axis=1), lines[:, :, :2].max(axis=1)
        lines = lines[np.all((high >= 0.0) & (low < (self.canvas.width, self.canvas.height)), axis=1)]
        steps = np.maximum(np.ceil(np.abs(lines[:, 1, :2] - lines[:, 0, :2]).max(axis=1)).astype(np.int64), 1) + 1
        line = np.repeat(np.arange(len(lines)), steps)
        along = np.arange(len(line)) - np.repeat(np.cumsum(steps) - steps, steps)
        share = (along / (steps - 1)[line])[:, None]
        points = lines[line, 0] * (1.0 - share) + lines[line, 1] * share
        column, row = np.floor(points[:, 0]).astype(np.int64), np.floor(points[:, 1]).astype(np.int64)
        inside = (column >= 0) & (column < self.canvas.width) & (row >= 0) & (row < self.canvas.height)
        column, row, depth = column[inside], row[inside], points[inside, 2]
        if behind is not None:
            seen = depth >= behind[row, column]
            column, row = column[seen], row[seen]
        self._inks.append(ink)
        width = range(-((thickness - 1) // 2), thickness // 2 + 1)
        for down in width:
            rows = np.clip(row + down, 0, self.canvas.height - 1)
            for right in width:
                columns = np.clip(column + right, 0, self.canvas.width - 1)
                self._ink[rows, columns] = len(self._inks) - 1

    def picture(self) -> Colours:
        """The picture, (height, width, 3), each pixel the mean of its samples."""
        shades = np.concatenate([self._shades, np.array(self._inks, dtype=np.uint8)]).astype(np.uint32)
        # Ten bits a channel hold the sum of four samples: all three are added in one number.
        packed = (shades[:, 0] << 20) | (shades[:, 1] << 10) | shades[:, 2]
        index = self.owner().ravel().astype(np.int32)
        index[self._keys < 0] = len(self._shades)
        inked = np.flatnonzero(self._ink)
        index[inked] = self._ink.ravel()[inked].astype(np.int32) + len(self._shades)
        fine = index.reshape(self.canvas.height, self.canvas.width)
        samples = [packed[fine[down::FINE, right::FINE]] for down in range(FINE) for right in range(FINE)]
        total = sum(samples[1:], samples[0])
        channels = [(((total >> shift) & 1023) + 2) >> 2 for shift in (20, 10, 0)]
        return np.stack(channels, axis=-1).astype(np.uint8)


class _Spans:
    """Triangles as rows of samples: row, first sample, the one after the last, depth at the first, slope."""

    def __init__(self, corners: Points, size: Points, canvas: Canvas) -> None:
        order = np.argsort(corners[:, :, 1], axis=1)
        (x0, y0), (x1, y1), (x2, y2) = (corners[np.arange(len(corners)), order[:, i], :2].T for i in range(3))
        start = np.clip(np.ceil(y0 - 0.5), 0, canvas.height).astype(np.int64)
        stop = np.clip(np.ceil(y2 - 0.5), 0, canvas.height).astype(np.int64)
        count = np.maximum(stop - start, 0)
        which = np.repeat(np.arange(len(corners)), count)
        row = np.arange(len(which)) - np.repeat(np.cumsum(count) - count, count) + start[which]
        y = row + 0.5
        long = x0[which] + _slope(x2 - x0, y2 - y0)[which] * (y - y0[which])
        above = x1[which] + _slope(x1 - x0, y1 - y0)[which] * (y - y1[which])
        below = x1[which] + _slope(x2 - x1, y2 - y1)[which] * (y - y1[which])
        bent = np.where(y < y1[which], above, below)
        first = np.clip(np.ceil(np.minimum(long, bent) - 0.5), 0, canvas.width).astype(np.int64)
        last = np.clip(np.ceil(np.maximum(long, bent) - 0.5), 0, canvas.width).astype(np.int64)
        some = last > first
        self.triangle, self.row, self.first, self.last = which[some], row[some], first[some], last[some]
        a, b, c = corners[:, 0], corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
        slope_x = (b[:, 2] * c[:, 1] - c[:, 2] * b[:, 1]) / size
        slope_y = (c[:, 2] * b[:, 0] - b[:, 2] * c[:, 0]) / size
        t = self.triangle
        self.slope = slope_x[t]
        self.depth = a[t, 2] + slope_x[t] * (self.first + 0.5 - a[t, 0]) + slope_y[t] * (self.row + 0.5 - a[t, 1])
        self.least, self.most = corners[:, :, 2].min(axis=1)[t], corners[:, :, 2].max(axis=1)[t]


def _slope(run: Points, rise: Points) -> Points:
    return np.divide(run, rise, out=np.zeros_like(run), where=rise != 0.0)


def farthest_near_by(depth: NDArray[np.float32]) -> NDArray[np.float32]:
    """For every sample the least depth of it and its eight neighbours: an edge of the surface itself is not behind."""
    wide = np.pad(depth, 1, mode="edge")
    rows = np.minimum(np.minimum(wide[:-2], wide[1:-1]), wide[2:])
    return np.asarray(np.minimum(np.minimum(rows[:, :-2], rows[:, 1:-1]), rows[:, 2:]))


def png(picture: Colours) -> bytes:
    """A picture, (height, width, 3), as a PNG file of at most 256 colours; the same bytes each time."""
    height, width, _ = picture.shape
    index, palette = _in_few_colours(picture.reshape(-1, 3))
    rows = np.zeros((height, width + 1), dtype=np.uint8)
    rows[:, 1:] = index.reshape(height, width)
    head = struct.pack(">IIBBBBB", width, height, 8, 3, 0, 0, 0)
    parts = ((b"IHDR", head), (b"PLTE", palette.tobytes()), (b"IDAT", zlib.compress(rows.tobytes(), 6)), (b"IEND", b""))
    return b"\x89PNG\r\n\x1a\n" + b"".join(_chunk(kind, data) for kind, data in parts)


def _chunk(kind: bytes, data: bytes) -> bytes:
    return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))


def _in_few_colours(pixels: Colours) -> tuple[NDArray[np.uint8], Colours]:
    """A colour number for every pixel, and the colours: the most frequent; the others become the nearest."""
    fine = (pixels.astype(np.int32) * LEVELS + 127) // 255
    packed = (fine[:, 0] << 12) | (fine[:, 1] << 6) | fine[:, 2]
    counts = np.bincount(packed, minlength=1 << 18)
    found = np.flatnonzero(counts)
    order = np.argsort(-counts[found], kind="stable")
    kept = np.sort(found[order[:256]])
    levels, palette = (np.stack([of >> 12, (of >> 6) & LEVELS, of & LEVELS], axis=1) for of in (found, kept))
    distance = ((levels[:, None] - palette[None]) ** 2).sum(axis=2)
    number = np.zeros(1 << 18, dtype=np.uint8)
    number[found] = distance.argmin(axis=1)
    return number[packed], ((palette * 255 + LEVELS // 2) // LEVELS).astype(np.uint8)

"""A second, independent solution of parallel solid rods: triangles over the whole surface, no azimuth harmonics.

Mixed-potential Galerkin form on edge functions of triangles [Rao1982], static part over a triangle in closed form
[Wilton1984]. Slow and plain on purpose; shares nothing with the product but the description of the rods. Both mirror
planes are used: y = 0 (current crosses it) and z = 0 (no current crosses it), so a quarter of each rod is meshed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_matrix

SPEED_M_S = 299_792_458.0
ETA_OHM = 4e-7 * np.pi * SPEED_M_S
# Three-point rule of degree 2 on a triangle, barycentric.
POINTS = np.array([[2 / 3 if i == j else 1 / 6 for j in range(3)] for i in range(3)])
WEIGHTS = np.full(3, 1 / 3)
IMAGES = [(y, z) for y in (1.0, -1.0) for z in (1.0, -1.0)]


@dataclass
class Answer:
    """What the full-surface solution gives."""

    impedance_ohm: complex
    gain_dbi: float
    front_to_back_db: float
    balance: float
    triangles: int


def quarter_rod(rod, around, along):
    """Vertices and triangles of the quarter y >= 0, z >= 0 of a rod; `around` cells over 180 degrees."""
    at_m, length_m, radius_m, gap_m = rod.at_m, rod.length_m, rod.radius_m, rod.gap_m
    n = 2 * around
    # Vertices a little outside, so that the polygon's mean radius is the rod's.
    outer = radius_m * (1 + (np.pi / n) ** 2 / 3)
    start = gap_m / 2
    t = np.linspace(0, 1, along + 1)
    grade = np.sin(t * np.pi / 2) ** 0.9 if gap_m == 0 else (1 - np.cos(np.pi * t)) / 2
    y = start + (length_m / 2 - start) * grade
    if gap_m > 0:
        y = np.concatenate([np.linspace(0, start, 3)[:-1], y])
    phi = np.arange(around + 1) * np.pi / around
    rows = [np.column_stack([at_m + outer * np.cos(phi), np.full(len(phi), v), outer * np.sin(phi)]) for v in y]
    for share in (0.9, 0.65, 0.35):
        r = outer * share
        rows.append(np.column_stack([at_m + r * np.cos(phi), np.full(len(phi), y[-1]), r * np.sin(phi)]))
    vertices = np.concatenate([*rows, [[at_m, y[-1], 0.0]]])
    width, triangles = around + 1, []
    for i in range(len(rows) - 1):
        for j in range(around):
            a, b, c, d = i * width + j, i * width + j + 1, (i + 1) * width + j, (i + 1) * width + j + 1
            triangles += [(a, b, c), (b, d, c)] if (i + j) % 2 == 0 else [(a, d, c), (a, b, d)]
    last, centre = (len(rows) - 1) * width, len(vertices) - 1
    triangles += [(last + j, last + j + 1, centre) for j in range(around)]
    return vertices, np.array(triangles)


def quarter_folded(folded, around, along):
    """The same quarter of a flat folded dipole whose ends are half circles; about `along` cells on each side."""
    radius_m, bend_m = folded.radius_m, folded.spacing_m / 2
    outer = radius_m * (1 + (np.pi / (2 * around)) ** 2 / 3)
    straight = folded.length_m / 2 - radius_m - bend_m
    side = np.concatenate([np.linspace(0, folded.gap_m / 2, 3)[:-1], np.linspace(folded.gap_m / 2, straight, along)])
    turn = np.linspace(0, np.pi, max(6, along // 2 + 2))[1:-1]
    x = np.concatenate([np.zeros(len(side)), bend_m * (1 - np.cos(turn)), np.full(along, 2 * bend_m)])
    y = np.concatenate([side, straight + bend_m * np.sin(turn), np.linspace(straight, 0, along)])
    heading = np.concatenate([np.zeros(len(side)), turn, np.full(along, np.pi)])
    phi = np.arange(around + 1) * np.pi / around
    spoke_x = np.outer(np.cos(heading), np.cos(phi)) * outer
    spoke_y = np.outer(-np.sin(heading), np.cos(phi)) * outer
    rows = np.stack(
        [folded.at_m + x[:, None] + spoke_x, y[:, None] + spoke_y, np.tile(outer * np.sin(phi), (len(x), 1))], axis=-1
    )
    width, triangles = around + 1, []
    for i in range(len(x) - 1):
        for j in range(around):
            a, b, c, d = i * width + j, i * width + j + 1, (i + 1) * width + j, (i + 1) * width + j + 1
            triangles += [(a, b, c), (b, d, c)] if (i + j) % 2 == 0 else [(a, d, c), (a, b, d)]
    return rows.reshape(-1, 3), np.array(triangles)


def edge_functions(vertices, triangles):
    """Signed incidence (T, E) for each local edge, with edge lengths; edges on z = 0 carry nothing, on y = 0 do."""
    seen: dict[tuple[int, int], list[tuple[int, int]]] = {}
    for number, triangle in enumerate(triangles):
        for local in range(3):
            a, b = sorted((triangle[(local + 1) % 3], triangle[(local + 2) % 3]))
            seen.setdefault((a, b), []).append((number, local))
    rows, columns, values = [[], [], []], [[], [], []], [[], [], []]
    count = 0
    for (a, b), owners in seen.items():
        crossing = len(owners) == 1 and abs(vertices[a][1]) < 1e-12 and abs(vertices[b][1]) < 1e-12
        if len(owners) == 1 and not crossing:
            continue
        length = np.linalg.norm(vertices[a] - vertices[b])
        for sign, (number, local) in zip((1.0, -1.0), owners, strict=False):
            rows[local].append(number)
            columns[local].append(count)
            values[local].append(sign * length)
        count += 1
    shape = (len(triangles), count)
    return [csr_matrix((values[i], (rows[i], columns[i])), shape=shape) for i in range(3)]


def static_potential(points, corners):
    """Integrals of 1/R and (r' - r)/R over triangles (n, 3, 3) seen from points (n, 3) [Wilton1984]."""
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    height = ((points - corners[:, 0]) * normal).sum(axis=1)
    foot = points - height[:, None] * normal
    scalar, vector = np.zeros(len(points)), np.zeros_like(points)
    d = np.abs(height)
    for i in range(3):
        a, b = corners[:, i], corners[:, (i + 1) % 3]
        along = (b - a) / np.linalg.norm(b - a, axis=1)[:, None]
        out = np.cross(along, normal)
        minus, plus = ((a - foot) * along).sum(axis=1), ((b - foot) * along).sum(axis=1)
        distance = ((a - foot) * out).sum(axis=1)
        r_minus, r_plus = np.linalg.norm(a - points, axis=1), np.linalg.norm(b - points, axis=1)
        squared = distance**2 + d**2
        top = np.where(plus + r_plus > 1e-14, plus + r_plus, squared / np.maximum(r_plus - plus, 1e-30))
        bottom = np.where(r_minus + minus > 1e-9 * r_minus, r_minus + minus, squared / (r_minus - minus))
        log = np.where(squared > 1e-24, np.log(top / np.maximum(bottom, 1e-30)), 0.0)
        angle = np.arctan2(distance * plus, squared + d * r_plus) - np.arctan2(distance * minus, squared + d * r_minus)
        scalar += distance * log - d * angle
        vector += 0.5 * out * (squared * log + plus * r_plus - minus * r_minus)[:, None]
    return scalar, vector - (height * scalar)[:, None] * normal


def pair_integrals(test, source, turn, k):
    """Integrals over all pairs of triangles of G, r G, turn r' G and r . turn r' G; `turn` scales the components."""
    area_t, area_s = areas(test), areas(source)
    points = np.einsum("pb,tbc->tpc", POINTS, test)
    others = np.einsum("pb,tbc->tpc", POINTS, source)
    shape = (len(test), len(source))
    total, product = np.zeros(shape, complex), np.zeros(shape, complex)
    first, second = np.zeros((*shape, 3), complex), np.zeros((*shape, 3), complex)
    apart = np.linalg.norm(test.mean(axis=1)[:, None] - source.mean(axis=1)[None], axis=2)
    p, q = np.nonzero(apart < 4.0 * np.sqrt(area_s))
    for i, weight in enumerate(WEIGHTS):
        r = points[:, i]
        value, moment = np.zeros(shape, complex), np.zeros((*shape, 3), complex)
        for j, share in enumerate(WEIGHTS):
            distance = np.maximum(np.linalg.norm(r[:, None] - others[None, :, j], axis=2), 1e-30)
            wave = np.exp(-1j * k * distance) / distance
            close = distance[p, q]
            wave[p, q] = np.where(close < 1e-15, -1j * k, (np.exp(-1j * k * close) - 1) / close)
            wave *= share * area_s
            value += wave
            moment += wave[..., None] * others[None, :, j]
        scalar, vector = static_potential(r[p], source[q])
        value[p, q] += scalar
        moment[p, q] += vector + scalar[:, None] * r[p]
        moment *= turn
        scale = (weight * area_t)[:, None]
        total += scale * value
        first += (scale * value)[..., None] * r[:, None]
        second += scale[..., None] * moment
        product += scale * (moment * r[:, None]).sum(axis=2)
    return total, first, second, product


def areas(corners):
    """Area of triangles (n, 3, 3)."""
    return np.linalg.norm(np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]), axis=1) / 2


def solve_rods(rods, frequency_hz, around=6, along=12):
    """Solve perfect, parallel, coplanar rods (and a flat folded dipole with half-circle ends), one of them fed."""
    k = 2 * np.pi * frequency_hz / SPEED_M_S
    parts = [(quarter_folded if hasattr(rod, "spacing_m") else quarter_rod)(rod, around, along) for rod in rods]
    shifts = np.concatenate([[0], np.cumsum([len(v) for v, _ in parts])])
    vertices = np.concatenate([v for v, _ in parts])
    triangles = np.concatenate([t + s for (_, t), s in zip(parts, shifts, strict=False)])
    corners = vertices[triangles]
    incidence = edge_functions(vertices, triangles)
    area = areas(corners)
    inverse = [m.multiply(1 / (2 * area)[:, None]).tocsr() for m in incidence]
    divergence = sum(m.multiply(1 / area[:, None]).tocsr() for m in incidence)
    unknowns = divergence.shape[1]
    matrix = np.zeros((unknowns, unknowns), dtype=complex)
    for y, z in IMAGES:
        flip, sign = np.array([1, y, z]), np.array([y, 1.0, y * z])
        mirrored = corners * flip
        # Mirrored current: component c of (r' - v) at the real source times sign[c]; r' real = r' mirrored * flip.
        g, rg, sg, rsg = pair_integrals(corners, mirrored, flip * sign, k)
        matrix -= y * (divergence.T @ g @ divergence) / k**2
        for i in range(3):
            for j in range(3):
                vi, vj = corners[:, i], corners[:, j] * sign
                part = rsg - np.einsum("tc,tsc->ts", vi, sg) - np.einsum("tsc,sc->ts", rg, vj) + (vi @ vj.T) * g
                matrix += inverse[i].T @ part @ inverse[j]
    matrix *= 4 * 1j * ETA_OHM * k / (4 * np.pi)
    centre = corners.mean(axis=1)
    fed = next(rod for rod in rods if rod.gap_m > 0)
    inside = (np.abs(centre[:, 0] - fed.at_m) < 2 * fed.radius_m) & (centre[:, 1] < fed.gap_m / 2)
    field = np.where(inside, 4 * area / fed.gap_m, 0.0)
    right = sum(m.T @ (field * (centre[:, 1] - corners[:, i, 1])) for i, m in enumerate(inverse))
    currents = np.linalg.solve(matrix, right)
    density = [m @ currents for m in inverse]
    return _answer(corners, area, density, complex(right @ currents), k)


def _answer(corners, area, density, feed_current, k):
    def intensity(directions):
        total = np.zeros((len(directions), 3), dtype=complex)
        for y, z in IMAGES:
            flip, sign = np.array([1, y, z]), np.array([y, 1.0, y * z])
            for point, weight in zip(POINTS, WEIGHTS, strict=True):
                r = np.einsum("b,tbc->tc", point, corners)
                current = sum(d[:, None] * (r - corners[:, i]) for i, d in enumerate(density)) * sign
                wave = np.exp(1j * k * directions @ (r * flip).T)
                total += wave @ (current * (weight * area)[:, None])
        across = (np.abs(total) ** 2).sum(axis=1) - np.abs((total * directions).sum(axis=1)) ** 2
        return ETA_OHM * k**2 / (32 * np.pi**2) * across

    power = feed_current.real / 2
    gain = 4 * np.pi * intensity(np.array([[1.0, 0, 0], [-1.0, 0, 0]])) / power
    rise, weight = np.polynomial.legendre.leggauss(16)
    angle = (np.arange(40) + 0.5) * 2 * np.pi / 40
    flat = np.sqrt(1 - rise**2)
    grid = np.stack([np.outer(flat, np.cos(angle)), np.outer(rise, np.ones(40)), np.outer(flat, np.sin(angle))], -1)
    radiated = (weight[:, None] * intensity(grid.reshape(-1, 3)).reshape(16, 40)).sum() * 2 * np.pi / 40
    decibel = 10 * np.log10(gain)
    return Answer(1 / feed_current, decibel[0], decibel[0] - decibel[1], radiated / power, 4 * len(corners))

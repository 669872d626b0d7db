"""The loops over everything: rows of the impedance matrix, the far field, and who is whose neighbour.

Written so that the compiler can turn the inner loops into vector instructions: long contiguous rows, no
branches, a sine and cosine of our own (Cody and Waite's reduction, Taylor polynomials to rounding).
"""

from __future__ import annotations

import math

import numpy as np

from wavejig.field.kernels.compile import REORDERED, compiled

BLOCK = 64  # elements worked on together: their buffers stay in the nearest caches


@compiled(REORDERED)
def _sin_cos(x):
    """Sine and cosine, x >= 0 and below about 1e6, to a few units in the last place."""
    n = math.floor(x * 0.6366197723675814 + 0.5)
    r = (x - n * 1.5707963267341256) - n * 6.077100506506192e-11
    q = r * r
    s = r * (
        1.0
        + q
        * (
            -1.0 / 6.0
            + q
            * (
                1.0 / 120.0
                + q
                * (
                    -1.0 / 5040.0
                    + q
                    * (
                        1.0 / 362880.0
                        + q * (-1.0 / 39916800.0 + q * (1.0 / 6227020800.0 - q / 1307674368000.0))
                    )
                )
            )
        )
    )
    c = 1.0 + q * (
        -0.5
        + q
        * (
            1.0 / 24.0
            + q
            * (
                -1.0 / 720.0
                + q * (1.0 / 40320.0 + q * (-1.0 / 3628800.0 + q * (1.0 / 479001600.0 - q / 87178291200.0)))
            )
        )
    )
    quarter = n - 4.0 * math.floor(n * 0.25)
    odd = quarter - 2.0 * math.floor(quarter * 0.5)
    sign_s = 1.0 - 2.0 * math.floor(quarter * 0.5)
    sign_c = sign_s * (1.0 - 2.0 * odd)
    return sign_s * (s + odd * (c - s)), sign_c * (c + odd * (s - c))


@compiled(REORDERED)
def _green(k, x, y, z, xyz, near, tiny2, at, gr, gi):
    """exp(-jkR)/R to a block of points, less 1/R - k^2 R/2 where near is 1 (added elsewhere in closed form)."""
    for q in range(BLOCK):
        dx = x - xyz[q]
        dy = y - xyz[BLOCK + q]
        dz = z - xyz[2 * BLOCK + q]
        r = math.sqrt(dx * dx + dy * dy + dz * dz + tiny2)
        kr = k * r
        s, c = _sin_cos(kr)
        gr[at + q] = (c - near[q] * (1.0 - 0.5 * kr * kr)) / r
        gi[at + q] = -s / r


@compiled(REORDERED)
def _scalars(wi, wj, g, out):
    """Potential between unit charges spread over the points of one element and each of a block."""
    for q in range(BLOCK):
        total = 0.0
        for i in range(3):
            at = 3 * i * BLOCK + q
            total += wi[i] * (
                wj[q] * g[at] + wj[BLOCK + q] * g[at + BLOCK] + wj[2 * BLOCK + q] * g[at + 2 * BLOCK]
            )
        out[q] = total


@compiled(REORDERED)
def _vectors(f, h, g, pot, charge, out):
    """Real or imaginary part for all halves of one element (f) and one half of each of a block (h)."""
    for q in range(BLOCK):
        x = charge[q] * pot[q]
        e0 = f[27] * x
        e1 = f[28] * x
        e2 = f[29] * x
        for i in range(3):
            at = 3 * i * BLOCK + q
            for c in range(3):
                to = 3 * c * BLOCK + q
                x = h[to] * g[at] + h[to + BLOCK] * g[at + BLOCK] + h[to + 2 * BLOCK] * g[at + 2 * BLOCK]
                e0 += f[3 * i + c] * x
                e1 += f[9 + 3 * i + c] * x
                e2 += f[18 + 3 * i + c] * x
        out[q] = e0
        out[BLOCK + q] = e1
        out[2 * BLOCK + q] = e2


@compiled(REORDERED)
def fill_rows(k, factor, tiny2, members, row_first, row_last, own, blocks, halves, near_by, z):
    """Adds factor times half the interactions of the member elements' rows in [row_first, row_last) to z.

    Each pair of elements once, so that z plus its transpose is the whole. own: points, moments, weights,
    charges by element; blocks: the sources' points (blocks, 3 points, 3 * BLOCK), moments (blocks, 3 halves,
    9 * BLOCK: component, point), weights (blocks, 3 * BLOCK), charges (blocks, 3, BLOCK). halves: start,
    unknown, coefficient of the unknowns each half belongs to. near_by: start, other, pair, flip of each
    element's neighbours, and the pairs' static integrals.
    """
    points, moments, weights, charges = own
    s_pts, s_f, s_w, s_q = blocks
    hptr, hunk, hcoef = halves
    nptr, nother, npair, nflip, integrals = near_by
    n = points.shape[0]
    size = z.shape[1]
    near = np.zeros(s_w.shape[0] * BLOCK)
    gr = np.empty(9 * BLOCK)
    gi = np.empty(9 * BLOCK)
    er = np.empty((3, 3 * BLOCK))
    ei = np.empty((3, 3 * BLOCK))
    pr = np.empty(BLOCK)
    pi = np.empty(BLOCK)
    row = np.empty((size, 8))  # one cache line for an unknown: three halves, real and imaginary
    f = np.empty(30)
    k2 = 1.0 / (k * k)
    for member in range(members.size):
        p = members[member]
        row[:] = 0.0
        for a in range(3):
            f[27 + a] = -k2 * charges[p, a]
            for i in range(3):
                for c in range(3):
                    f[9 * a + 3 * i + c] = moments[p, a, i, c]
        for e in range(nptr[p], nptr[p + 1]):
            near[nother[e]] = 1.0
        for block in range(p // BLOCK, s_w.shape[0]):
            lo = block * BLOCK
            for i in range(3):
                for j in range(3):
                    _green(
                        k,
                        points[p, i, 0],
                        points[p, i, 1],
                        points[p, i, 2],
                        s_pts[block, j],
                        near[lo : lo + BLOCK],
                        tiny2,
                        (3 * i + j) * BLOCK,
                        gr,
                        gi,
                    )
            _scalars(weights[p], s_w[block], gr, pr)
            _scalars(weights[p], s_w[block], gi, pi)
            for b in range(3):
                _vectors(f, s_f[block, b], gr, pr, s_q[block, b], er[b])
                _vectors(f, s_f[block, b], gi, pi, s_q[block, b], ei[b])
            if lo <= p:
                for b in range(3):
                    for a in range(3):
                        er[b, a * BLOCK + p - lo] *= 0.5
                        ei[b, a * BLOCK + p - lo] *= 0.5
            for q in range(max(p - lo, 0), min(BLOCK, n - lo)):
                for b in range(3):
                    h = 3 * (lo + q) + b
                    for e in range(hptr[h], hptr[h + 1]):
                        u = hunk[e]
                        w = hcoef[e]
                        for a in range(3):
                            row[u, 2 * a] += w * er[b, a * BLOCK + q]
                            row[u, 2 * a + 1] += w * ei[b, a * BLOCK + q]
        for e in range(nptr[p], nptr[p + 1]):
            q = nother[e]
            near[q] = 0.0
            if q < p:
                continue
            part = 0.5 if q == p else 1.0
            st = integrals[npair[e]]
            scalar = k2 * (st[18] - 0.5 * k * k * st[19])
            for a in range(3):
                for b in range(3):
                    at = 3 * b + a if nflip[e] else 3 * a + b
                    value = part * (
                        st[at] - 0.5 * k * k * st[9 + at] - charges[p, a] * charges[q, b] * scalar
                    )
                    h = 3 * q + b
                    for d in range(hptr[h], hptr[h + 1]):
                        row[hunk[d], 2 * a] += hcoef[d] * value
        for a in range(3):
            h = 3 * p + a
            for e in range(hptr[h], hptr[h + 1]):
                u = hunk[e]
                if u < row_first or u >= row_last:
                    continue
                w = factor * hcoef[e]
                for v in range(size):
                    z[u, v] += complex(-w * row[v, 2 * a + 1], w * row[v, 2 * a])


@compiled(REORDERED)
def add_transpose(first, last, z):
    """z becomes z plus its transpose, for tiles first to last of its upper triangle's 32-row bands."""
    n = z.shape[0]
    for band in range(first, last):
        lo = 32 * band
        hi = min(lo + 32, n)
        for left in range(lo, n, 32):
            right = min(left + 32, n)
            for u in range(lo, hi):
                for v in range(max(left, u), right):
                    total = z[u, v] + z[v, u]
                    z[u, v] = total
                    z[v, u] = total


@compiled(REORDERED)
def far_rows(first, last, k, directions, pts, cur_r, cur_i, out):
    """Sum of current times exp(jk r^.r') at each direction: pts, cur (3, points), out (directions, 3) complex."""
    n = pts.shape[1]
    pr = np.empty(n)
    pi = np.empty(n)
    for d in range(first, last):
        x = k * directions[d, 0]
        y = k * directions[d, 1]
        z = k * directions[d, 2]
        for q in range(n):
            phase = x * pts[0, q] + y * pts[1, q] + z * pts[2, q]
            s, c = _sin_cos(abs(phase))
            pr[q] = c
            pi[q] = s if phase >= 0.0 else -s
        for c in range(3):
            sr = 0.0
            si = 0.0
            for q in range(n):
                sr += cur_r[c, q] * pr[q] - cur_i[c, q] * pi[q]
                si += cur_r[c, q] * pi[q] + cur_i[c, q] * pr[q]
            out[d, c] = complex(sr, si)


@compiled(REORDERED)
def neighbours(direct, centre, other, size, radius, reach, thick, counts, ps, qs):
    """Pairs p <= q nearer than reach times the sum of their sizes (wires: or thick radii); their number.

    Fills ps, qs where they have room; counts: per p. other: the sources' centres (images: mirrored).
    """
    total = 0
    n = size.size
    for p in range(n):
        found = 0
        for q in range(p, n):
            dx = centre[p, 0] - other[q, 0]
            dy = centre[p, 1] - other[q, 1]
            dz = centre[p, 2] - other[q, 2]
            limit = reach * (size[p] + size[q])
            if radius[p] > 0.0 and radius[q] > 0.0:
                limit = max(limit, size[p] + size[q] + thick * max(radius[p], radius[q]))
            if dx * dx + dy * dy + dz * dz < limit * limit or (direct and p == q):
                if total < ps.size:
                    ps[total] = p
                    qs[total] = q
                total += 1
                found += 1
        counts[p] = found
    return total

"""The loops over everything: rows of the impedance matrix, the far field, and who is whose neighbour.

Written so that the compiler can turn the inner loops into vector instructions: long contiguous rows, no
branches, a sine and cosine of our own (Cody and Waite's reduction, Taylor polynomials to rounding).
"""

from __future__ import annotations

import math

import numpy as np
from numba import njit

OPTIONS = {
    "nogil": True,
    "cache": True,
    "error_model": "numpy",
    "fastmath": {"contract", "nsz", "arcp", "reassoc"},
}
BLOCK = 64  # elements worked on together: their buffers stay in the nearest caches


@njit(**OPTIONS)
def _sin_cos(x):  # type: ignore[no-untyped-def]
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


@njit(**OPTIONS)
def _green(k, x, y, z, sx, sy, sz, near, tiny2, gr, gi):  # type: ignore[no-untyped-def]
    """exp(-jkR)/R, less 1/R - k^2 R/2 where near is 1 (added elsewhere in closed form)."""
    for q in range(sx.size):
        dx = x - sx[q]
        dy = y - sy[q]
        dz = z - sz[q]
        r = math.sqrt(dx * dx + dy * dy + dz * dz + tiny2)
        kr = k * r
        s, c = _sin_cos(kr)
        gr[q] = (c - near[q] * (1.0 - 0.5 * kr * kr)) / r
        gi[q] = -s / r


@njit(**OPTIONS)
def fill_rows(  # type: ignore[no-untyped-def]
    k,
    factor,
    tiny2,
    members,
    row_first,
    row_last,
    t_pts,
    t_f,
    t_w,
    t_q,
    s_pts,
    s_f,
    s_w,
    s_q,
    hptr,
    hunk,
    hcoef,
    nptr,
    nother,
    npair,
    nflip,
    near_out,
    z,
):
    """Adds factor times the interactions of the member elements' rows in [row_first, row_last) to z.

    z (rows, n) complex. t_: by element first; s_: by element last. hptr, hunk, hcoef: the unknowns each half
    belongs to. nptr, nother, npair, nflip: each element's neighbours and their static pair in near_out.
    """
    n = s_q.shape[1]
    size = z.shape[1]
    near = np.zeros(n)
    gr = np.empty((3, 3, BLOCK))
    gi = np.empty((3, 3, BLOCK))
    vr = np.empty(BLOCK)
    vi = np.empty(BLOCK)
    er = np.empty((3, 3, BLOCK))
    ei = np.empty((3, 3, BLOCK))
    pr = np.empty(BLOCK)
    pi = np.empty(BLOCK)
    row_r = np.empty((3, size))
    row_i = np.empty((3, size))
    k2 = 1.0 / (k * k)
    for member in range(members.size):
        p = members[member]
        row_r[:] = 0.0
        row_i[:] = 0.0
        for e in range(nptr[p], nptr[p + 1]):
            near[nother[e]] = 1.0
        for lo in range(0, n, BLOCK):
            m = min(BLOCK, n - lo)
            hi = lo + m
            pr[:m] = 0.0
            pi[:m] = 0.0
            er[:] = 0.0
            ei[:] = 0.0
            for i in range(3):
                for j in range(3):
                    _green(
                        k,
                        t_pts[p, i, 0],
                        t_pts[p, i, 1],
                        t_pts[p, i, 2],
                        s_pts[j, 0, lo:hi],
                        s_pts[j, 1, lo:hi],
                        s_pts[j, 2, lo:hi],
                        near[lo:hi],
                        tiny2,
                        gr[i, j],
                        gi[i, j],
                    )
                    wi = t_w[p, i]
                    wj = s_w[j, lo:hi]
                    for q in range(m):
                        pr[q] += wi * wj[q] * gr[i, j, q]
                        pi[q] += wi * wj[q] * gi[i, j, q]
                for b in range(3):
                    for c in range(3):
                        f0 = s_f[b, 0, c, lo:hi]
                        f1 = s_f[b, 1, c, lo:hi]
                        f2 = s_f[b, 2, c, lo:hi]
                        g0 = t_f[p, 0, i, c]
                        g1 = t_f[p, 1, i, c]
                        g2 = t_f[p, 2, i, c]
                        for q in range(m):
                            xr = f0[q] * gr[i, 0, q] + f1[q] * gr[i, 1, q] + f2[q] * gr[i, 2, q]
                            xi = f0[q] * gi[i, 0, q] + f1[q] * gi[i, 1, q] + f2[q] * gi[i, 2, q]
                            er[0, b, q] += g0 * xr
                            ei[0, b, q] += g0 * xi
                            er[1, b, q] += g1 * xr
                            ei[1, b, q] += g1 * xi
                            er[2, b, q] += g2 * xr
                            ei[2, b, q] += g2 * xi
            for b in range(3):
                qb = s_q[b, lo:hi]
                for q in range(m):
                    vr[q] = k2 * qb[q] * pr[q]
                    vi[q] = k2 * qb[q] * pi[q]
                for a in range(3):
                    qa = t_q[p, a]
                    for q in range(m):
                        er[a, b, q] -= qa * vr[q]
                        ei[a, b, q] -= qa * vi[q]
            for q in range(m):
                for b in range(3):
                    h = 3 * (lo + q) + b
                    for e in range(hptr[h], hptr[h + 1]):
                        u = hunk[e]
                        w = hcoef[e]
                        for a in range(3):
                            row_r[a, u] += w * er[a, b, q]
                            row_i[a, u] += w * ei[a, b, q]
        for e in range(nptr[p], nptr[p + 1]):
            q = nother[e]
            near[q] = 0.0
            st = near_out[npair[e]]
            scalar = k2 * (st[18] - 0.5 * k * k * st[19])
            for a in range(3):
                for b in range(3):
                    at = 3 * b + a if nflip[e] else 3 * a + b
                    value = st[at] - 0.5 * k * k * st[9 + at] - t_q[p, a] * s_q[b, q] * scalar
                    h = 3 * q + b
                    for f in range(hptr[h], hptr[h + 1]):
                        row_r[a, hunk[f]] += hcoef[f] * value
        for a in range(3):
            h = 3 * p + a
            for e in range(hptr[h], hptr[h + 1]):
                u = hunk[e]
                if u < row_first or u >= row_last:
                    continue
                w = factor * hcoef[e]
                for v in range(size):
                    z[u, v] += complex(-w * row_i[a, v], w * row_r[a, v])


@njit(**OPTIONS)
def far_rows(first, last, k, directions, pts, cur_r, cur_i, out):  # type: ignore[no-untyped-def]
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


@njit(**OPTIONS)
def neighbours(direct, centre, other, size, radius, reach, thick, counts, ps, qs):  # type: ignore[no-untyped-def]
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

"""Static (1/R) and first dynamic (R) interactions of neighbouring wire segments, currents on tubes.

The kernel is exact for round wires: current and charge spread evenly round the tube, observed on the other
tube's surface and averaged round it. A ring's potential is a complete elliptic integral, so one azimuth is
in closed form; along the source the integrand has a logarithm at the nearest point, taken out by a change
of variable. It stays right for segments as short as a radius, where the reduced kernel fails: D. S. Jones,
IEE Proc. 128H (1981) 114-116 (from memory) for what goes wrong, our own integrals.
Elliptic K: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, 17.3.34, error below 2e-8.
"""

from __future__ import annotations

import math

import numpy as np

from wavejig.field.kernels.compile import compiled


@compiled()
def ring_potential(rho, z, a):
    """Average of 1/R from a ring of radius a to a point at radius rho and height z."""
    top = (rho + a) ** 2 + z * z
    m1 = max(((rho - a) ** 2 + z * z) / top, 1e-30)
    poly = 1.38629436112 + m1 * (
        0.09666344259 + m1 * (0.03590092383 + m1 * (0.03742563713 + m1 * 0.01451196212))
    )
    logs = 0.5 + m1 * (0.12498593597 + m1 * (0.06880248576 + m1 * (0.03328355346 + m1 * 0.00441787012)))
    return (poly - logs * math.log(m1)) * 2.0 / (math.pi * math.sqrt(top))


@compiled()
def _tube_integrals(rho, z, length, a, nodes, weights):
    """Integrals over the source tube of the ring potential, plain and times t = position / length."""
    nearest = min(max(z, 0.0), length)
    plain = 0.0
    tilted = 0.0
    for side in range(2):
        reach = length - nearest if side == 1 else nearest
        if reach < 1e-9 * length:
            continue
        # distance along the axis runs as a sinh(t) beyond the nearest point, t from t0 quadratically
        gap = abs(z - nearest)
        t0 = math.asinh(gap / a)
        t1 = math.asinh((gap + reach) / a)
        for g in range(nodes.size):
            x = nodes[g]
            t = t0 + (t1 - t0) * x * x
            along = a * math.sinh(t)
            w = weights[g] * 2.0 * x * (t1 - t0) * a * math.cosh(t)
            at = nearest + (along - gap) if side == 1 else nearest - (along - gap)
            k = w * ring_potential(rho, along, a)
            plain += k
            tilted += k * at
    return plain, tilted / length


@compiled()
def _across(r, u, length):
    """The part of r square to u (of that length)."""
    dot = (r[0] * u[0] + r[1] * u[1] + r[2] * u[2]) / length**2
    return r - dot * u


@compiled()
def _size(r):
    return math.sqrt(r[0] ** 2 + r[1] ** 2 + r[2] ** 2)


@compiled()
def _close(v, a, w, b, along, along_w, ring, ring_w, factor, flip, out):
    """Adds the interaction of tube v (radius a, observed) and tube w (radius b, source), near each other."""
    u = v[1] - v[0]
    s = w[1] - w[0]
    length = _size(u)
    source = _size(s)
    cosine = (u[0] * s[0] + u[1] * s[1] + u[2] * s[2]) / (length * source)
    # the ring's first direction lies in the plane of both tubes, so that it turns with the model
    p = _across(0.5 * (w[0] + w[1]) - 0.5 * (v[0] + v[1]), u, length)
    if _size(p) < 1e-6 * a:
        p = _across(s, u, length)
    q = np.zeros(3)
    around = 1
    if _size(p) > 1e-6 * a:
        around = 8
        p *= a / _size(p)
        q[0] = (u[1] * p[2] - u[2] * p[1]) / length
        q[1] = (u[2] * p[0] - u[0] * p[2]) / length
        q[2] = (u[0] * p[1] - u[1] * p[0]) / length
    for g in range(along.size):
        t = along[g]
        for h in range(around):
            angle = (h + 0.5) * 2.0 * math.pi / around
            r = v[0] + t * u - w[0]
            if around > 1:
                r = r + math.cos(angle) * p + math.sin(angle) * q
            z = (r[0] * s[0] + r[1] * s[1] + r[2] * s[2]) / source
            rho = a if around == 1 else math.sqrt(max(r[0] ** 2 + r[1] ** 2 + r[2] ** 2 - z * z, 0.0))
            plain, tilted = _tube_integrals(rho, z, source, b, ring, ring_w)
            k = factor * along_w[g] / around
            out[18] += k * plain / source
            k *= cosine * length
            for i in range(2):
                part = k * (t if i == 1 else 1.0 - t)
                at0 = 3 * i if not flip else i
                at1 = 3 * i + 1 if not flip else 3 + i
                out[at0] += part * (plain - tilted)
                out[at1] += part * tilted


@compiled()
def _gap(v, w):
    """A lower distance of two segments: least over ends and middles of one to the whole of the other."""
    least = 1e300
    for turn in range(2):
        x = v if turn == 0 else w
        y = w if turn == 0 else v
        u = y[1] - y[0]
        uu = u[0] ** 2 + u[1] ** 2 + u[2] ** 2
        for g in range(5):
            r = x[0] + 0.25 * g * (x[1] - x[0]) - y[0]
            t = min(max((r[0] * u[0] + r[1] * u[1] + r[2] * u[2]) / uu, 0.0), 1.0)
            d2 = (r[0] - t * u[0]) ** 2 + (r[1] - t * u[1]) ** 2 + (r[2] - t * u[2]) ** 2
            least = min(least, math.sqrt(d2))
    return least


@compiled()
def tube_pairs(first, last, direct, ps, qs, t_v, s_v, radius, g4, wg4, g6, wg6, g10, wg10, out):
    """Fills out[first:last] (pairs, 20): 0..8 vector 1/R by halves, 9..17 vector R, 18 and 19 scalar."""
    for pair in range(first, last):
        p = ps[pair]
        q = qs[pair]
        res = out[pair]
        v = t_v[p, :2]
        w = s_v[q, :2]
        a = radius[p]
        b = radius[q]
        u = v[1] - v[0]
        s = w[1] - w[0]
        length = math.sqrt(u[0] ** 2 + u[1] ** 2 + u[2] ** 2)
        source = math.sqrt(s[0] ** 2 + s[1] ** 2 + s[2] ** 2)
        cosine = (u[0] * s[0] + u[1] * s[1] + u[2] * s[2]) / (length * source)
        gap = _gap(v, w)
        close = gap < 0.731 * max(length, source) or gap < 4.037 * (a + b)
        if close:
            if direct and p == q:
                _close(v, a, w, b, g6, wg6, g10, wg10, 1.0, False, res)
            else:
                _close(v, a, w, b, g6, wg6, g10, wg10, 0.5, False, res)
                _close(w, b, v, a, g6, wg6, g10, wg10, 0.5, True, res)
        for i in range(g4.size):
            for j in range(g4.size):
                r = v[0] + g4[i] * u - w[0] - g4[j] * s
                d2 = r[0] ** 2 + r[1] ** 2 + r[2] ** 2
                if close:
                    # where the tubes are side by side their own thickness matters little, in line it adds
                    d2 += a * a + b * b
                else:
                    # second order in the radii: the average of 1/R round both tubes
                    c = (r[0] * u[0] + r[1] * u[1] + r[2] * u[2]) / length
                    d = (r[0] * s[0] + r[1] * s[1] + r[2] * s[2]) / source
                    d2 += 0.5 * a * a * (3.0 * c * c / d2 - 1.0) + 0.5 * b * b * (3.0 * d * d / d2 - 1.0)
                dist = math.sqrt(d2)
                k = wg4[i] * wg4[j]
                res[19] += k * dist
                if not close:
                    res[18] += k / dist
                k *= cosine * length * source
                for x in range(2):
                    for y in range(2):
                        part = k * (g4[i] if x == 1 else 1.0 - g4[i]) * (g4[j] if y == 1 else 1.0 - g4[j])
                        res[9 + 3 * x + y] += part * dist
                        if not close:
                            res[3 * x + y] += part / dist

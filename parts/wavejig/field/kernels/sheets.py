"""Static (1/R) and first dynamic (R) interactions of neighbours where the source is a piece of sheet.

Elements: kind 0 wire segment, 1 triangle, 2 fan triangle (the part of a wire-to-sheet attachment that
lies on one triangle; its vertex 0 is the attachment). Observation is a sum over points, the source
integral of 1/R is in closed form: D. R. Wilton et al., Potential integrals for uniform and linear source
distributions on polygonal and polyhedral domains, IEEE T-AP 32 (1984) 276-281.

The attachment's current on a triangle is share/(2A) [rho h^2/(rho.h^)^2 - rho], rho from the attached
vertex, h the height over the opposite side: S. U. Hwu, D. R. Wilton, S. M. Rao, Electromagnetic scattering
and radiation by arbitrary conducting wire/surface configurations, IEEE AP-S Symposium 1988 (from
memory; re-derived: the first part is free of charge and carries the flux, the second has constant
charge). With rho = u e(v), e(v) on the opposite side, the first part times dS is share e(v) du dv, and the
integral over u of 1/R is a logarithm, which leaves one smooth integral over v. The first part begins at the
wire's surface, where the tube's current really enters the sheet: begun at its axis it would give each foot
an inductance too much of a tenth of mu0 times the radius (found by comparing with an infinite ground).
"""

from __future__ import annotations

import math

import numpy as np

from wavejig.field.kernels.compile import compiled
from wavejig.field.unknowns import FAN_LATEST


@compiled()
def _log_term(lm, lp, rm, rp, off2):
    """Integral of 1/R along a straight piece from lm to lp, off2 the squared distance from its line."""
    if lm > 0.0:
        return math.log((rp + lp) / (rm + lm))
    if lp < 0.0:
        return math.log((rm - lm) / (rp - lp))
    return math.log((rp + lp) * (rm - lm) / max(off2, 1e-40))


@compiled()
def _potential(x, y, z, v, n, s, u):
    """Integrals of 1/R and of (r' - r)/R over a triangle; v vertices, n normal, s, u along and out of sides."""
    d = n[0] * (x - v[0, 0]) + n[1] * (y - v[0, 1]) + n[2] * (z - v[0, 2])
    ad = abs(d)
    i0 = 0.0
    mx = 0.0
    my = 0.0
    mz = 0.0
    for e in range(3):
        f = e + 1 if e < 2 else 0
        ax = v[e, 0] - x
        ay = v[e, 1] - y
        az = v[e, 2] - z
        bx = v[f, 0] - x
        by = v[f, 1] - y
        bz = v[f, 2] - z
        t = u[e, 0] * ax + u[e, 1] * ay + u[e, 2] * az
        lm = s[e, 0] * ax + s[e, 1] * ay + s[e, 2] * az
        lp = s[e, 0] * bx + s[e, 1] * by + s[e, 2] * bz
        rm = math.sqrt(ax * ax + ay * ay + az * az)
        rp = math.sqrt(bx * bx + by * by + bz * bz)
        off2 = t * t + d * d
        log = _log_term(lm, lp, rm, rp, off2)
        i0 += t * log
        if ad > 1e-9 * (rm + rp):
            # one arctangent for two: their difference, both within (-pi/2, pi/2)
            i0 -= ad * (math.atan2(t * lp, off2 + ad * rp) - math.atan2(t * lm, off2 + ad * rm))
        w = 0.5 * (off2 * log + lp * rp - lm * rm)
        mx += u[e, 0] * w
        my += u[e, 1] * w
        mz += u[e, 2] * w
    return i0, mx - d * n[0] * i0, my - d * n[1] * i0, mz - d * n[2] * i0


@compiled()
def _rays(x, y, z, v, foot, nodes, weights):
    """Integral over v of e(v) times that of 1/R over u from the foot's radius on: a fan's carrying part."""
    px = x - v[0, 0]
    py = y - v[0, 1]
    pz = z - v[0, 2]
    r2 = px * px + py * py + pz * pz
    sx = 0.0
    sy = 0.0
    sz = 0.0
    for g in range(nodes.size):
        t = nodes[g]
        ex = (1.0 - t) * v[1, 0] + t * v[2, 0] - v[0, 0]
        ey = (1.0 - t) * v[1, 1] + t * v[2, 1] - v[0, 1]
        ez = (1.0 - t) * v[1, 2] + t * v[2, 2] - v[0, 2]
        e2 = ex * ex + ey * ey + ez * ez
        length = math.sqrt(e2)
        along = (ex * px + ey * py + ez * pz) / length
        start = min(foot / length, FAN_LATEST)
        rm = math.sqrt((px - start * ex) ** 2 + (py - start * ey) ** 2 + (pz - start * ez) ** 2)
        rp = math.sqrt((px - ex) ** 2 + (py - ey) ** 2 + (pz - ez) ** 2)
        off2 = max(r2 - along * along, 1e-12 * e2)
        w = weights[g] * _log_term(start * length - along, length - along, rm, rp, off2) / length
        sx += w * ex
        sy += w * ey
        sz += w * ez
    return sx, sy, sz


@compiled()
def _tube_points(v, radius, towards, nodes, weights, around, pos, vec, wgt):
    """Points on a segment's surface (on its axis if around is 1); their count. vec: moments of both halves."""
    ux = v[1, 0] - v[0, 0]
    uy = v[1, 1] - v[0, 1]
    uz = v[1, 2] - v[0, 2]
    length2 = ux * ux + uy * uy + uz * uz
    # first direction of the ring: towards the source's centre, so that it turns with the model
    px = towards[0] - v[0, 0]
    py = towards[1] - v[0, 1]
    pz = towards[2] - v[0, 2]
    along = (px * ux + py * uy + pz * uz) / length2
    px -= along * ux
    py -= along * uy
    pz -= along * uz
    size = math.sqrt(px * px + py * py + pz * pz)
    if around == 1 or size < 1e-9 * math.sqrt(length2):
        around = 1
    else:
        px *= radius / size
        py *= radius / size
        pz *= radius / size
    length = math.sqrt(length2)
    qx = (uy * pz - uz * py) / length
    qy = (uz * px - ux * pz) / length
    qz = (ux * py - uy * px) / length
    m = 0
    for g in range(nodes.size):
        t = nodes[g]
        for h in range(around):
            angle = (h + 0.5) * 2.0 * math.pi / around
            c = math.cos(angle) if around > 1 else 0.0
            s = math.sin(angle) if around > 1 else 0.0
            pos[m, 0] = v[0, 0] + t * ux + c * px + s * qx
            pos[m, 1] = v[0, 1] + t * uy + c * py + s * qy
            pos[m, 2] = v[0, 2] + t * uz + c * pz + s * qz
            w = weights[g] / around
            wgt[m] = w
            for a in range(2):
                part = w * (t if a == 1 else 1.0 - t)
                vec[m, a, 0] = part * ux
                vec[m, a, 1] = part * uy
                vec[m, a, 2] = part * uz
            m += 1
    return m


@compiled()
def _triangle_points(v, bary, weights, pos, vec, wgt):
    for g in range(weights.size):
        wgt[g] = weights[g]
        for c in range(3):
            pos[g, c] = bary[g, 0] * v[0, c] + bary[g, 1] * v[1, c] + bary[g, 2] * v[2, c]
        for a in range(3):
            for c in range(3):
                vec[g, a, c] = 0.5 * weights[g] * (pos[g, c] - v[a, c])
    return weights.size


@compiled()
def _fan_points(v, share, foot, nodes, weights, pos, vec, wgt):
    m = 0
    for g in range(nodes.size):
        t = nodes[g]
        e2 = 0.0
        for c in range(3):
            e2 += ((1.0 - t) * v[1, c] + t * v[2, c] - v[0, c]) ** 2
        start = min(foot / math.sqrt(e2), FAN_LATEST)
        for part in range(2):
            # within the foot the charge's share only, beyond it the carried current too
            span = start if part == 0 else 1.0 - start
            for h in range(nodes.size):
                u = span * nodes[h] if part == 0 else start + span * nodes[h]
                w = weights[g] * weights[h] * span
                wgt[m] = 2.0 * u * w
                for c in range(3):
                    e = (1.0 - t) * v[1, c] + t * v[2, c] - v[0, c]
                    pos[m, c] = v[0, c] + u * e
                    vec[m, 0, c] = share * (part - u * u) * w * e
                m += 1
    return m


@compiled()
def _sheet_points(v, kind, share, foot, bary, weights, nodes, wn, pos, vec, wgt):
    """Points on a triangle or fan triangle, their number, and how many halves they carry."""
    if kind == 2:
        return _fan_points(v, share, foot, nodes, wn, pos, vec, wgt), 1
    return _triangle_points(v, bary, weights, pos, vec, wgt), 3


@compiled()
def _one_way(pos, vec, wgt, m, halves, src, q, is_fan, share, foot, nodes, weights, bary, bw, factor, out):
    """Adds factor times the interaction of m observation points with one source to out (20,).

    out: 0..8 vector 1/R by halves, 9..17 vector R, 18 scalar 1/R, 19 scalar R, all for unit charges.
    """
    v = src.corners[q]
    area = src.area[q]
    far_pts = src.points[q]
    far_f = src.moments[q]
    for g in range(m):
        x = pos[g, 0]
        y = pos[g, 1]
        z = pos[g, 2]
        i0, mx, my, mz = _potential(x, y, z, v, src.normal[q], src.along[q], src.outward[q])
        w = factor * wgt[g]
        out[18] += w * i0 / area
        if is_fan:
            fx, fy, fz = _rays(x, y, z, v, foot, nodes, weights)
            half = share / (2.0 * area)
            bx = share * fx - half * (mx + (x - v[0, 0]) * i0)
            by = share * fy - half * (my + (y - v[0, 1]) * i0)
            bz = share * fz - half * (mz + (z - v[0, 2]) * i0)
            for a in range(halves):
                out[3 * a] += factor * (vec[g, a, 0] * bx + vec[g, a, 1] * by + vec[g, a, 2] * bz)
            bx = by = bz = 0.0
            for j in range(3):
                r = math.sqrt((x - far_pts[j, 0]) ** 2 + (y - far_pts[j, 1]) ** 2 + (z - far_pts[j, 2]) ** 2)
                bx += r * far_f[0, j, 0]
                by += r * far_f[0, j, 1]
                bz += r * far_f[0, j, 2]
                out[19] += w * r / 3.0
            for a in range(halves):
                out[9 + 3 * a] += factor * (vec[g, a, 0] * bx + vec[g, a, 1] * by + vec[g, a, 2] * bz)
            continue
        sr = 0.0
        tx = 0.0
        ty = 0.0
        tz = 0.0
        for j in range(bw.size):
            jx = bary[j, 0] * v[0, 0] + bary[j, 1] * v[1, 0] + bary[j, 2] * v[2, 0]
            jy = bary[j, 0] * v[0, 1] + bary[j, 1] * v[1, 1] + bary[j, 2] * v[2, 1]
            jz = bary[j, 0] * v[0, 2] + bary[j, 1] * v[1, 2] + bary[j, 2] * v[2, 2]
            r = bw[j] * math.sqrt((x - jx) ** 2 + (y - jy) ** 2 + (z - jz) ** 2)
            sr += r
            tx += r * jx
            ty += r * jy
            tz += r * jz
        out[19] += w * sr
        for b in range(3):
            bx = (mx + (x - v[b, 0]) * i0) / (2.0 * area)
            by = (my + (y - v[b, 1]) * i0) / (2.0 * area)
            bz = (mz + (z - v[b, 2]) * i0) / (2.0 * area)
            cx = 0.5 * (tx - v[b, 0] * sr)
            cy = 0.5 * (ty - v[b, 1] * sr)
            cz = 0.5 * (tz - v[b, 2] * sr)
            for a in range(halves):
                fx = factor * vec[g, a, 0]
                fy = factor * vec[g, a, 1]
                fz = factor * vec[g, a, 2]
                out[3 * a + b] += fx * bx + fy * by + fz * bz
                out[9 + 3 * a + b] += fx * cx + fy * cy + fz * cz


@compiled()
def _by_points(v, w, bary, bw, out):
    """Two triangles a little apart: both by points, in moments of position about each other's corners."""
    m = bw.size
    xyz = np.empty((m, 3))
    for j in range(m):
        for c in range(3):
            xyz[j, c] = bary[j, 0] * w[0, c] + bary[j, 1] * w[1, c] + bary[j, 2] * w[2, c]
    for i in range(m):
        x = bary[i, 0] * v[0, 0] + bary[i, 1] * v[1, 0] + bary[i, 2] * v[2, 0]
        y = bary[i, 0] * v[0, 1] + bary[i, 1] * v[1, 1] + bary[i, 2] * v[2, 1]
        z = bary[i, 0] * v[0, 2] + bary[i, 1] * v[1, 2] + bary[i, 2] * v[2, 2]
        g0 = g1 = g2 = g3 = 0.0
        r0 = r1 = r2 = r3 = 0.0
        for j in range(m):
            r = math.sqrt((x - xyz[j, 0]) ** 2 + (y - xyz[j, 1]) ** 2 + (z - xyz[j, 2]) ** 2)
            g = bw[j] / r
            g0 += g
            g1 += g * xyz[j, 0]
            g2 += g * xyz[j, 1]
            g3 += g * xyz[j, 2]
            g = bw[j] * r
            r0 += g
            r1 += g * xyz[j, 0]
            r2 += g * xyz[j, 1]
            r3 += g * xyz[j, 2]
        out[18] += bw[i] * g0
        out[19] += bw[i] * r0
        for a in range(3):
            fx = 0.25 * bw[i] * (x - v[a, 0])
            fy = 0.25 * bw[i] * (y - v[a, 1])
            fz = 0.25 * bw[i] * (z - v[a, 2])
            for b in range(3):
                out[3 * a + b] += (
                    fx * (g1 - w[b, 0] * g0) + fy * (g2 - w[b, 1] * g0) + fz * (g3 - w[b, 2] * g0)
                )
                out[9 + 3 * a + b] += (
                    fx * (r1 - w[b, 0] * r0) + fy * (r2 - w[b, 1] * r0) + fz * (r3 - w[b, 2] * r0)
                )


@compiled()
def _shared_vertices(v, w, tolerance2):
    count = 0
    for i in range(3):
        for j in range(3):
            d2 = (v[i, 0] - w[j, 0]) ** 2 + (v[i, 1] - w[j, 1]) ** 2 + (v[i, 2] - w[j, 2]) ** 2
            if d2 < tolerance2:
                count += 1
    return count


@compiled()
def _distance(v, centre, radius):
    """Distance of a segment from a ball."""
    d2 = 0.0
    uu = 0.0
    pu = 0.0
    for c in range(3):
        u = v[1, c] - v[0, c]
        p = centre[c] - v[0, c]
        uu += u * u
        pu += p * u
    t = min(max(pu / uu, 0.0), 1.0)
    for c in range(3):
        d2 += (v[0, c] + t * (v[1, c] - v[0, c]) - centre[c]) ** 2
    return max(math.sqrt(d2) - radius, 0.0)


@compiled()
def sheet_pairs(first, last, direct, ps, qs, kind, size, radius, share, own, sources, rules, out):
    """Fills out[first:last] (pairs, 20) for pairs of which at least q is sheet; p wire, triangle or fan.

    own, sources: the observing elements' shapes, and the same or their images. rules: triangle rules of 3, 7
    and 16 points, then Gauss rules of 4, 6 and 12 points, each as points and weights.
    """
    b3, w3, b7, w7, b16, w16, g4, wg4, g6, wg6, g12, wg12 = rules
    pos = np.empty((192, 3))
    vec = np.zeros((192, 3, 3))
    wgt = np.empty(192)
    flipped = np.empty(20)
    for pair in range(first, last):
        p = ps[pair]
        q = qs[pair]
        res = out[pair]
        fan = kind[q] == 2
        if kind[p] == 0:
            near = _distance(own.corners[p], sources.centre[q], size[q])
            around = 6 if near < 4.037 * radius[p] else 1
            if near > 1.0531 * size[p]:
                nodes, weights = g4, wg4
            elif (
                near > 1e-6 * size[q]
            ):  # a wire that stands on the farthest corner touches, whatever the rounding
                nodes, weights = g6, wg6
            else:
                nodes, weights = g12, wg12
            m = _tube_points(
                own.corners[p], radius[p], sources.centre[q], nodes, weights, around, pos, vec, wgt
            )
            _one_way(pos, vec, wgt, m, 2, sources, q, fan, share[q], radius[q], g12, wg12, b3, w3, 1.0, res)
            continue
        touching = _shared_vertices(own.corners[p], sources.corners[q], 1e-12 * size[p] * size[q])
        if touching == 0 and kind[p] == 1 and kind[q] == 1:
            d2 = 0.0
            for c in range(3):
                d2 += (own.centre[p, c] - sources.centre[q, c]) ** 2
            if d2 > (0.9731 * (size[p] + size[q])) ** 2:
                _by_points(own.corners[p], sources.corners[q], b7, w7, res)
                continue
        itself = direct and p == q
        ratio = size[p] / size[q]
        # observed on the smaller one, on both in turn if alike: nothing depends on the numbering
        uneven = ratio > 1.4737 or ratio * 1.4737 < 1.0
        factor = 1.0 if itself or uneven else 0.5
        rays, wr = (g12, wg12) if touching > 0 else (g4, wg4)
        inner, wi = b7, w7
        outer, wo = b7, w7
        if touching > 1:
            outer, wo = b16, w16
        if not (uneven and ratio > 1.0):
            m, halves = _sheet_points(
                own.corners[p], kind[p], share[p], radius[p], outer, wo, g4, wg4, pos, vec, wgt
            )
            _one_way(
                pos,
                vec,
                wgt,
                m,
                halves,
                sources,
                q,
                fan,
                share[q],
                radius[q],
                rays,
                wr,
                inner,
                wi,
                factor,
                res,
            )
        if itself:
            for a in range(halves):
                for b in range(a):
                    for at in (0, 9):
                        mean = 0.5 * (res[at + 3 * a + b] + res[at + 3 * b + a])
                        res[at + 3 * a + b] = mean
                        res[at + 3 * b + a] = mean
        elif not (uneven and ratio < 1.0):
            flipped[:] = 0.0
            m, halves = _sheet_points(
                sources.corners[q], kind[q], share[q], radius[q], outer, wo, g4, wg4, pos, vec, wgt
            )
            _one_way(
                pos,
                vec,
                wgt,
                m,
                halves,
                own,
                p,
                kind[p] == 2,
                share[p],
                radius[p],
                rays,
                wr,
                inner,
                wi,
                factor,
                flipped,
            )
            for a in range(3):
                for b in range(3):
                    res[3 * a + b] += flipped[3 * b + a]
                    res[9 + 3 * a + b] += flipped[9 + 3 * b + a]
            res[18] += flipped[18]
            res[19] += flipped[19]

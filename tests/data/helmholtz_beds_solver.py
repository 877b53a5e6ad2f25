"""Solver of make_helmholtz_beds.py: geometry, elements, elimination, energy.

See make_helmholtz_beds.py for the equation, the method and the usage.
"""

import math

import numpy as np
from numpy.polynomial import legendre
from scipy.linalg import lu_factor, lu_solve
from scipy.optimize import brentq

TIMES = (-2, -1, 0, 1, 2, 3)
RISE = 2.0  # length in r of the smooth beginning of the slope


class Guide:
    """Geometry and scales of one case."""

    def __init__(self, n, m, delta, eps, flat=False, ending=1.0):
        self.n, self.m, self.delta, self.eps, self.flat = n, m, delta, eps, flat
        self.k_out = 1 / math.sqrt(delta)
        self.k_in = math.sqrt(1 / delta + 1)
        self.wave = 2 * math.pi / self.k_out
        self.g = eps * math.sqrt(delta) / 2
        self.cut = (n - 0.5) * math.pi
        self.time = (m * m * eps) ** (1 / 3)
        self.layer = (m / eps) ** (1 / 3)
        self.deep = self.cut + 1 + RISE / 2
        # The straight slope goes on a little after the last time, then ends
        # smoothly over `fall` in r.
        last = self.cut - TIMES[-1] * self.time
        self.fall = min(last, 1.0)
        self.r_end = TIMES[-1] * self.time + 0.1 * self.fall
        self.fall *= ending
        self.shallow = self.cut - self.r_end - self.fall / 2

    def bed(self, s):
        """D and dD/ds at ranges s."""
        s = np.asarray(s, dtype=float)
        if self.flat:
            return np.full_like(s, self.deep), np.zeros_like(s)
        r = self.g * s
        up = math.pi / (2 * RISE)
        a = up * np.clip(r + 1 + RISE, 0, RISE)
        down = math.pi / (2 * self.fall)
        b = down * np.clip(r - self.r_end, 0, self.fall)
        depth = np.where(r < -1, self.deep - (a / 2 - np.sin(2 * a) / 4) / up, self.cut - r)
        depth = np.where(
            r > self.r_end,
            self.cut - self.r_end - (b / 2 + np.sin(2 * b) / 4) / down,
            depth,
        )
        slope = np.where(r < -1, np.sin(a) ** 2, np.cos(b) ** 2)
        return depth, -self.g * slope

    def mode(self, n, depth):
        """kappa, gamma, beta and flux-normalised amplitude A of trapped mode n."""
        top = min(n * math.pi / depth, 1.0) * (1 - 1e-15)
        kappa = brentq(
            lambda k: k * math.cos(k * depth)
            + self.m * math.sqrt(1 - k * k) * math.sin(k * depth),
            (n - 0.5) * math.pi / depth,
            top,
            xtol=1e-15,
        )
        gamma = math.sqrt(1 - kappa**2)
        beta = math.sqrt(1 / self.delta + gamma**2)
        energy = (
            depth / 2
            - math.sin(2 * kappa * depth) / (4 * kappa)
            + self.m * math.sin(kappa * depth) ** 2 / (2 * gamma)
        )
        return kappa, gamma, beta, (beta * math.sqrt(self.delta) * energy) ** -0.5


class Basis:
    """Lagrange polynomials on Gauss-Lobatto nodes of [-1, 1]."""

    def __init__(self, p):
        self.p = p
        inner = legendre.legroots(legendre.legder([0] * p + [1]))
        self.nodes = np.concatenate([[-1.0], inner, [1.0]])
        self.inverse = np.linalg.inv(legendre.legvander(self.nodes, p))
        self.q, self.weights = legendre.leggauss(p + 5)
        self.values, self.slopes = self.at(self.q)

    def at(self, z):
        """Values and derivatives, shape (points, p + 1)."""
        z = np.atleast_1d(z)
        lower = legendre.legder(np.eye(self.p + 1), axis=0)
        return legendre.legvander(z, self.p) @ self.inverse, (
            legendre.legvander(z, self.p - 1) @ lower @ self.inverse
        )

    def matrix(self, h, left, right, factor):
        """Integral of factor * left_i * right_j over an element of length h."""
        scaled = {0: self.values, 1: self.slopes * (2 / h)}
        return (scaled[left].T * (self.weights * (h / 2) * factor)) @ scaled[right]

    def points(self, a, b):
        return (a + b) / 2 + (b - a) / 2 * self.q


def pieces(breaks, size):
    """Refine a list of breaks to pieces no longer than size."""
    out = [breaks[0]]
    for a, b in zip(breaks[:-1], breaks[1:]):
        count = max(1, math.ceil((b - a) / size - 1e-9))
        out.extend(a + (b - a) * np.arange(1, count + 1) / count)
    return np.array(out)


class Solver:
    """Mesh, elimination and solution of one case."""

    def __init__(self, guide, p, hk, layers, waves, below, beside, strength):
        self.guide, self.basis, self.strength = guide, Basis(p), strength
        size = hk / guide.k_in
        g = guide.g
        # Columns of elements.
        first = -(1 + RISE) / g - guide.wave
        marks = [first, -(1 + RISE) / g, -1 / g]
        marks += [t * guide.time / g for t in TIMES]
        stop = (guide.r_end + guide.fall) / g
        marks += [guide.r_end / g, stop, stop + guide.wave]
        self.s_start, self.s_end, self.wide = first, marks[-1], beside * guide.wave
        self.left = pieces([first - self.wide, first], size)
        self.right = pieces(marks + [marks[-1] + self.wide], size)
        self.end = int(np.argmin(abs(self.right - self.s_end)))
        # Rows: inside in units of D, outside from the bed downwards.
        self.inside = max(1, math.ceil(guide.deep / size))
        self.bottom = max(layers * guide.layer, waves * guide.wave)
        self.below = below * guide.wave
        # Finer next to the bed, where the field bends most.
        outside = pieces([0, size / 2, self.bottom], size)
        absorb = pieces([self.bottom, self.bottom + self.below], 0.6 * size)
        self.xi_in = np.linspace(0, 1, self.inside + 1)
        self.xi_out = np.concatenate([outside, absorb[1:]])
        self.bottom_row = self.inside + len(outside) - 2  # element above the bottom line
        self.rows = self.inside + len(self.xi_out) - 1
        self.size = self.rows * p - 1  # unknowns on one face, both ends zero
        self._vertical_matrices()

    # -- stretching ---------------------------------------------------------
    def stretch_down(self, xi):
        """Stretched depth and its derivative."""
        z = np.clip((xi - self.bottom) / self.below, 0, None)
        return xi + 1j * self.strength * self.below * z**3 / 3, 1 + 1j * self.strength * z**2

    def stretch_side(self, s):
        z = np.maximum(self.s_start - s, s - self.s_end) / self.wide
        return 1 + 1j * self.strength * np.clip(z, 0, None) ** 2

    # -- matrices -----------------------------------------------------------
    def _vertical_matrices(self):
        """Per row the integrals over xi of the terms of the weak form."""
        basis, gd = self.basis, self.guide
        one = np.ones_like(basis.q)
        self.vert = []
        for row in range(self.rows):
            if row < self.inside:
                a, b = self.xi_in[row : row + 2]
                z = basis.points(a, b)
                self.vert.append(
                    dict(
                        mass=basis.matrix(b - a, 0, 0, one),
                        cross=-basis.matrix(b - a, 0, 1, z),
                        stiff=basis.matrix(b - a, 1, 1, one),
                        shear=basis.matrix(b - a, 1, 1, z * z),
                    )
                )
            else:
                a, b = self.xi_out[row - self.inside : row - self.inside + 2]
                d = self.stretch_down(basis.points(a, b))[1]
                stiff = gd.m * basis.matrix(b - a, 1, 1, 1 / d)
                self.vert.append(
                    dict(
                        mass=gd.m * basis.matrix(b - a, 0, 0, d),
                        cross=-gd.m * basis.matrix(b - a, 0, 1, one),
                        stiff=stiff,
                        shear=stiff,
                    )
                )

    def elements(self, a, b):
        """Element matrices of one column, axes (row, i, j, i', j')."""
        basis, gd, h = self.basis, self.guide, b - a
        s = basis.points(a, b)
        depth, slope = gd.bed(s)
        c = self.stretch_side(s)

        def terms(mass, cross, stiff, shear):
            return (
                basis.matrix(h, 1, 1, mass / c),
                basis.matrix(h, 1, 0, cross),
                basis.matrix(h, 0, 0, stiff * c),
                basis.matrix(h, 0, 0, shear * c),
                basis.matrix(h, 0, 0, mass * c),
            )

        one = np.ones_like(s)
        inner = terms(depth, slope, 1 / depth, slope**2 / depth)
        outer = terms(one, slope, one, slope**2)
        out = []
        for row, v in enumerate(self.vert):
            inside = row < self.inside
            ss, cr, st, sh, ms = inner if inside else outer
            k2 = gd.k_in**2 if inside else gd.k_out**2
            # cross[i, i'] v[j, j']: test slope in s times slope in xi, and the transpose.
            e = np.einsum("ab,cd->acbd", ss - k2 * ms, v["mass"])
            x = np.einsum("ab,cd->acbd", cr, v["cross"])
            e = e + x + x.transpose(2, 3, 0, 1)
            e = e + np.einsum("ab,cd->acbd", st, v["stiff"])
            e = e + np.einsum("ab,cd->acbd", sh, v["shear"])
            out.append(e)
        return np.array(out)

    def column(self, a, b):
        """Eliminate all but the two faces: blocks LL, LR, RL, RR and the recovery."""
        p, rows, size = self.basis.p, self.rows, self.size
        n = p + 1
        e = self.elements(a, b).reshape(rows, n * n, n * n)
        index = np.arange(n * n).reshape(n, n)
        core = index[1:-1, 1:-1].ravel()
        rim = np.concatenate([index[0], index[-1], index[1:-1, 0], index[1:-1, -1]])
        back = -np.linalg.solve(
            e[:, core[:, None], core[None, :]], e[:, core[:, None], rim[None, :]]
        )
        e = e[:, rim[:, None], rim[None, :]] + e[:, rim[:, None], core[None, :]] @ back
        # Unknowns of the column: left face, right face, inner horizontal edges;
        # the last place collects the nodes where u = 0.
        edges = (rows - 1) * (p - 1)
        none = 2 * size + edges
        place = np.empty((rows, len(rim)), dtype=int)
        for row in range(rows):
            face = row * p + np.arange(n) - 1
            dead = (face < 0) | (face >= size)
            low = np.full(p - 1, none) if row == 0 else (
                2 * size + (row - 1) * (p - 1) + np.arange(p - 1))
            high = np.full(p - 1, none) if row == rows - 1 else (
                2 * size + row * (p - 1) + np.arange(p - 1))
            place[row] = np.concatenate(
                [np.where(dead, none, face), np.where(dead, none, face + size), low, high]
            )
        whole = np.zeros((none + 1, none + 1), dtype=complex)
        for row in range(rows):
            whole[np.ix_(place[row], place[row])] += e[row]
        faces, inner = slice(0, 2 * size), slice(2 * size, none)
        lift = -np.linalg.solve(whole[inner, inner], whole[inner, faces])
        z = whole[faces, faces] + whole[faces, inner] @ lift
        return (
            z[:size, :size], z[:size, size:], z[size:, :size], z[size:, size:],
            (lift, back, core, rim, place),
        )

    def incoming(self, n=None):
        """Exact mode on the line s_start: nodal values and s-derivative."""
        kappa, gamma, beta, amp = self.guide.mode(n or self.guide.n, self.guide.deep)
        values = []
        for row in range(self.rows):
            if row < self.inside:
                a, b = self.xi_in[row : row + 2]
            else:
                a, b = self.xi_out[row - self.inside : row - self.inside + 2]
            z = (a + b) / 2 + (b - a) / 2 * self.basis.nodes[1:]
            if row < self.inside:
                values.append(amp * np.sin(kappa * self.guide.deep * z))
            else:
                values.append(
                    amp * math.sin(kappa * self.guide.deep)
                    * np.exp(-gamma * self.stretch_down(z)[0])
                )
        return np.concatenate(values)[:-1].astype(complex), beta

    def face_mass(self, depth):
        """Matrix of Int w u v dx on a vertical line over depth D."""
        p = self.basis.p
        full = np.zeros((self.rows * p + 1,) * 2, dtype=complex)
        for row, v in enumerate(self.vert):
            at = slice(row * p, row * p + p + 1)
            full[at, at] += v["mass"] * (depth if row < self.inside else 1)
        return full[1:-1, 1:-1]

    # -- solution -----------------------------------------------------------
    def solve(self, keep=True):
        """Values on all faces right of s_start; the columns' recoveries if kept."""
        size = self.size
        z_left = None
        for a, b in zip(self.left[:-1], self.left[1:]):
            ll, lr, rl, rr, _ = self.column(a, b)
            # u = 0 at the far end.
            z_left = rr if z_left is None else rr - rl @ np.linalg.solve(ll + z_left, lr)
        steps, z = [], None
        for k in range(len(self.right) - 2, -1, -1):
            ll, lr, rl, rr, back = self.column(self.right[k], self.right[k + 1])
            if z is None:  # u = 0 at the far end
                step, z = np.zeros((size, size), dtype=complex), ll
            else:
                step = -lu_solve(lu_factor(rr + z), rl)
                z = ll + lr @ step
            steps.append((step, back if keep and k < self.end else None))
        steps.reverse()
        mode, beta = self.incoming()
        mass = self.face_mass(self.guide.deep)
        u = np.linalg.solve(z_left + z, z_left @ mode - 1j * beta * (mass @ mode))
        self.reflected = u - mode
        self.faces = [u]
        for step, _ in steps:
            self.faces.append(step @ self.faces[-1])
        self.backs = [back for _, back in steps[: self.end]]

    def nodal(self, k):
        """All nodal values of column k, axes (row, i, j)."""
        lift, back, core, rim, place = self.backs[k]
        n = self.basis.p + 1
        ends = np.concatenate([self.faces[k], self.faces[k + 1]])
        known = np.concatenate([ends, lift @ ends, [0]])[place]
        out = np.empty((self.rows, n * n), dtype=complex)
        out[:, rim] = known
        out[:, core] = np.einsum("rij,rj->ri", back, known)
        return out.reshape(self.rows, n, n)

    def on_face(self, k, x):
        """u at depths x on face k."""
        depth = float(self.guide.bed(self.right[k])[0])
        p = self.basis.p
        full = np.concatenate([[0], self.faces[k], [0]])
        out = []
        for point in x:
            if point <= depth:
                grid, offset, place = self.xi_in, 0, point / depth
            else:
                grid, offset, place = self.xi_out, self.inside, point - depth
            i = int(np.clip(np.searchsorted(grid, place) - 1, 0, len(grid) - 2))
            a, b = grid[i : i + 2]
            values = self.basis.at((2 * place - a - b) / (b - a))[0][0]
            row = offset + i
            out.append(values @ full[row * p : row * p + p + 1])
        return np.array(out)

    # -- energy -------------------------------------------------------------
    def end_line(self):
        """x, weight (with w), u, du/ds on s = s_end from 0 to the bottom line."""
        basis, depth = self.basis, self.guide.shallow
        if self.guide.flat:
            depth = self.guide.deep
        h = self.right[self.end] - self.right[self.end - 1]
        values = self.nodal(self.end - 1)
        slope = basis.at(1.0)[1][0] * (2 / h)
        xs, ws, us, ds = [], [], [], []
        for row in range(self.bottom_row + 1):
            if row < self.inside:
                a, b = self.xi_in[row : row + 2] * depth
                shift, w = 0.0, 1.0
            else:
                a, b = self.xi_out[row - self.inside : row - self.inside + 2]
                shift, w = depth, self.guide.m
            xs.append(basis.points(a, b) + shift)
            ws.append(basis.weights * (b - a) / 2 * w)
            us.append(basis.values @ values[row, -1])
            ds.append(basis.values @ (slope @ values[row]))
        return tuple(np.concatenate(v) for v in (xs, ws, us, ds))

    def bottom_line(self):
        """s, x, weight (with w), u, u_s, u_x, dD/ds on the bottom line."""
        basis = self.basis
        a, b = self.xi_out[self.bottom_row - self.inside : self.bottom_row - self.inside + 2]
        down = basis.at(1.0)[1][0] * (2 / (b - a))
        parts = []
        for k in range(self.end):
            h = self.right[k + 1] - self.right[k]
            s = basis.points(self.right[k], self.right[k + 1])
            depth, slope = self.guide.bed(s)
            values = self.nodal(k)[self.bottom_row]
            u_x = basis.values @ (values @ down)
            u_s = basis.slopes @ values[:, -1] * (2 / h) - slope * u_x
            w = basis.weights * h / 2 * self.guide.m
            parts.append((s, depth + b, w, basis.values @ values[:, -1], u_s, u_x, slope))
        return tuple(np.concatenate(v) for v in zip(*parts))

    def balance(self):
        """Fluxes: right, bottom, reflected (bound on all, modes), modes kept at the end."""
        unit = math.sqrt(self.guide.delta)
        x, w, u, u_s = self.end_line()
        right = unit * np.sum(w * (u.conj() * u_s).imag)
        s, xb, wb, ub, ubs, ubx, slope = self.bottom_line()
        bottom = unit * np.sum(wb * (ub.conj() * (ubx - slope * ubs)).imag)
        mass = self.face_mass(self.guide.deep)
        back = []
        for n in range(1, self.guide.n + 1):
            mode, _ = self.incoming(n)
            amp2 = (mode @ mass @ mode).real  # = 1/(beta sqrt(delta))
            back.append(abs(mode @ mass @ self.reflected / amp2) ** 2)
        kept = []
        depth = self.guide.deep if self.guide.flat else self.guide.shallow
        for n in range(1, self.guide.n + 1):
            if (n - 0.5) * math.pi < depth:
                kappa, gamma, beta, amp = self.guide.mode(n, depth)
                shape = amp * np.where(
                    x < depth,
                    np.sin(kappa * x),
                    math.sin(kappa * depth) * np.exp(-gamma * np.maximum(x - depth, 0)),
                )
                kept.append(abs(np.sum(w * shape * u) * beta * unit) ** 2)
        # Whole reflected field on the start line, continuous part included:
        # its flux is at most about this (sqrt(delta) beta <= sqrt(1 + delta)).
        whole = 0.0
        full = np.concatenate([[0], self.reflected, [0]])
        for row in range(self.bottom_row + 1):
            m = self.vert[row]["mass"] * (self.guide.deep if row < self.inside else 1)
            part = full[row * self.basis.p : (row + 1) * self.basis.p + 1]
            whole += (part.conj() @ m @ part).real
        return dict(right=right, bottom=bottom, whole=whole, back=back, kept=kept)

    def far_field(self, angles):
        """Energy flux per radian of angle (radians from the s axis)."""
        gd, depth = self.guide, self.guide.shallow
        x, w, u, u_s = self.end_line()
        s, xb, wb, ub, ubs, ubx, slope = self.bottom_line()
        out = []
        for angle in angles:
            ky, beta = gd.k_out * math.sin(angle), gd.k_out * math.cos(angle)
            kappa = math.sqrt(1 + ky * ky)
            # Standing wave: sin(ky (x - D) + phase) outside, B sin(kappa x) inside.
            phase = math.atan2(
                gd.m * ky * math.sin(kappa * depth), kappa * math.cos(kappa * depth)
            )
            amp = math.hypot(
                math.sin(kappa * depth), kappa * math.cos(kappa * depth) / (gd.m * ky)
            ) ** -1
            v = np.where(x < depth, amp * np.sin(kappa * x), np.sin(ky * (x - depth) + phase))
            total = np.sum(w * v * (u_s + 1j * beta * u))
            e = np.exp(-1j * beta * (s - self.s_end))
            v = np.sin(ky * (xb - depth) + phase) * e
            v_x = ky * np.cos(ky * (xb - depth) + phase) * e
            total += np.sum(wb * (v * (ubx - slope * ubs) - ub * (v_x + slope * 1j * beta * v)))
            project = total / (2j * beta)
            out.append(
                gd.k_out * math.cos(angle) ** 2 * 2 / (math.pi * gd.m) * abs(project) ** 2
            )
        return np.array(out)

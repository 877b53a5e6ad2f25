"""Writes umbilic_large.csv beside this file: both umbilic integrals for parameters up to 1e6 (phases up to 1e16),
at random places and on caustics.

From the one-dimensional form (DLMF 36.2.6, 36.2.8 with u^2 = r), exponent i phi(r) and factor r^(-1/2), along the
curve r = t + i A phi'(t)/sqrt(phi'(t)^2 + G^2), t real: it leaves the real axis to where the integrand decays and
needs no knowledge of which saddle counts. A and G follow the place; what is more than e^-70 down is left out.
Composite Gauss-Legendre rule in ball arithmetic (python-flint) with enough digits for the phase; every number is
computed with two different curves and kept if they agree to 1e-24.

    python3 tests/data/make_umbilic_large.py
"""

import pathlib
import random

from flint import acb, arb, ctx
from mpmath import mp, mpf

random.seed(11)
NODES = 36


def rule():
    """Gauss-Legendre nodes and weights by Newton's method."""
    pairs = []
    for k in range(NODES):
        x = mp.cos(mp.pi * (k + mpf(3) / 4) / (NODES + mpf(1) / 2))
        for _ in range(8):
            p, q = mpf(1), x
            for n in range(2, NODES + 1):
                p, q = q, ((2 * n - 1) * x * q - (n - 1) * p) / n
            slope = NODES * (x * q - p) / (x * x - 1)
            x -= q / slope
        pairs.append((x, 2 / ((1 - x * x) * slope**2)))
    return pairs


def expi(x):
    return acb(0, x).exp()


class Form:
    def __init__(self, elliptic, x, y, z):
        x, y, z = arb(x), arb(y), arb(z)
        self.below = elliptic
        pi = arb.pi()
        if elliptic:
            self.c = (z * z + x, 2 * z, arb(1), y * y / 12)
            self.front = (pi / 3).sqrt() * expi(z * (4 * z * z / 27 + x / 3) - pi / 4)
            self.rates = [(z / 3, 1, 0, 0), (0, 0, 0, y / 6), (4 * z * z / 9 + x / 3, 2 * z, 2, 0)]
        else:
            self.c = (z * z / 2 + x + y, 2 * z, arb(2), -((x - y) ** 2) / 24)
            self.front = 2 * (pi / 6).sqrt() * expi(z * (z * z / 27 + (x + y) / 6) + pi / 4)
            w = (x - y) / 12
            self.rates = [(z / 6, 1, 0, -w), (z / 6, 1, 0, w), (z * z / 9 + (x + y) / 6, z, 2, 0)]

    def phi(self, r, order=0):
        a, b, c, d = self.c
        if order == 0:
            return ((c * r + b) * r + a) * r + d / r
        if order == 1:
            return (3 * c * r + 2 * b) * r + a - d / r**2
        if order == 2:
            return 6 * c * r + 2 * b + 2 * d / r**3
        return 6 * c - 6 * d / r**4

    def clusters(self):
        """First and last saddle of each group, far from the others in its own unit, and that unit."""
        a, b, c, d = (mpf(v.mid().str(70, radius=False)) for v in self.c)
        found = []
        for r in mp.polyroots([3 * c, 2 * b, a, 0, -d], maxsteps=400, extraprec=400):
            r = acb(arb(mp.nstr(r.real, 70)), arb(mp.nstr(r.imag, 70)))
            if abs(float(self.phi(r).imag.mid())) < 120:
                t = float(r.real.mid())
                second, third = (abs(float(self.phi(arb(t), k).mid())) for k in (2, 3))
                found.append((t, min((third / 6) ** (-1 / 3), (second / 2) ** -0.5)))
        found.sort()
        merged = []
        for t, unit in found:
            if merged and t - merged[-1][1] < 24 * max(unit, merged[-1][2]):
                merged[-1] = [merged[-1][0], t, max(unit, merged[-1][2])]
            else:
                merged.append([t, t, unit])
        return merged

    def value(self, width, pairs):
        total = [acb(0)] * 4
        for low, high, unit in self.clusters():
            if abs(low) < 60 * unit or abs(high) < 60 * unit:
                return None
            parts = self.cluster(low, high, unit, width, pairs)
            if parts is None:
                return None
            total = [s + p for s, p in zip(total, parts)]
        psi = self.front * total[0]
        slopes = (sum((c * m for c, m in zip(rate, total)), acb(0)) for rate in self.rates)
        return [psi] + [acb(0, 1) * self.front * s for s in slopes]

    def cluster(self, low, high, unit, width, pairs):
        low, high, unit = arb(low), arb(high), arb(unit)
        a, g = width * unit, 1 / unit
        total = [acb(0)] * 4
        level = self.phi((low + high) / 2)

        def panel(t0, t1):
            sums, largest = [acb(0)] * 4, -1e300
            middle, half = (t0 + t1) / 2, (t1 - t0) / 2
            for x, w in pairs:
                t = middle + half * x
                p1, p2 = self.phi(t, 1), self.phi(t, 2)
                root = (p1 * p1 + g * g).sqrt()
                r = acb(t, a * p1 / root)
                dr = acb(1, a * p2 * g * g / root**3)
                q = r.log()
                if self.below and float(q.imag.mid()) > 2:
                    q -= acb(0, 2 * arb.pi())
                height = acb(0, 1) * (self.phi(r) - level) - q / 2
                f = height.exp() * dr * w * half
                largest = max(largest, float((height + q / 2).real.mid()))
                power = f
                for k in range(3):
                    sums[k] += power
                    power *= r
                sums[3] += f / r
            return sums, largest

        step = unit / 3
        count = int(float(((high - low) / step).mid())) + 1
        if count > 200:
            return None
        for k in range(count):
            sums, _ = panel(low + k * step, low + (k + 1) * step)
            total = [s + p for s, p in zip(total, sums)]
        for start, direction in ((low, -1), (low + count * step, 1)):
            for k in range(400):
                ends = (start + direction * k * step, start + direction * (k + 1) * step)
                sums, largest = panel(*ends)
                total = [s + direction * p for s, p in zip(total, sums)]
                if k > 12 and largest < -70:
                    break
            else:
                return None
        turn = expi(level)
        return [s * turn for s in total]


def on_caustic(elliptic, size):
    """Parameters at which two real saddles merge, and a little off."""
    z = random.uniform(-1, 1) * min(size, 1.5e5)
    r = random.uniform(-1, 1) * max(abs(z), size**0.5)
    c2, c3 = 2 * z, 1.0 if elliptic else 2.0
    inner = -(r**3) * (c2 + 3 * c3 * r)
    c1 = -2 * c2 * r - 3 * c3 * r * r + inner / r**2
    off = random.uniform(-4, 4) * abs(6 * c3 - 6 * inner / r**4) ** (1 / 3)
    if elliptic:
        if inner < 0:
            return None
        return c1 - z * z + off, (12 * inner) ** 0.5, z
    if inner > 0:
        return None
    total, difference = c1 - z * z / 2 + off, (-24 * inner) ** 0.5
    return (total + difference) / 2, (total - difference) / 2, z


def main():
    mp.dps = 75
    ctx.prec = 260
    pairs = [(arb(mp.nstr(x, 70)), arb(mp.nstr(w, 70))) for x, w in rule()]
    rows = []
    for size in (1e3, 1e4, 1e6):
        for kind in range(2):
            for caustic in (False, True):
                made = 0
                while made < 8:
                    if caustic:
                        point = on_caustic(kind == 0, size * 10 ** random.uniform(-1.5, 0))
                        if point is None or max(map(abs, point[:2])) > 3e10:
                            continue
                    else:
                        point = [random.uniform(-size, size) for _ in range(2)]
                        z = random.uniform(-1, 1) * min(size, 2e5)
                        point.append(random.choice([z, random.uniform(-1.5, 1.5) * size**0.5]))
                    form = Form(kind == 0, *point)
                    a, b = form.value(arb(2.5), pairs), form.value(arb(2), pairs)
                    if a is None or b is None:
                        continue
                    gap = max(float(abs(u - v).mid()) for u, v in zip(a, b))
                    if gap > 1e-24 * max(1, max(float(abs(u).mid()) for u in a)):
                        print("disagree", kind, point, gap)
                        continue
                    if float(abs(a[0]).mid()) < 1e-12:
                        continue
                    rows.append((kind, point, a))
                    made += 1
    with open(pathlib.Path(__file__).parent / "umbilic_large.csv", "w") as out:
        print("# Elliptic (kind 0) and hyperbolic (kind 1) umbilic integrals DLMF 36.2.5 and their derivatives, for", file=out)
        print("# parameters up to 1e6 and on caustics (phases up to 1e16). Written by make_umbilic_large.py (ball", file=out)
        print("# arithmetic, absolute error below 1e-24 of the largest; 22 digits). Inputs are exact doubles.", file=out)
        names = [f"{n}_{p}" for n in ("psi", "dx", "dy", "dz") for p in ("re", "im")]
        print("x,y,z," + ",".join(names) + ",kind", file=out)
        for kind, point, value in rows:
            numbers = [p.mid().str(22, radius=False) for w in value for p in (w.real, w.imag)]
            print(",".join([repr(float(p)) for p in point] + numbers + [str(kind)]), file=out)


main()

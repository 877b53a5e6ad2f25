"""Writes umbilic_far.csv beside this file: both umbilic integrals for larger parameters than 6.

Convergent series DLMF 36.8.3, 36.8.4 in ball arithmetic (python-flint), derivatives term by term; the
precision is raised until every component has an error below 1e-25.

    python3 tests/data/make_umbilic_far.py
"""

import math
import pathlib
import random

from flint import acb, arb, ctx

random.seed(3)


def derivatives(z, value, slope, count):
    """Derivatives of an Airy function: u^(k+2) = z u^(k) + k u^(k-1)."""
    out = [value, slope]
    while len(out) < count:
        k = len(out) - 2
        out.append(z * out[k] + (k * out[k - 1] if k else 0))
    return out


def value(elliptic, x, y, z, bits):
    ctx.prec = bits
    count = 60 + int(14 * (1 + abs(z)) ** 3)
    x, y, z, i, pi = arb(x), arb(y), arb(z), acb(0, 1), acb.pi()
    third = arb(1) / 3
    sums = [acb(0)] * 4
    if elliptic:
        scale = arb(12) ** -third
        w = acb(x, y) * scale
        ai, aip, _, _ = w.airy()
        _, _, bi, bip = acb(x, -y).__mul__(scale).airy()
        a = derivatives(w, ai, aip, count + 2)
        b = derivatives(acb(x, -y) * scale, bi, bip, count + 2)
        step, front = -i * (arb(2) / 3) ** (2 * third), 2 * pi**2 * (arb(2) / 3) ** (2 * third)

        def terms(n):
            p, q = a[n + 1] * b[n], a[n] * b[n + 1]
            return (a[n] * b[n]).real, (p + q).real * scale, (q - p).imag * scale
    else:
        scale = arb(3) ** -third
        u, v = acb(x * scale), acb(y * scale)
        a = derivatives(u, u.airy_ai(), u.airy()[1], count + 2)
        b = derivatives(v, v.airy_ai(), v.airy()[1], count + 2)
        step, front = -i * scale**2, 4 * pi**2 * scale**2

        def terms(n):
            return a[n] * b[n], a[n + 1] * b[n] * scale, a[n] * b[n + 1] * scale

    factor = acb(1)
    largest = 0
    for n in range(count):
        f, fx, fy = terms(n)
        sums[0] += factor * f
        sums[1] += factor * fx
        sums[2] += factor * fy
        # d/dz z^(n+1)/(n+1)! = z^n/n!
        sums[3] += factor * step * terms(n + 1)[0]
        last = factor * f * front * count
        factor = factor * step * z / (n + 1)
        if n > 40 and float(abs(last).mid()) == 0:
            break
    return [front * s for s in sums], abs(last)


def main():
    rows = []
    for size in (8, 15, 30, 60):
        for k in range(24):
            elliptic = k % 2 == 0
            x, y = (random.uniform(-size, size) for _ in range(2))
            z = random.choice([1, 0.3]) * random.uniform(-1, 1) * 1.5 * math.sqrt(size)
            if k == 6:
                y = 0.0
            if k == 7:
                y = x
            if k in (10, 11):
                y *= 1e-9
            for bits in (1000, 3000, 9000):
                v, last = value(elliptic, x, y, z, bits)
                parts = [p for w in v for p in (w.real, w.imag)]
                if all(float(p.rad()) < 1e-25 for p in parts) and float(last.mid()) < 1e-25:
                    rows.append((elliptic, x, y, z, parts))
                    break
            else:
                print("given up:", elliptic, x, y, z, max(float(p.rad()) for p in parts), last)
    with open(pathlib.Path(__file__).parent / "umbilic_far.csv", "w") as out:
        print("# Elliptic (kind 0) and hyperbolic (kind 1) umbilic integrals DLMF 36.2.5 and their derivatives, for", file=out)
        print("# larger parameters. Written by make_umbilic_far.py (series DLMF 36.8.3, 36.8.4 in ball arithmetic,", file=out)
        print("# absolute error below 1e-24; 22 digits). Inputs are exact doubles.", file=out)
        names = [f"{n}_{p}" for n in ("psi", "dx", "dy", "dz") for p in ("re", "im")]
        print("x,y,z," + ",".join(names) + ",kind", file=out)
        for elliptic, x, y, z, parts in rows:
            numbers = [p.mid().str(22, radius=False) for p in parts]
            print(",".join([repr(x), repr(y), repr(z)] + numbers + ["0" if elliptic else "1"]), file=out)


main()

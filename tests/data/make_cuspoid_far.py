"""Writes cuspoid_far.csv: swallowtail and butterfly integrals at large real parameters.

Psi_K(x) = integral over the real line of exp(i (t^(K+2) + x_K t^K + .. + x_1 t)) dt (DLMF 36.2.4),
dpsi_dxm = the same with the factor i t^m. Sum over the real saddles of the trapezoidal rule on the
straight line of steepest descent through each (60 digits, two steps agree to 30); points are chosen
where that is enough: saddles far apart, complex ones more than 200 e-foldings away.
Columns: K, x_1 .. x_4 (x_4 = 0 for K = 3), then Psi and the derivatives as re, im pairs (those by
x_4 are 0 for K = 3). Inputs are doubles, printed with repr; outputs 20 digits.

Run: python3 make_cuspoid_far.py > cuspoid_far.csv
"""

import random

import mpmath as mp

mp.mp.dps = 60


def taylor(c, t):
    c = list(c)
    for i in range(len(c) - 1):
        for m in range(len(c) - 2, i - 1, -1):
            c[m] += t * c[m + 1]
    return c


def moments(x):
    k = len(x)
    c = [mp.mpf(0)] + [mp.mpf(v) for v in x] + [mp.mpf(0), mp.mpf(1)]
    slope = [m * c[m] for m in range(k + 2, 0, -1)]
    roots = mp.polyroots(slope, maxsteps=500, extraprec=500)
    total = [mp.mpc(0)] * (k + 1)
    real = 0
    for t in roots:
        if abs(t.imag) > mp.mpf(10) ** -30 * abs(t):
            if abs(mp.polyval(c[::-1], t).imag) < 200:
                return None
            continue
        real += 1
        t = t.real
        a = taylor(c, t)
        far = 11 / mp.sqrt(abs(a[2]))
        if sum(abs(a[m]) * far**m for m in range(3, k + 3)) > 20:
            return None
        scale = mp.expj(mp.pi / 4 * (1 if a[2] > 0 else -1)) / mp.sqrt(abs(a[2]))

        def rule(step):
            sums = [mp.mpc(0)] * (k + 1)
            for j in range(-int(11 / step), int(11 / step) + 1):
                s = scale * j * step
                e = mp.exp(1j * sum(a[m] * s**m for m in range(2, k + 3)))
                for n in range(k + 1):
                    sums[n] += e * (t + s) ** n
            return [v * step * scale for v in sums]

        coarse, fine = rule(mp.mpf(1) / 4), rule(mp.mpf(1) / 5)
        assert all(abs(p - q) < mp.mpf(10) ** -30 * abs(q) for p, q in zip(coarse, fine))
        for n in range(k + 1):
            total[n] += fine[n] * mp.expj(a[0])
    return total if real else None


print("# cuspoid_far.csv: made by make_cuspoid_far.py, which says how.")
names = ["psi"] + [f"dpsi_dx{m}" for m in range(1, 5)]
print(",".join(["K", "x1", "x2", "x3", "x4"] + [f"{n}_{p}" for n in names for p in ("re", "im")]))
random.seed(30)
for k in (3, 4):
    count = 0
    while count < 40:
        size = 10 ** random.uniform(0.9, 2.4)
        x = [random.uniform(-1, 1) * size ** (k + 2 - m) for m in range(1, k + 1)]
        m = moments(x)
        if m is None:
            continue
        values = [m[0]] + [1j * v for v in m[1:]] + [mp.mpc(0)] * (4 - k)
        parts = [mp.nstr(p, 20) for v in values for p in (v.real, v.imag)]
        print(",".join([str(k)] + [repr(v) for v in x + [0.0] * (4 - k)] + parts), flush=True)
        count += 1

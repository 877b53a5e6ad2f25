"""Writes pearcey_far.csv: the Pearcey integral and its derivatives far from the origin.

Psi(x1, x2) = integral over the real line of exp(i (t^4 + x2 t^2 + x1 t)) dt (DLMF 36.2.14),
dpsi_dxm = the same with the factor i t^m.

kind "line": |x2| <= 60, |x1| <= 300, trapezoidal rule on the line t = s exp(i pi/8) with as many
digits as cancel there and 60 more (python-flint, Arb); steps 1/s and 2/(3 s) agree to 40 digits.
kind "saddles": up to 1e6, sum over the real saddles of the trapezoidal rule on the straight line of
steepest descent through each (60 digits, two steps agree to 30). Points are chosen where all others are more
than 200 e-foldings below or away, so that nothing else counts.
Inputs are doubles, printed with repr; outputs 20 digits.

Run: python3 make_pearcey_far.py > pearcey_far.csv
"""

import math
import random

import mpmath as mp
from flint import acb, arb, ctx, fmpq


def exact(x):
    n, d = float(x).as_integer_ratio()
    return arb(fmpq(n, d))


def line(x1, x2):
    """Moments 0, 1, 2 on the rotated line."""
    sin4, sin8 = math.sin(math.pi / 4), math.sin(math.pi / 8)

    def size(s):
        return -(s**4) - x2 * s * s * sin4 + abs(x1) * s * sin8

    reach = 1.0
    while size(reach) > -160 or size(1.01 * reach) > size(reach):
        reach += 0.5
    top = max(size(reach * k / 400) for k in range(401))
    ctx.dps = int(top / math.log(10)) + 80
    turn = (acb(0, 1) * arb.pi() / 8).exp()
    a2, a1 = exact(x2), exact(x1)

    def rule(inverse):
        sums = [acb(0)] * 3
        for k in range(-int(reach * inverse), int(reach * inverse) + 1):
            s = arb(k) / inverse
            t = turn * s
            e = (acb(0, 1) * t * (a2 * t + a1) - s**4).exp()
            sums[0] += e
            sums[1] += e * t
            sums[2] += e * t * t
        return [v * turn / inverse for v in sums]

    inverse = 64
    while True:
        coarse, fine = rule(inverse), rule(3 * inverse // 2)
        if all(abs(p - q) < arb("1e-40") for p, q in zip(coarse, fine)):
            break
        inverse *= 2
    return [mp.mpc(v.real.str(45, radius=False), v.imag.str(45, radius=False)) for v in fine]


def saddles(x1, x2):
    mp.mp.dps = 60
    x1, x2 = mp.mpf(x1), mp.mpf(x2)
    roots = mp.polyroots([4, 0, 2 * x2, x1], maxsteps=300, extraprec=300)
    total = [mp.mpc(0)] * 3
    for t in roots:
        if abs(t.imag) > mp.mpf(10) ** -30 * abs(t):
            level = (t**4 + x2 * t * t + x1 * t).imag
            if abs(level) < 200:
                return None
            continue
        t = t.real
        a2, a3 = 6 * t * t + x2, 4 * t
        if abs(a3) / abs(a2) ** mp.mpf(1.5) > 0.004:
            return None
        scale = mp.expj(mp.pi / 4 * (1 if a2 > 0 else -1)) / mp.sqrt(abs(a2))
        level = t**4 + x2 * t * t + x1 * t

        def rule(step):
            sums = [mp.mpc(0)] * 3
            for k in range(-int(11 / step), int(11 / step) + 1):
                s = scale * k * step
                e = mp.exp(1j * (s * s * (a2 + s * (a3 + s))))
                sums[0] += e
                sums[1] += e * (t + s)
                sums[2] += e * (t + s) ** 2
            return [v * step * scale for v in sums]

        coarse, fine = rule(mp.mpf(1) / 4), rule(mp.mpf(1) / 5)
        assert all(abs(p - q) < mp.mpf(10) ** -30 * abs(q) for p, q in zip(coarse, fine))
        for j in range(3):
            total[j] += fine[j] * mp.expj(level)
    return total


def row(x1, x2, m, kind):
    mp.mp.dps = 40
    psi, d1, d2 = m[0], 1j * m[1], 1j * m[2]
    parts = [p for v in (psi, d1, d2) for p in (v.real, v.imag)]
    print(",".join([repr(x2), repr(x1)] + [mp.nstr(p, 20) for p in parts] + [kind]), flush=True)


print("# pearcey_far.csv: made by make_pearcey_far.py, which says how.")
print("x2,x1,psi_re,psi_im,dpsi_dx1_re,dpsi_dx1_im,dpsi_dx2_re,dpsi_dx2_im,kind")
random.seed(20)
count = 0
while count < 150:
    x2 = random.uniform(-60, 60)
    x1 = random.uniform(-300, 300)
    if count % 3 == 0:
        # Near the caustic.
        x2 = -abs(x2)
        x1 = math.sqrt(8 / 27) * abs(x2) ** 1.5 * (1 + random.uniform(-0.3, 0.3))
    if abs(x2) <= 16 and abs(x1) <= 32:
        continue
    row(x1, x2, line(x1, x2), "line")
    count += 1
count = 0
while count < 60:
    x2 = random.choice((-1, 1)) * 10 ** random.uniform(1.8, 6)
    x1 = random.choice((-1, 1)) * 10 ** random.uniform(2, 6)
    m = saddles(x1, x2)
    if m is not None:
        row(x1, x2, m, "saddles")
        count += 1

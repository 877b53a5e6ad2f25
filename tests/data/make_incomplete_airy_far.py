"""Writes tests/data/incomplete_airy_far.csv: incomplete Airy integrals at larger arguments.

I_0(x, 0) = pi (Ai + i Gi) and I_1(x, 0) = -i d/dx of it (DLMF 9.5.3, 9.12.19, continued to complex x),
minus the Maclaurin series of the integral from 0 to a, in ball arithmetic (python-flint) of
precision enough for its terms; the power of two apart.

    python3 tests/data/make_incomplete_airy_far.py > tests/data/incomplete_airy_far.csv
"""

import math
import random

from flint import acb, arb, ctx

random.seed(22)


def integrals(x, a):
    height = abs(a) ** 3 / 3 + abs(x) * abs(a) + abs(x) ** 1.5
    ctx.prec = int(4 * height) + 400
    i = acb(0, 1)
    z, b = acb(x.real, x.imag), acb(a.real, a.imag)
    third, w = acb(1) / 3, z**3 / 9
    ai, aip, bi, bip = z.airy()
    gi = bi / 3 - z * z / (2 * acb.pi()) * w.hypgeom([acb(1)], [4 * third, 5 * third])
    gip = bip / 3 - z / acb.pi() * w.hypgeom([acb(1)], [2 * third, 4 * third])
    i0, i1 = acb.pi() * (ai + i * gi), -i * acb.pi() * (aip + i * gip)
    # t_n = c_n a^n of the integrand: (n+1) c_(n+1) = i (x c_n + c_(n-2)).
    t, n = [acb(0), acb(0), acb(1)], 0
    cube, first = i * b**3, i * z * b
    small = arb(2) ** (-ctx.prec)
    while n < 20 or n < 4 * height or not all(abs(v).upper() < small for v in t):
        i0 -= t[2] * b / (n + 1)
        i1 -= t[2] * b * b / (n + 2)
        t = [t[1], t[2], (first * t[2] + cube * t[0]) / (n + 1)]
        n += 1
    # What is left out is below 2^-precision by far, beside values above 2^(-2 height).
    return i0, i1


print("# Incomplete Airy integrals I_m(x, a) = integral from t = a to infinity exp(i pi/6) of t^m exp(i (t^3/3 + x t)) dt, larger arguments.")
print("# Each value is (re + i im) 2^e. Maclaurin series in ball arithmetic (python-flint); make_incomplete_airy_far.py.")
print("x_re,x_im,a_re,a_im,i0_re,i0_im,i0_e,i1_re,i1_im,i1_e")
for k in range(40):
    r = math.exp(random.uniform(math.log(20), math.log(200)))
    angle = random.uniform(-math.pi, math.pi)
    x = complex(r * math.cos(angle), r * math.sin(angle))
    s = math.exp(random.uniform(math.log(4), math.log(18)))
    angle = random.uniform(-math.pi, math.pi)
    a = complex(s * math.cos(angle), s * math.sin(angle))
    if k % 3 == 0:
        # Close to a saddle.
        a = (-x) ** 0.5 * random.choice((1, -1)) + random.uniform(-0.3, 0.3)
    row = [repr(v) for v in (x.real, x.imag, a.real, a.imag)]
    for v in integrals(x, a):
        assert abs(v).rad() < abs(v).mid() * arb(2) ** -80, (x, a)
        e = int((abs(v).mid().log() / arb(2).log()).mid().floor().unique_fmpz())
        v *= arb(2) ** -e
        row += [v.real.mid().str(22, radius=False), v.imag.mid().str(22, radius=False), str(e)]
    print(",".join(row))

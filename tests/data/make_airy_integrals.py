"""Writes tests/data/airy_integrals.csv: integrals of Ai, and Scorer functions, up to |z| = 100.

    python3 tests/data/make_airy_integrals.py > tests/data/airy_integrals.csv
"""

import math
import random

from flint import acb, arb, ctx

random.seed(21)


def values(z):
    x = acb(z.real, z.imag)
    third, w = acb(1) / 3, x**3 / 9
    ai0, aip0, _, _ = acb(0).airy()
    ai, aip, bi, bip = x.airy()
    zero = ai0 * x * w.hypgeom([third], [2 * third, 4 * third])
    zero += aip0 * x * x / 2 * w.hypgeom([2 * third], [4 * third, 5 * third])
    p = x * x / (2 * acb.pi()) * w.hypgeom([acb(1)], [4 * third, 5 * third])
    q = x / acb.pi() * w.hypgeom([acb(1)], [2 * third, 4 * third])
    return [zero, third - zero, bi / 3 - p, bip / 3 - q, 2 * bi / 3 + p, 2 * bip / 3 + q]


def digits(z):
    ctx.prec = 400
    while True:
        out = []
        for v in values(z):
            size = abs(v)
            if size.rad() > size.mid() * arb(2) ** -80:
                break
            for part in (v.real, v.imag):
                # A component far below the modulus keeps the digits that matter beside it.
                out.append(part.mid().str(22, radius=False))
        else:
            return out
        ctx.prec *= 2


print("# Integral of Ai from 0 to z (from0) and from z to infinity in |arg t| < pi/3 (toinf), Gi, Gi', Hi, Hi'. DLMF 9.10, 9.12.")
print("# 1F2 series in ball arithmetic (python-flint), precision raised until every modulus was proven to 2^-80; make_airy_integrals.py.")
print("# Points: |z| log-uniform 1e-3..100; arg uniform, every sixth on the real axis, every sixth within 1e-3 of a ray arg = j pi/3.")
names = ["from0", "toinf", "gi", "gip", "hi", "hip"]
print("z_re,z_im," + ",".join(f"{n}_re,{n}_im" for n in names))
for i in range(360):
    r = math.exp(random.uniform(math.log(1e-3), math.log(100.0)))
    if i % 3 == 0:
        r = random.uniform(1.0, 25.0)
    angle = random.uniform(-math.pi, math.pi)
    z = complex(r * math.cos(angle), r * math.sin(angle))
    if i % 6 == 1:
        z = complex(random.choice((r, -r)), 0.0)
    if i % 6 == 2:
        angle = random.randrange(-2, 4) * math.pi / 3 + random.uniform(-1e-3, 1e-3)
        z = complex(r * math.cos(angle), r * math.sin(angle))
    print(",".join([repr(z.real), repr(z.imag)] + digits(z)))

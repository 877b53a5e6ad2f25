"""Writes tests/data/airy_extended.csv: Airy functions with the power of two apart, and rotated.

    python3 tests/data/make_airy_extended.py > tests/data/airy_extended.csv
"""

import math
import random

from flint import acb, arb, ctx

random.seed(20)


def digits(z):
    """The Airy functions at z and at z e^(+-2 pi i/3), to 30 certain digits, as (mantissa, exponent)."""
    ctx.prec = 200
    while True:
        w = acb(arb(-1) / 2, arb(3).sqrt() / 2)
        x = acb(z.real, z.imag)
        values = list(x.airy())
        for point in (x * w, x / w):
            values += list(point.airy())[:2]
        out = []
        for v in values:
            size = abs(v)
            if size.rad() > size.mid() * arb(2) ** -100:
                break
            exponent = int((size.mid().log() / arb(2).log()).mid().floor().unique_fmpz())
            m = v * arb(2) ** -exponent
            out += [m.real.mid().str(25, radius=False), m.imag.mid().str(25, radius=False), str(exponent)]
        else:
            return out
        ctx.prec *= 2


print("# Airy functions with the power of two apart: each value is (re + i im) 2^e with |re + i im| in [1, 2).")
print("# Ai, Ai', Bi, Bi' at z; Ai, Ai' at z e^(2 pi i/3) (plus) and at z e^(-2 pi i/3) (minus). Definitions: DLMF 9.2.")
print("# Ball arithmetic (python-flint), precision raised until every modulus was proven to 2^-100; make_airy_extended.py.")
print("# Points: |z| log-uniform, 1e-3..100 (100 rows), 100..1e6 (150), 1e6..1e12 (50); arg uniform, every tenth within 1e-3 of the real axis.")
names = ["ai", "aip", "bi", "bip", "plus", "plusp", "minus", "minusp"]
print("z_re,z_im," + ",".join(f"{n}_re,{n}_im,{n}_e" for n in names))
for low, high, count in ((1e-3, 1e2, 100), (1e2, 1e6, 150), (1e6, 1e12, 50)):
    for i in range(count):
        r = math.exp(random.uniform(math.log(low), math.log(high)))
        angle = random.uniform(-math.pi, math.pi)
        if i % 10 == 0:
            angle = random.choice((0.0, math.pi)) + random.uniform(-1e-3, 1e-3)
        z = complex(r * math.cos(angle), r * math.sin(angle))
        print(",".join([repr(z.real), repr(z.imag)] + digits(z)))

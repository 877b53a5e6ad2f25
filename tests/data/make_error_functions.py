"""Writes error_functions.csv and faddeeva_extended.csv beside this file, by ball arithmetic (python-flint).

The working precision is raised until every nonzero component is proven to 25 digits; 22 are printed.

    python3 tests/data/make_error_functions.py
"""

import math
import pathlib
import random

from flint import acb, arb, ctx

HERE = pathlib.Path(__file__).parent
random.seed(7)


def proven(function):
    """Components of the values of `function()` as decimal strings."""
    for bits in (200, 400, 800, 1600, 6400):
        ctx.prec = bits
        parts = [p for v in function() for p in (v.real, v.imag)]
        if all(p == 0 or p.rel_accuracy_bits() > 84 for p in parts):
            return parts
    return None


def text(p):
    return "0" if p == 0 else p.str(22, radius=False)


def functions(z):
    z, pi, i = acb(*z), acb.pi(), acb(0, 1)
    a = pi.sqrt() / 2 * (1 - i)
    return [
        z.erf(),
        z.erfc(),
        pi.sqrt() / 2 * (-z * z).exp() * z.erfi(),
        (1 + i) / 2 * (a * z).erfc(),
        z.fresnel_c(),
        z.fresnel_s(),
    ]


def point(low, high):
    r = 10 ** random.uniform(low, high)
    kind = random.random()
    angle = random.uniform(-math.pi, math.pi)
    if kind < 0.2:
        # On or near an axis or a diagonal.
        off = random.choice([0.0, 10 ** random.uniform(-12, -3)])
        angle = random.randrange(8) * math.pi / 4 + off
    x, y = r * math.cos(angle), r * math.sin(angle)
    if kind < 0.1:
        x, y = random.choice([(r, 0.0), (-r, 0.0), (0.0, r), (0.0, -r)])
    return x, y


def in_range(p):
    return p == 0 or -290 < float(abs(p).log().mid()) / math.log(10) < 290


with open(HERE / "error_functions.csv", "w") as out:
    print("# erf z, erfc z (DLMF 7.2.1, 7.2.2), Dawson's integral (7.2.5), the complex Fresnel integral", file=out)
    print("# (7.2.6), Fresnel integrals C, S (7.2.7, 7.2.8). Written by make_error_functions.py (ball", file=out)
    print("# arithmetic, every nonzero component proven to 25 digits); inputs are exact doubles.", file=out)
    names = ["erf", "erfc", "dawson", "f", "c", "s"]
    print("z_re,z_im," + ",".join(f"{n}_re,{n}_im" for n in names), file=out)
    rows = 0
    while rows < 500:
        z = point(-3, 1.3) if rows % 5 else point(-8, 4)
        parts = proven(lambda: functions(z))
        if parts and all(in_range(p) for p in parts):
            print(",".join([repr(z[0]), repr(z[1])] + [text(p) for p in parts]), file=out)
            rows += 1

with open(HERE / "faddeeva_extended.csv", "w") as out:
    print("# w(z) = (w_re + i w_im) 2^exponent (DLMF 7.2.3). Written by make_error_functions.py (ball", file=out)
    print("# arithmetic, every nonzero component proven to 25 digits); inputs are exact doubles.", file=out)
    print("z_re,z_im,w_re,w_im,exponent", file=out)
    rows = 0
    while rows < 150:
        z = point(0.5, 5.0)
        exponent = int((z[1] ** 2 - z[0] ** 2) / math.log(2)) if z[1] < 0 and abs(z[1]) > abs(z[0]) else 0

        def value():
            # For the lower half plane DLMF 7.4.3; the sum of Arb's own erfc is slow there.
            v = acb(*z)
            i = acb(0, 1)
            up = v if z[1] >= 0 else -v
            w = (-up * up).exp() * (-i * up).erfc()
            if z[1] < 0:
                w = 2 * (-v * v).exp() - w
            return [w * acb(2) ** (-exponent)]

        parts = proven(value)
        if parts and all(in_range(p) for p in parts):
            print(",".join([repr(z[0]), repr(z[1])] + [text(p) for p in parts] + [str(exponent)]), file=out)
            rows += 1

"""Writes fold_extremes.csv: 2 pi i J_{k(1+a)}(k) (DLMF 10.9.17) for very small and very large k.

Ball arithmetic (python-flint). k <= 1: the Bessel function. k >= 1e5: integration along straight
lines through the saddles, cut where the integrand is below e^-150 of its maximum: rays from 0 in
the directions -+60 degrees for |a| <= 1e-3, lines of steepest descent through the separate saddles
otherwise.
"""

import cmath
import math

from flint import acb, arb, ctx


def exact(z):
    return acb(arb(z.real), arb(z.imag))


def integral(k, a, legs):
    """Sum of integrals over straight legs (from, to) of exp(k (sinh z - (1 + a) z))."""
    kk, aa = acb(arb(k)), acb(1) + acb(arb(a))
    for bits in (300, 1000, 3000, 9000):
        ctx.prec = bits
        total = acb(0)
        for start, end in legs:
            total += acb.integral(
                lambda z, _: (kk * (z.sinh() - aa * z)).exp(), start(), end(), eval_limit=10**6
            )
        if total.imag.rel_accuracy_bits() > 90:
            return total
    return None


def value(k, a):
    if k <= 1.0:
        ctx.prec = 300
        kk = acb(arb(k))
        return acb(0, 2) * acb.pi() * kk.bessel_j(kk * (acb(1) + acb(arb(a))))
    if abs(a) <= 1e-3:
        reach = 1e-4
        while k * (reach**3 / 6 - abs(a) * reach) < 150 + 2 * k * abs(a) ** 1.5:
            reach *= 1.1
        up = cmath.rect(reach, math.pi / 3)
        legs = [
            (lambda: exact(up.conjugate()), lambda: acb(0)),
            (lambda: acb(0), lambda: exact(up)),
        ]
    elif a > 0:
        step = math.sqrt(300 / (k * math.sinh(math.acosh(1 + a))))
        middle = lambda: (acb(1) + acb(arb(a))).acosh()
        legs = [(lambda: middle() - exact(1j * step), lambda: middle() + exact(1j * step))]
    else:
        step = math.sqrt(300 / (k * math.sin(math.acos(1 + a))))
        out = cmath.rect(step, math.pi / 4)
        high = lambda: acb(0, 1) * (acb(1) + acb(arb(a))).acos()
        legs = [
            (lambda: -high() + exact(out.conjugate()), lambda: -high() - exact(out.conjugate())),
            (lambda: high() - exact(out), lambda: high() + exact(out)),
        ]
    return integral(k, a, legs)


print("# Integral of exp(k (sinh z - (1+a) z)) from inf - i pi to inf + i pi = 2 pi i J_{k(1+a)}(k), DLMF 10.9.17.")
print("# a is an exact double, 1 + a not rounded. The value is i im 2^exponent. Written by fold_extremes.py (ball arithmetic).")
print("k,a,im,exponent")
for k in [1e-3, 1e-2, 0.1, 1.0, 1e5, 1e6, 1e7]:
    for a in [0.0, 1e-9, -1e-9, 1e-6, -1e-6, 1e-3, -1e-3, 0.03, -0.03, 0.25, -0.25, 0.75, 1.5]:
        total = value(k, a)
        if total is None:
            continue
        exponent = int(float(total.abs_upper().log() / arb(2).log()))
        print(f"{k!r},{a!r},{(total.imag * arb(2) ** -exponent).str(20, radius=False)},{exponent}")

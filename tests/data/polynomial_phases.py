"""Writes polynomial_phases.csv: integrals with random polynomial phases between random valleys.

Ball arithmetic (python-flint's adaptive integration) along the two valley rays joined at 0, with
the precision raised until 25 digits are proven, however strongly the integrand cancels.
"""

import random

from flint import acb, arb, ctx

random.seed(20)


def ball(z):
    return acb(arb(z.real), arb(z.imag))


def integrate(coefficients, k, ends, amplitude, radius):
    import math

    degree = len(coefficients) - 1
    top = coefficients[-1]
    for bits in (400, 1000, 2500, 6000):
        ctx.prec = bits
        c = [ball(x) for x in coefficients]

        def integrand(z, _):
            f = acb(0)
            for x in reversed(c):
                f = f * z + x
            return amplitude(z) * (acb(0, 1) * k * f).exp()

        total = acb(0)
        ok = True
        for sign, v in ((-1, ends[0]), (1, ends[1])):
            # Valley v: i * top * z^degree is negative real.
            angle = (math.pi / 2 - math.atan2(top.imag, top.real) + 2 * math.pi * v) / degree
            far = acb(arb(radius) * arb(angle).cos(), arb(radius) * arb(angle).sin())
            part = acb.integral(integrand, acb(0), far, abs_tol=arb(2) ** -bits, rel_tol=arb(2) ** -bits)
            total += sign * part
        if total.rel_accuracy_bits() > 90:
            return total
    return None


def value(total):
    size = float(total.abs_upper().log() / arb(2).log())
    exponent = int(size)
    scaled = total * arb(2) ** -exponent
    return scaled.real.str(20, radius=False), scaled.imag.str(20, radius=False), exponent


AMPLITUDES = {
    "one": lambda z: acb(1),
    "cosh": lambda z: (z * acb(0.5)).cosh(),
    "linear": lambda z: z - acb(0.25),
}

print("# Integrals of g(z) exp(i k f(z)) dz between two valleys of a random polynomial phase f = c0 + c1 z + ..")
print("# Valley v of degree n: arg z = (pi/2 - arg c_n + 2 pi v)/n. g: one = 1, cosh = cosh(z/2), linear = z - 1/4.")
print("# Value = (re + i im) 2^exponent. Written by polynomial_phases.py (ball arithmetic, 25 digits proven).")
print("k,from,to,g,re,im,exponent,coefficients (re im pairs)")
count = 0
while count < 150:
    degree = random.choice([3, 4, 5, 6, 7])
    k = random.choice([0.01, 1.0, 10.0, 100.0, 1000.0])
    coefficients = [complex(random.gauss(0, 1), random.gauss(0, 1)) for _ in range(degree)]
    if random.random() < 0.4:  # real phases: saddles of equal height
        coefficients = [complex(c.real, 0) for c in coefficients]
    if random.random() < 0.3:  # saddles close together
        coefficients = [c * 0.02 for c in coefficients]
    top = complex(1, 0) if random.random() < 0.5 else complex(random.gauss(0, 1), random.gauss(0, 1))
    coefficients.append(top)
    start, end = random.sample(range(degree), 2)
    name = random.choice(list(AMPLITUDES))
    # Far enough that nothing is left: |top| k r^n far above all else.
    radius = 1.0
    while k * (abs(top) * radius**degree - sum(abs(c) * radius**j for j, c in enumerate(coefficients[:-1]))) < 150 + radius:
        radius *= 1.1
    # The cut-off tail must also be small against an exponentially small value.
    deepest = k * sum(abs(c) * 2.0**j for j, c in enumerate(coefficients))
    while k * (abs(top) * radius**degree - sum(abs(c) * radius**j for j, c in enumerate(coefficients[:-1]))) < 150 + deepest:
        radius *= 1.1
    total = integrate(coefficients, k, (start, end), AMPLITUDES[name], radius)
    if total is None:
        continue
    re, im, exponent = value(total)
    flat = ",".join(f"{c.real!r},{c.imag!r}" for c in coefficients)
    print(f"{k!r},{start},{end},{name},{re},{im},{exponent},{flat}")
    count += 1

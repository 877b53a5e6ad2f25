"""Writes src/special/faddeeva/nodes.rs: quadrature rules for the integral DLMF 7.7.2.

Trapezoidal rules of spacing 1/2, nodes at 0, 1/2, 1, .. or at 1/4, 3/4, ..; Gauss-Hermite rules
(DLMF 3.5.28) of 20, 12 and 8 points, whose nodes are the zeros of H_n by Newton's iteration. All
by 60-digit arithmetic (mpmath), rounded to nearest. A pair of nodes +-t counts once; its weight
is that of the rule times 2/pi.

    python3 tests/data/make_faddeeva_nodes.py > src/special/faddeeva/nodes.rs
"""

import mpmath as mp
import numpy as np

mp.mp.dps = 60


def trapezoidal(first, count):
    rule = []
    for n in range(count):
        t = mp.mpf(first) + mp.mpf(n) / 2
        half = 2 if t == 0 else 1
        rule.append((t, mp.exp(-t * t) / (mp.pi * half)))
    return rule


def hermite(n):
    rule = []
    for start in np.polynomial.hermite.hermgauss(n)[0]:
        if start < 0:
            continue
        t = mp.findroot(lambda t: mp.hermite(n, t), mp.mpf(float(start)))
        weight = mp.mpf(2) ** (n - 1) * mp.factorial(n) * mp.sqrt(mp.pi)
        weight /= (n * mp.hermite(n - 1, t)) ** 2
        rule.append((t, 2 * weight / mp.pi))
    return rule


def show(name, what, rule):
    print(f"/// {what}")
    print(f"pub(super) static {name}: Rule<{len(rule)}> = Rule::new([")
    for node, weight in rule:
        print(f"    [{float(node)!r}, {float(weight)!r}],")
    print("]);")


print("//! Quadrature rules for `(i/pi) integral of exp(-t^2)/(z - t) dt` (DLMF 7.7.2).")
print("//!")
print("//! Written by `tests/data/make_faddeeva_nodes.py` (60 digits, rounded to nearest): nodes of a")
print("//! pair and its weight times `2/pi`.")
print()
print("use super::kernel::Rule;")
print()
show("WHOLE", "Trapezoidal rule, nodes at 0, 1/2, 1, ..", trapezoidal(0, 14))
show("HALF", "Trapezoidal rule, nodes at 1/4, 3/4, ..", trapezoidal(0.25, 14))
show("HERMITE_20", "Gauss-Hermite rule of 20 points.", hermite(20))
show("HERMITE_12", "Gauss-Hermite rule of 12 points.", hermite(12))
show("HERMITE_8", "Gauss-Hermite rule of 8 points.", hermite(8))

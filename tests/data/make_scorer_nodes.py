"""Writes src/special/airy/scorer_nodes.rs: the Scorer functions on lattices.

Complex: Hi, Hi' and Hi'' at z = (m + i n)/2, every node nearest to some point of 2 pi/3 <= arg z <= pi,
|z| <= RADIUS. Real: Gi, Gi', Gi'' at m/2 on the positive, Hi, Hi', Hi'' on the negative axis.
Hi = 2 Bi/3 + W, Gi = Bi/3 - W with W = z^2/(2 pi) 1F2(1; 4/3, 5/3; z^3/9) (DLMF 9.12(ii)), in
ball arithmetic (python-flint) at 600 bits, rounded to the nearest double.

    python3 tests/data/make_scorer_nodes.py > src/special/airy/scorer_nodes.rs
"""

import math

from flint import acb, arb, ctx

ctx.prec = 600
SPACING = 0.5
RADIUS = 16.0


def particular(z):
    third = acb(1) / 3
    return z * z / (2 * acb.pi()) * (z**3 / 9).hypgeom([acb(1)], [4 * third, 5 * third])


def particular_prime(z):
    # d/dz by the series itself: W = sum_k z^(3k+2) c_k, c_0 = 1/(2 pi), c_k = c_(k-1)/((3k+1)(3k+2)).
    total, term, k = acb(0), z / (2 * acb.pi()), 0
    while k < 400:
        total += (3 * k + 2) * term
        k += 1
        term *= z**3 / ((3 * k + 1) * (3 * k + 2))
    return total


def scorer(z):
    """Gi, Gi', Gi'', Hi, Hi', Hi''."""
    _, _, bi, bip = z.airy()
    w, wp = particular(z), particular_prime(z)
    gi, hi, r = bi / 3 - w, 2 * bi / 3 + w, 1 / acb.pi()
    return gi, bip / 3 - wp, z * gi - r, hi, 2 * bip / 3 + wp, z * hi + r


def literals(values):
    out = []
    for v in values:
        for part in (v.real, v.imag):
            assert part == 0 or part.rad() <= abs(part.mid()) * arb(2) ** -70, v
            text = repr(float(part.mid()) + 0.0)
            out.append(text.replace(repr(1 / math.pi), "std::f64::consts::FRAC_1_PI"))
    return out


rows, nodes = [], []
n = 0
while (n - 0.5) * SPACING < RADIUS * math.sqrt(0.75):
    low, high = max(0.0, (n - 0.5) * SPACING), (n + 0.5) * SPACING
    first = -round(math.sqrt(RADIUS**2 - low**2) / SPACING + 1e-9)
    # The ray arg z = 2 pi/3 is folded onto with rounding errors: a margin beyond it.
    last = -round(low / math.sqrt(3) / SPACING - 1e-6)
    rows.append(len(nodes) - first)
    for m in range(first, last + 1):
        nodes.append(literals(scorer(acb(m * SPACING, n * SPACING))[3:]))
    n += 1

print("//! The Scorer functions on lattices: Hi where it is algebraic, Gi on the positive axis.")
print("//!")
print("//! Written by `tests/data/make_scorer_nodes.py` (ball arithmetic, rounded to nearest).")
print()
print("/// The complex nodes serve `2 pi/3 <= arg z <= pi` within this distance of the origin.")
print(f"pub(super) const RADIUS: f64 = {RADIUS};")
print()
print("/// Index in [`NODES`] of the node `m = 0` of row `n`, were it there.")
print("#[rustfmt::skip]")
print(f"pub(super) const ROW: [usize; {len(rows)}] = [{', '.join(map(str, rows))}];")
print()
print("/// Real and imaginary parts of Hi, Hi', Hi'' at `(m + i n)/2`.")
print("#[rustfmt::skip]")
print(f"pub(super) static NODES: [[f64; 6]; {len(nodes)}] = [")
for node in nodes:
    print("    [" + ", ".join(node) + "],")
print("];")
for name, text, index, sign in (("POSITIVE", "Gi, Gi', Gi'' at `m/2`", 0, 1), ("NEGATIVE", "Hi, Hi', Hi'' at `-m/2`", 3, -1)):
    count = int(RADIUS / SPACING) + 1
    print()
    print(f"/// {text}.")
    print("#[rustfmt::skip]")
    print(f"pub(super) static {name}: [[f64; 3]; {count}] = [")
    for m in range(count):
        values = literals(scorer(acb(sign * m * SPACING))[index : index + 3])
        print(f"    [{values[0]}, {values[2]}, {values[4]}],")
    print("];")

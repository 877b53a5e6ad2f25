"""Writes src/special/cuspoid/pearcey_nodes.rs: moments of the Pearcey integral on a lattice.

M_j(x1, x2) = integral over the real line of t^j exp(i (t^4 + x2 t^2 + x1 t)) dt, j = 0, 1, 2
(DLMF 36.2.1, 36.2.4), by the trapezoidal rule on the line t = s exp(i pi/8) with 110 digits
(python-flint, Arb). On that line the integrand is exp(-s^4 + ..): the rule converges like
exp(-const/step^2) and up to 35 digits cancel. Two steps must agree to 40 digits.

Run: python3 make_pearcey_nodes.py > ../../src/special/cuspoid/pearcey_nodes.rs
"""

from flint import acb, arb, ctx

ctx.dps = 110
TURN = (acb(0, 1) * arb.pi() / 8).exp()


def lattice(inverse, reach=6):
    """s, t and exp(i t^4) = exp(-s^4) at the points of the rule."""
    count = reach * inverse
    step = arb(1) / inverse
    out = []
    for k in range(-count, count + 1):
        s = arb(k) * step
        out.append((TURN * s, (-(s**4)).exp()))
    return out


COARSE = lattice(48)
FINE = lattice(64)
I = acb(0, 1)


def moments(x1, x2, points, step):
    sums = [acb(0)] * 3
    for t, weight in points:
        e = (I * t * (x2 * t + x1)).exp() * weight
        sums[0] += e
        e *= t
        sums[1] += e
        sums[2] += e * t
    return [s * TURN * step for s in sums]


def main():
    print("//! Moments of the Pearcey integral on a lattice, the start of a Taylor step.")
    print("//!")
    print("//! `NODES[i][j]` holds real and imaginary part of `integral of t^n exp(i f(t)) dt` over the")
    print("//! real line, n = 0, 1, 2, at `x_1 = 1.5 j` and `x_2 = -16, -15.5 .. -8, -7 .. 0, 2, .. 16`.")
    print("//! Recipe: tests/data/make_pearcey_nodes.py (trapezoidal rule at 110 digits, two steps agree")
    print("//! to 40).")
    print()
    print("/// Nodes in `x_2`.")
    print("pub(super) const ROWS: usize = 33;")
    print("/// Nodes in `x_1`.")
    print("pub(super) const COLUMNS: usize = 22;")
    print()
    print("#[rustfmt::skip]")
    print("pub(super) static NODES: [[[f64; 6]; COLUMNS]; ROWS] = [")
    halves = list(range(-32, -16)) + list(range(-16, 0, 2)) + list(range(0, 33, 4))
    assert len(halves) == 33
    for i in halves:
        print("    [")
        for j in range(22):
            x2, x1 = arb(i) / 2, arb(3 * j) / 2
            fine = moments(x1, x2, FINE, arb(1) / 64)
            coarse = moments(x1, x2, COARSE, arb(1) / 48)
            assert all(abs(a - b) < 1e-40 for a, b in zip(fine, coarse)), (i, j)
            parts = [p for m in fine for p in (m.real, m.imag)]
            text = ", ".join(repr(0.0 if abs(p) < 1e-60 else float(p.mid())) for p in parts)
            print(f"        [{text}],")
        print("    ],")
    print("];")


main()

"""Writes src/special/airy/nodes.rs: Ai and B1 = Bi - i Ai on a lattice of the upper half plane.

Lattice: z = (m + i n)/2, every node that is nearest to some point of the half disc |z| <= RADIUS,
Im z >= 0. Values by ball arithmetic (python-flint) at 300 bits, rounded to the nearest double.

    python3 tests/data/make_airy_nodes.py > src/special/airy/nodes.rs
"""

import math

from flint import acb, ctx

ctx.prec = 300
SPACING = 0.5
RADIUS = 8.8


def nearest_double(ball):
    value = float(ball.mid())
    assert abs(ball.rad()) <= abs(ball.mid()) * 2.0**-200 or ball == 0
    return value


def literal(x):
    return repr(x + 0.0)


rows, nodes = [], []
n = 0
while max(0.0, (n - 0.5) * SPACING) < RADIUS:
    low = max(0.0, (n - 0.5) * SPACING)
    half = round(math.sqrt(RADIUS**2 - low**2) / SPACING + 1e-9)
    rows.append((len(nodes) + half, half))
    for m in range(-half, half + 1):
        z = acb(m * SPACING, n * SPACING)
        ai, aip, bi, bip = z.airy()
        b, bp = bi - acb(0, 1) * ai, bip - acb(0, 1) * aip
        nodes.append([nearest_double(p) for f in (ai, aip, b, bp) for p in (f.real, f.imag)])
    n += 1

print("//! Ai and B1 = Bi - i Ai on a lattice of the upper half plane.")
print("//!")
print("//! Written by `tests/data/make_airy_nodes.py` (ball arithmetic, rounded to nearest).")
print()
print("/// Distance of neighbouring nodes.")
print(f"pub(super) const SPACING: f64 = {SPACING};")
print("/// The nodes serve every point of the upper half plane within this distance of the origin.")
print(f"pub(super) const RADIUS: f64 = {RADIUS};")
print()
print("/// Index in [`NODES`] of the node `m = 0` of row `n` (imaginary part `n * SPACING`).")
print("#[rustfmt::skip]")
print(f"pub(super) const ROW: [usize; {len(rows)}] = [{', '.join(str(o) for o, _ in rows)}];")
print()
print("/// Real and imaginary parts of Ai, Ai', B1, B1' at `(m + i n) SPACING`.")
print("#[rustfmt::skip]")
print(f"pub(super) static NODES: [[f64; 8]; {len(nodes)}] = [")
for node in nodes:
    print("    [" + ", ".join(literal(x) for x in node) + "],")
print("];")

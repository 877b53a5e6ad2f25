"""Reference fields: a trapped mode running up a sloping bed through its cut-off.

The full two-dimensional Helmholtz equation (no one-way or small-angle step),

    div(w grad u) + w (1/delta + [x < D(s)]) u = 0,   u = 0 at x = 0,
    w = 1 for x < D(s), w = m for x > D(s),

with u and w du/dn continuous across the bed x = D(s).  Lengths are in 1/q,
q^2 = k_in^2 - k_out^2, so k_out^2 = 1/delta and k_in^2 = 1/delta + 1.  The
slope of the straight part is g = eps sqrt(delta)/2, the slow range r = g s is 0
at the cut-off of mode n, and the layer time is t = r/(m^2 eps)^(1/3).

Method
  * Mesh following the bed: x = D(s) xi inside (0 <= xi <= 1) and
    x = D(s) + xi outside.  The map is used exactly at the quadrature points,
    so the bed is not approximated; places where a derivative of D jumps are
    element edges.
  * Galerkin finite elements, tensor products of Lagrange polynomials of degree
    p on Gauss-Lobatto nodes, Gauss quadrature with p + 5 points.
  * Perfectly matched layers (complex stretching with a quadratic profile)
    below, on the right and on the left.
  * The mode comes in through the line s = s_start on the flat part.  Right of
    the line the unknown is the whole field, left of it the reflected field;
    both sides meet through the jumps of u and w du/ds of the exact mode.
  * Block elimination: element interiors, then the inner edges of each column
    of elements, then column after column (dense blocks).  It is a direct
    solution of the whole system; nothing is marched.
  * Far field: exact projection on the standing waves of the flat guide after
    the slope, over the line s = s_end down to the bottom line and along the
    bottom line (Green's identity), so that steep rays are counted as well.

Usage
    python make_helmholtz_beds.py A B C        tables and far fields of cases
    python make_helmholtz_beds.py --check A    without tables: print the checks
    python make_helmholtz_beds.py --flat A     flat guide against the exact mode, and
                                               a plane wave refracted by the slope
    python make_helmholtz_beds.py --ending A   what the end of the slope changes
    python make_helmholtz_beds.py --quick A    tables without the slow checks

Needs numpy and scipy and helmholtz_beds_solver.py beside it.  One case takes ten
to thirty seconds on one core, about ten times that with the variants of the
checks.

The far field belongs to this bed with its flat thin end; --ending shows how
little (or how much) that matters.
"""

import argparse
import math

import numpy as np
from numpy.polynomial import legendre

from helmholtz_beds_solver import TIMES, Guide, Solver

CASES = {
    "A": dict(n=1, m=1.0, delta=0.2844, eps=0.05),
    "B": dict(n=1, m=1 / 1.5, delta=0.2844, eps=0.1875),
    "C": dict(n=1, m=1 / 1.8, delta=0.21, eps=0.1),
    "D": dict(n=2, m=1 / 1.5, delta=0.2844, eps=0.1),
    "E1": dict(n=1, m=1.0, delta=1.25, eps=0.05),
    "E2": dict(n=1, m=1.0, delta=1.25, eps=0.1),
}

# Numerical settings: degree, element size times k_in, depth of the bottom line
# in layer lengths and in wavelengths (the larger counts), thickness of the
# layers in wavelengths, strength of the stretching.
BASE = dict(p=10, hk=4.0, layers=14.0, waves=14.0, below=6.0, beside=4.0, strength=6.0)


def run(case, flat=False, ending=1.0, keep=True, **changes):
    solver = Solver(Guide(flat=flat, ending=ending, **CASES[case]), **{**BASE, **changes})
    solver.solve(keep)
    return solver


def refraction(case):
    """Weak-form residual of a plane wave refracted exactly by the straight slope.

    Tests the sheared terms, the jumps of w and k and the bed conditions together:
    in coordinates along and across the bed the field is known in closed form.
    Returned relative to the largest sum of absolute terms.
    """
    gd = Guide(**CASES[case])
    solver = Solver(gd, **BASE)
    k = int(np.searchsorted(solver.right, 0.0))
    a, b = solver.right[k : k + 2]
    n, p = solver.basis.p + 1, solver.basis.p
    s = ((a + b) / 2 + (b - a) / 2 * solver.basis.nodes)[:, None]
    depth = gd.bed(s)[0]
    tangential = gd.k_out * math.cos(0.3)
    k1 = math.sqrt(gd.k_in**2 - tangential**2)
    k2 = gd.m * math.sqrt(gd.k_out**2 - tangential**2)
    back = (k1 - k2) / (k1 + k2)
    norm = math.hypot(1, gd.g)
    last = solver.bottom_row  # above the absorbing rows
    nodal, residual, size = [], np.zeros((n, (last + 1) * p + 1), complex), 0.0
    for row in range(last + 1):
        if row < solver.inside:
            lo, hi = solver.xi_in[row : row + 2]
        else:
            lo, hi = solver.xi_out[row - solver.inside : row - solver.inside + 2]
        z = ((lo + hi) / 2 + (hi - lo) / 2 * solver.basis.nodes)[None, :]
        x = depth * z if row < solver.inside else depth + z
        along = (s - gd.g * (x - gd.cut)) / norm
        across = (x - gd.cut + gd.g * s) / norm
        if row < solver.inside:
            u = np.exp(1j * k1 * across) + back * np.exp(-1j * k1 * across)
        else:
            u = (1 + back) * np.exp(1j * k2 / gd.m * across)
        nodal.append(u * np.exp(1j * tangential * along))
    elements = solver.elements(a, b)
    for row, u in enumerate(nodal):
        part = np.einsum("abcd,cd->ab", elements[row], u)
        residual[:, row * p : row * p + n] += part
        size = max(size, np.max(np.einsum("abcd,cd->ab", abs(elements[row]), abs(u))))
    return np.max(abs(residual[1:-1, 1:-1])) / size


def table_points(guide, t, limit):
    """Depths of the table at time t."""
    depth = float(guide.bed(t * guide.time / guide.g)[0])
    inside = depth * np.arange(1, 26) / 25
    # Denser next to the bed.
    z = np.arange(1, 61) / 60
    outside = depth + limit * (0.35 * z + 0.65 * z * z)
    return depth, inside, outside


def sample(solver):
    """(t, s, x, inside, u) at the points of the table."""
    gd = solver.guide
    limit = min(12 * gd.layer, solver.bottom)
    out = []
    for t in TIMES:
        s = t * gd.time / gd.g
        k = int(np.argmin(abs(solver.right - s)))
        assert abs(solver.right[k] - s) < 1e-9
        depth, inside, outside = table_points(gd, t, limit)
        x = np.concatenate([inside, outside])
        # The last inside point is on the bed itself, where u is continuous.
        for point, value in zip(x, solver.on_face(k, x)):
            out.append((t, s, point, int(point <= depth), value))
    return out


def distance(one, two):
    """Per time the largest change, relative to the largest value at that time."""
    out = []
    for t in TIMES:
        a = np.array([row[4] for row in one if row[0] == t])
        b = np.array([row[4] for row in two if row[0] == t])
        out.append(np.max(abs(a - b)) / np.max(abs(a)))
    return out


VARIANTS = {
    "degree 8 for 10": dict(p=8),
    "elements 0.75 times as long": dict(hk=3.0),
    "layers twice as strong": dict(strength=12.0),
    "layers 1.5 times as thick, bottom line 1.4 times as deep": dict(
        below=9.0, beside=6.0, layers=19.6, waves=19.6
    ),
}


def checks(case, base):
    reference = sample(base)
    lines = []
    for name, change in VARIANTS.items():
        other = run(case, keep=False, **change)
        lines.append(f"{name}: largest relative change {max(distance(reference, sample(other))):.1e}")
        print(case, lines[-1], flush=True)
    return lines


def energy_lines(solver):
    e = solver.balance()
    gap = e["right"] + e["bottom"] + sum(e["back"]) - 1
    lines = [
        f"flux in 1; out on the right {e['right']:.9f}, through the bottom line "
        f"{e['bottom']:.3e}, reflected in modes 1..n "
        + " ".join(f"{v:.2e}" for v in e["back"])
        + f" (whole reflected field: Int w |u|^2 dx = {e['whole']:.1e}); sum - 1 = {gap:.1e}"
    ]
    if e["kept"]:
        lines.append(
            "of the flux on the right, in lower modes still trapped: "
            + " ".join(f"{v:.3e}" for v in e["kept"])
        )
    return lines


def beam(solver):
    """Angles, density, their integral and the angle of the maximum."""
    nodes, weights = legendre.leggauss(600)
    angles = (nodes + 1) * math.pi / 4
    total = np.sum(weights * math.pi / 4 * solver.far_field(angles))
    grid = np.radians(np.arange(2, 321) / 4)
    density = solver.far_field(grid)
    k = int(np.argmax(density))
    k = min(max(k, 1), len(grid) - 2)
    fine = np.linspace(grid[k - 1], grid[k + 1], 41)
    near = np.polynomial.Polynomial.fit(fine, solver.far_field(fine), 4)
    roots = [r.real for r in near.deriv().roots() if abs(r.imag) < 1e-9]
    top = min(roots, key=lambda r: abs(r - grid[k]))
    return np.degrees(grid), density, total, math.degrees(top)


def header(case, solver, notes):
    gd = solver.guide
    kappa, gamma, beta, amp = gd.mode(gd.n, gd.deep)
    return [
        f"Case {case}: mode n = {gd.n}, m = {gd.m:.17g}, delta = {gd.delta!r}, eps = {gd.eps!r}",
        "Made by make_helmholtz_beds.py: finite elements for the full two-dimensional",
        "Helmholtz equation  div(w grad u) + w (1/delta + [x < D(s)]) u = 0,  u = 0 at x = 0,",
        "w = 1 inside (x < D), m outside; u and w du/dn continuous across the bed.",
        "Lengths in 1/q, time factor exp(-i omega t).  g = eps sqrt(delta)/2, r = g s,",
        "t = r/(m^2 eps)^(1/3), layer length (m/eps)^(1/3).",
        "Bed: D = cut - r, cut = (n - 1/2) pi, for r >= -1; before it, with L = 2,",
        "rate = pi/(2 L), a = rate max(r + 1 + L, 0): D = cut + 1 + L/2 - (a/2 - sin(2 a)/4)/rate.",
        f"After r = {gd.r_end:.12g} the slope falls to 0 as cos^2 over {gd.fall:.12g} in r,"
        f" then D = {gd.shallow:.12g}.",
        "Normalisation: beta sqrt(delta) Int w |u|^2 dx = 1 for the incoming mode.",
        f"Incoming: A sin(kappa x) exp(i beta (s - s_start)) inside, A = {amp:.15g} > 0,",
        f"kappa = {kappa:.15g}, gamma = {gamma:.15g}, beta = {beta:.15g},",
        f"s_start = {solver.s_start:.15g}, D_start = {gd.deep:.15g}, slope g = {gd.g:.15g}.",
        f"Layer time {gd.time:.15g}, layer length {gd.layer:.15g}, bottom line at"
        f" x - D = {solver.bottom:.6g}.",
    ] + notes


def write(name, lines, columns, rows):
    with open(name, "w", encoding="ascii", newline="\n") as file:
        for line in lines:
            file.write(f"# {line}\n")
        file.write(columns + "\n")
        for row in rows:
            file.write(",".join(v if isinstance(v, str) else f"{v:.12g}" for v in row) + "\n")


def main():
    parser = argparse.ArgumentParser(description="Reference fields over a sloping bed")
    parser.add_argument("cases", nargs="+", choices=sorted(CASES))
    parser.add_argument("--check", action="store_true", help="print the checks only")
    parser.add_argument("--flat", action="store_true", help="flat guide against the exact mode")
    parser.add_argument("--ending", action="store_true", help="a slope ended more abruptly")
    parser.add_argument("--quick", action="store_true", help="tables without the variants")
    options = parser.parse_args()
    for case in options.cases:
        if options.flat:
            solver = run(case, flat=True)
            mode, beta = solver.incoming()
            worst = max(
                np.max(abs(u - mode * np.exp(1j * beta * (s - solver.s_start))))
                for u, s in zip(solver.faces[: solver.end + 1], solver.right)
            )
            print(case, f"flat guide, largest error relative to the mode's maximum:"
                  f" {worst / np.max(abs(mode)):.1e}", flush=True)
            print(case, *energy_lines(solver), sep="\n  ", flush=True)
            print(case, f"plane wave refracted by the slope, relative residual:"
                  f" {refraction(case):.1e}", flush=True)
            continue
        if options.ending:
            one, two = run(case), run(case, ending=0.4)
            print(case, "slope ended 2.5 times as abruptly, change at the times of the table:",
                  *(f"{v:.1e}" for v in distance(sample(one), sample(two))),
                  f"angle of maximum {beam(one)[3]:.4f} and {beam(two)[3]:.4f}", flush=True)
            continue
        solver = run(case)
        energy = energy_lines(solver)
        angle, density, total, top = beam(solver)
        far = [
            f"far field: angle of maximum {top:.5f} degrees, integral over 0..90 degrees {total:.8f}"
        ]
        print(case, *energy, *far, sep="\n  ", flush=True)
        notes = [] if options.quick else checks(case, solver)
        if options.check:
            continue
        head = header(case, solver, notes + energy)
        k = solver.guide.k_out
        rows = []
        for t, s, x, inside, u in sample(solver):
            psi = u * np.exp(-1j * k * s)
            rows.append((t, solver.guide.g * s, s, x, inside, psi.real, psi.imag))
        write(
            f"helmholtz_beds_{case}.csv",
            head + ["psi = u exp(-i s/sqrt(delta)), s from cut-off."],
            "t,r,s,x,inside,re_psi,im_psi",
            rows,
        )
        write(
            f"helmholtz_beams_{case}.csv",
            head
            + far
            + [
                "Energy flux per radian of angle from the horizontal, incoming flux 1, after the",
                "slope has ended on the flat thin guide: projection on its standing waves.",
            ],
            "angle_deg,density_per_rad",
            zip(angle, density),
        )


if __name__ == "__main__":
    main()

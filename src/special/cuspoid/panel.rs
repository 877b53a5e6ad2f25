//! One panel of a contour: moments of `e^p` over `-1 <= x <= 1` for a complex polynomial `p`.
//!
//! 20-point Gauss-Legendre rule (DLMF 3.5.19). The exponential, sine and cosine are branch-free
//! over the nodes: reduction by ln 2 and pi/2 in two parts (common practice), Taylor series. The
//! polynomial has a real variable, so its even and odd parts serve two nodes each.

use super::super::panels::{NODES, WEIGHTS, exponentials};
use super::polynomial::{Polynomial, TERMS};
use num_complex::Complex64;

/// Moments that are returned at most.
pub(super) const MOMENTS: usize = TERMS - 2;

/// A rule that is symmetric about 0, with `2 H` nodes.
struct Rule<const H: usize> {
    nodes: [f64; H],
    squares: [f64; H],
    /// Weight times node to the power n.
    weighted: [[f64; H]; MOMENTS],
}

impl<const H: usize> Rule<H> {
    const fn new(nodes: [f64; H], weights: [f64; H]) -> Self {
        let mut squares = nodes;
        let mut weighted = [weights; MOMENTS];
        let mut k = 0;
        while k < H {
            squares[k] *= nodes[k];
            let mut n = 1;
            while n < MOMENTS {
                weighted[n][k] = weighted[n - 1][k] * nodes[k];
                n += 1;
            }
            k += 1;
        }
        Rule { nodes, squares, weighted }
    }

    /// `sum of w x^n e^(p(x))`, n = 0 .. D-2.
    #[inline(always)]
    fn moments<const D: usize>(&self, p: &Polynomial) -> [Complex64; MOMENTS] {
        let mut re = [[0.0; H]; 2];
        let mut im = [[0.0; H]; 2];
        for k in 0..H {
            let q = self.squares[k];
            let (mut even, mut odd) = ([0.0; 2], [0.0; 2]);
            for m in (0..=D).rev() {
                let part = if m % 2 == 0 { &mut even } else { &mut odd };
                part[0] = part[0] * q + p[m].re;
                part[1] = part[1] * q + p[m].im;
            }
            let x = self.nodes[k];
            re[0][k] = even[0] + x * odd[0];
            re[1][k] = even[0] - x * odd[0];
            im[0][k] = even[1] + x * odd[1];
            im[1][k] = even[1] - x * odd[1];
        }
        for side in 0..2 {
            exponentials(&mut re[side], &mut im[side]);
        }
        let mut sums = [Complex64::new(0.0, 0.0); MOMENTS];
        for (n, sum) in sums.iter_mut().enumerate().take(D - 1) {
            let sign = if n % 2 == 0 { 1.0 } else { -1.0 };
            for k in 0..H {
                let w = self.weighted[n][k];
                sum.re += w * (re[0][k] + sign * re[1][k]);
                sum.im += w * (im[0][k] + sign * im[1][k]);
            }
        }
        sums
    }
}

static GAUSS: Rule<10> = Rule::new(NODES, WEIGHTS);

/// `integral of x^n e^(p(x)) dx` over `-1 <= x <= 1` for n = 0 .. D-2, `p` of degree `D`.
pub(super) fn moments<const D: usize>(p: &Polynomial) -> [Complex64; MOMENTS] {
    GAUSS.moments::<D>(p)
}

/// The trapezoidal rule with nodes at `(k + 1/2) step`.
const fn trapezoid<const H: usize>(step: f64) -> Rule<H> {
    let mut nodes = [0.0; H];
    let mut k = 0;
    while k < H {
        nodes[k] = step * (k as f64 + 0.5);
        k += 1;
    }
    Rule::new(nodes, [step; H])
}

/// For `e^(-x^2 + ..)`; what is left is `e^-(pi/step)^2` and what the other terms make of it.
static SHORT: Rule<20> = trapezoid(0.38);
static LONG: Rule<32> = trapezoid(0.29);

/// `integral of x^n e^(p(x)) dx` over the whole line for `p = -x^2 + ..` whose other terms stay
/// small (very small: `short`) as far as `e^(-x^2)` counts.
pub(super) fn bell<const D: usize>(p: &Polynomial, short: bool) -> [Complex64; MOMENTS] {
    if short { SHORT.moments::<D>(p) } else { LONG.moments::<D>(p) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn exponentials_agree_with_the_library() {
        let mut worst = 0.0f64;
        for i in 0..500 {
            let mut re = [0.0; 20];
            let mut im = [0.0; 20];
            for k in 0..20 {
                re[k] = -60.0 + 0.0061 * (20 * i + k) as f64;
                im[k] = 40.0 * ((20 * i + k) as f64).sin();
            }
            let (x, y) = (re, im);
            exponentials(&mut re, &mut im);
            for k in 0..20 {
                let exact = Complex64::new(x[k], y[k]).exp();
                let error = (Complex64::new(re[k], im[k]) - exact).norm();
                worst = worst.max(error / exact.norm());
            }
        }
        assert!(worst < 1.5e-15, "{worst:e}");
    }

    #[test]
    fn moments_of_a_cubic_exponent() {
        // integral of x^n e^x over -1..1: e - 1/e, 2/e, e - 5/e (elementary).
        let mut p = [Complex64::new(0.0, 0.0); TERMS];
        p[1] = Complex64::new(1.0, 0.0);
        let m = moments::<4>(&p);
        let e = std::f64::consts::E;
        for (got, exact) in m.iter().zip([e - 1.0 / e, 2.0 / e, e - 5.0 / e]) {
            assert!((got - exact).norm() < 2e-15, "{got} {exact}");
        }
    }
}

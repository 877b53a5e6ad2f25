//! What all functions of the module are made of: a quadrature sum, its correction, and `exp(-z^2)`.
//!
//! For `Im z > 0`, `w(z) = (i/pi) integral of exp(-t^2)/(z - t) dt` over the real line (DLMF 7.7.2). In
//! the first quadrant (the others by symmetry, DLMF 7.4):
//!
//! - `|z| < 6.5`: the trapezoidal rule of spacing h = 1/2, whose error for `Im z < pi/h` is the
//!   residue of the integrand at `t = z` divided by a periodic factor, but for `exp(-pi^2/h^2) = 7e-18`
//!   (Chiarella & Reichel, Math. Comp. 22 (1968); Matta & Reichel, Math. Comp. 25 (1971)):
//!
//!   ```text
//!   w(z) = S(z) + exp(-z^2) K(z),   K = 2 p/(1 + p),   p = exp(2 pi i (z - c)/h)
//!   ```
//!
//!   with c the end of a half cell: the nodes are either `n h` or `(n + 1/2) h`, whichever lie farther
//!   from `Re z` (after Hunter & Regan, Math. Comp. 26 (1972)), so that `|arg p| <= pi/2`;
//! - beyond: the Gauss-Hermite rules of 20, 12 and 8 points from `|z|` = 6.5, 8.5 and 16 (they are
//!   convergents of the continued fraction DLMF 7.9.3), and the first two terms of DLMF 7.12 beyond 1e4.
//!   K is zero there, but for Re w close to the real axis, where `exp(-x^2)` is all there is.
//!
//! A pair of nodes gives `2 z/(z^2 - t^2)`, whose real part has one sign and a factor Im z, whose imaginary part
//! has a factor Re z: both parts of w keep their relative accuracy on the axes and close to them.

use super::nodes::{HALF, HERMITE_8, HERMITE_12, HERMITE_20, WHOLE};
use crate::special::double_double::{Dd, exp_both, sin_cos, two_product};
use num_complex::Complex64;
use std::f64::consts::TAU;

/// The trapezoidal rule serves to here.
pub(super) const NEAR: f64 = 6.5;
/// `exp(-z^2)` is known to here: its phase `2 x y` stays below 2^62.
pub(super) const FARTHEST: f64 = 1e9;

/// Pairs of nodes `+-t`.
pub(super) struct Rule<const N: usize> {
    nodes: [f64; N],
    squares: [f64; N],
    weights: [f64; N],
}

impl<const N: usize> Rule<N> {
    /// From nodes and weights.
    pub(super) const fn new(pairs: [[f64; 2]; N]) -> Self {
        let mut rule = Rule { nodes: [0.0; N], squares: [0.0; N], weights: [0.0; N] };
        let mut k = 0;
        while k < N {
            [rule.nodes[k], rule.weights[k]] = pairs[k];
            rule.squares[k] = rule.nodes[k] * rule.nodes[k];
            k += 1;
        }
        rule
    }

    /// `i z sum of weight/(z^2 - t^2)`: with `D = |z^2 - t^2|^2`, y times the sum of
    /// `weight (|z|^2 + t^2)/D` and x times that of `weight (|z|^2 - t^2)/D`.
    #[inline]
    fn sum(&self, x: f64, y: f64) -> Complex64 {
        let (y_square, im) = (y * y, 2.0 * x * y);
        let (square, im_square) = (x * x + y_square, im * im);
        let (mut even, mut odd) = ([0.0; N], [0.0; N]);
        for k in 0..N {
            // x^2 - t^2, without loss close to a node.
            let difference = (x - self.nodes[k]) * (x + self.nodes[k]);
            let re = difference - y_square;
            let share = self.weights[k] / (re * re + im_square);
            even[k] = share * (square + self.squares[k]);
            odd[k] = share * (difference + y_square);
        }
        Complex64::new(y * total(&even), x * total(&odd))
    }

    /// The same for x = 0, a real number: `y sum of weight/(y^2 + t^2)`.
    #[inline]
    fn sum_imaginary(&self, y: f64) -> f64 {
        let square = y * y;
        y * total::<N>(&std::array::from_fn(|k| self.weights[k] / (square + self.squares[k])))
    }

    /// The same for y = 0 without the factor i: `x sum of weight/(x^2 - t^2)`.
    #[inline]
    fn sum_real(&self, x: f64) -> f64 {
        let term = |k: usize| self.weights[k] / ((x - self.nodes[k]) * (x + self.nodes[k]));
        x * total::<N>(&std::array::from_fn(term))
    }
}

/// The sum, in two strands.
#[inline]
fn total<const N: usize>(terms: &[f64; N]) -> f64 {
    let mut sums = [0.0; 2];
    for (k, term) in terms.iter().enumerate() {
        sums[k % 2] += term;
    }
    sums[0] + sums[1]
}

/// True where the sum needs a correction.
#[inline]
pub(super) fn near(x: f64, y: f64) -> bool {
    x * x + y * y < NEAR * NEAR
}

/// S at a point of the first quadrant, and the distance of x to the end of a half cell, in cells: at
/// most a quarter (of no meaning beyond `NEAR`).
#[inline]
pub(super) fn sum(x: f64, y: f64) -> (Complex64, f64) {
    let square = x * x + y * y;
    if square < NEAR * NEAR {
        let (whole, offset) = half_cell(x);
        return (if whole { WHOLE.sum(x, y) } else { HALF.sum(x, y) }, offset);
    }
    let value = if square < 8.5 * 8.5 {
        HERMITE_20.sum(x, y)
    } else if square < 16.0 * 16.0 {
        HERMITE_12.sum(x, y)
    } else if square < 1e8 {
        HERMITE_8.sum(x, y)
    } else {
        far(x, y)
    };
    (value, 0.0)
}

/// [`sum`] at x = 0.
#[inline]
pub(super) fn sum_imaginary(y: f64) -> f64 {
    if y < NEAR {
        HALF.sum_imaginary(y)
    } else if y < 8.5 {
        HERMITE_20.sum_imaginary(y)
    } else if y < 16.0 {
        HERMITE_12.sum_imaginary(y)
    } else if y < 1e4 {
        HERMITE_8.sum_imaginary(y)
    } else {
        far(0.0, y).re
    }
}

/// [`sum`] at y = 0, without the factor i.
#[inline]
pub(super) fn sum_real(x: f64) -> (f64, f64) {
    if x < NEAR {
        let (whole, offset) = half_cell(x);
        return (if whole { WHOLE.sum_real(x) } else { HALF.sum_real(x) }, offset);
    }
    let value = if x < 8.5 {
        HERMITE_20.sum_real(x)
    } else if x < 16.0 {
        HERMITE_12.sum_real(x)
    } else if x < 1e4 {
        HERMITE_8.sum_real(x)
    } else {
        far(x, 0.0).im
    };
    (value, 0.0)
}

/// True for nodes at whole cells, and the distance of x to the nearest of the others, in cells.
#[inline]
fn half_cell(x: f64) -> (bool, f64) {
    let cells = 2.0 * x;
    let offset = cells - (cells + 0.5).floor();
    if offset.abs() < 0.25 { (false, offset) } else { (true, offset - 0.5f64.copysign(offset)) }
}

/// `(i/sqrt(pi)) (1/z + 1/(2 z^3))` (DLMF 7.12.1), scaled so that no square overflows.
fn far(x: f64, y: f64) -> Complex64 {
    const INVERSE_ROOT_PI: f64 = std::f64::consts::FRAC_2_SQRT_PI * 0.5;
    let size = x.max(y);
    if size.is_infinite() {
        return Complex64::ZERO;
    }
    let (u, v) = (x / size, y / size);
    let factor = INVERSE_ROOT_PI / (u * u + v * v) / size;
    // 1/(2 z^2)
    let inverse = Complex64::new(u, -v) / ((u * u + v * v) * size);
    let more = inverse * inverse * 0.5;
    // i (u - i v)(1 + more)
    Complex64::new(
        factor * (v * (1.0 + more.re) - u * more.im),
        factor * (u * (1.0 + more.re) + v * more.im),
    )
}

/// p of the module's page.
#[derive(Clone, Copy)]
pub(super) struct Wave {
    y: f64,
    p: Complex64,
}

impl Wave {
    /// At the height y above a point with the given distance to the end of a half cell.
    #[inline]
    pub(super) fn at(y: f64, offset: f64) -> Self {
        let (sin, cos) = (TAU * offset).sin_cos();
        let size = (DECAY * y).exp();
        Wave { y, p: Complex64::new(size * cos, size * sin) }
    }

    /// `1/(1 + p)`
    #[inline]
    fn inverse(self) -> Complex64 {
        let re = 1.0 + self.p.re;
        Complex64::new(re, -self.p.im) / (re * re + self.p.im * self.p.im)
    }

    /// `K = 2 p/(1 + p)`.
    #[inline]
    pub(super) fn k(self) -> Complex64 {
        self.p * self.inverse() * 2.0
    }

    /// `2 - K = 2/(1 + p)`.
    #[inline]
    pub(super) fn two_less_k(self) -> Complex64 {
        self.inverse() * 2.0
    }

    /// `1 - K = (1 - p)/(1 + p)`, its real part as small as y.
    #[inline]
    pub(super) fn one_less_k(self) -> Complex64 {
        let re = 1.0 + self.p.re;
        let size = re * re + self.p.im * self.p.im;
        Complex64::new(-(2.0 * DECAY * self.y).exp_m1(), -2.0 * self.p.im) / size
    }
}

/// `|p| = exp(-2 pi y/h) = exp(DECAY y)`.
pub(super) const DECAY: f64 = -2.0 * TAU;

/// `x^2 - y^2` and `2 x y` for numbers below 1e150.
#[inline]
pub(super) fn square(x: f64, y: f64) -> (Dd, Dd) {
    let product = two_product(2.0 * x, y);
    (two_product(x, x).plus(two_product(y, y).minus()), product)
}

/// `exp(-z^2)` as a number and an exponent of two, x and y not negative.
///
/// Beyond 1e9: zero or positive infinity where that is what it is, else NaN.
#[inline]
pub(super) fn exponential(x: f64, y: f64) -> (Complex64, i64) {
    if x > FARTHEST || y > FARTHEST || x.is_nan() || y.is_nan() {
        return (exponential_beyond(x, y), 0);
    }
    let (re, im) = square(x, y);
    let (sin, cos) = sin_cos(im);
    let (_, down, n) = exp_both(re);
    (Complex64::new(down * cos, -down * sin), -n)
}

fn exponential_beyond(x: f64, y: f64) -> Complex64 {
    if x == 0.0 && y > 0.0 {
        return Complex64::new(f64::INFINITY, 0.0);
    }
    let unknown = Complex64::new(f64::NAN, f64::NAN);
    if x > y && (y == 0.0 || (x - y) * (x + y) > 800.0) { Complex64::ZERO } else { unknown }
}

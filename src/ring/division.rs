//! Weierstrass division of a Taylor series by a polynomial.
//!
//! Method: synthetic division from the highest coefficient down. It is stable exactly when all
//! zeros of the divisor lie inside the ring (`|v| < 1`), which is what Weierstrass division asks
//! for, and stays so when the zeros merge. The contour integrals
//! `p_j = mean over the ring of v G/D sum_(l>j) d_l v^(l-1-j)` give the same remainder; the
//! recurrence needs no transform and costs a tenth.

use num_complex::Complex64;

/// Divides `G(v) = sum g_n v^n` by `D(v) = sum d_l v^l` of degree `d.len() - 1`:
/// `G = remainder + D H`. On return the first `d.len() - 1` entries of `g` hold the remainder
/// and the others the coefficients of `H`, in ascending order.
///
/// The last entry of `d` must not be zero, its degree be from 1 to
/// [`MAX_SADDLES`](super::MAX_SADDLES); otherwise nothing is done. Cost: `g.len() * d.len()` products.
///
/// ```
/// use merging_saddles::{Complex64, ring::divide};
/// // 1 + 2 v + 3 v^2 + 4 v^3 = (v^2 - 1/4)(4 v + 3) + (3 v + 7/4)   (by hand)
/// let c = |x: f64| Complex64::new(x, 0.0);
/// let mut g = [c(1.0), c(2.0), c(3.0), c(4.0)];
/// divide(&mut g, &[c(-0.25), c(0.0), c(1.0)]);
/// assert_eq!(g, [c(1.75), c(3.0), c(3.0), c(4.0)]);
/// ```
pub fn divide(g: &mut [Complex64], d: &[Complex64]) {
    divide_terms(g, d);
}

/// What can be divided: a coefficient, or those of two series at once.
pub(super) trait Term: Copy {
    /// `self - quotient m`.
    fn minus(self, quotient: Self, m: Complex64) -> Self;
    /// `self m`.
    fn times(self, m: Complex64) -> Self;
    /// The same for a real factor.
    fn scaled(self, factor: f64) -> Self;
}

impl Term for Complex64 {
    fn minus(self, quotient: Self, m: Complex64) -> Self {
        self - quotient * m
    }

    fn times(self, m: Complex64) -> Self {
        self * m
    }

    fn scaled(self, factor: f64) -> Self {
        self * factor
    }
}

/// The coefficients of two series, which take no longer together than one alone: a step of the
/// division waits for the last.
#[derive(Clone, Copy)]
pub(super) struct Twin {
    pub re: [f64; 2],
    pub im: [f64; 2],
}

impl Twin {
    pub fn new(a: Complex64, b: Complex64) -> Twin {
        Twin { re: [a.re, b.re], im: [a.im, b.im] }
    }

    pub fn get(self, n: usize) -> Complex64 {
        Complex64::new(self.re[n], self.im[n])
    }
}

impl Term for Twin {
    fn minus(self, quotient: Self, m: Complex64) -> Self {
        let product = quotient.times(m);
        Twin {
            re: [self.re[0] - product.re[0], self.re[1] - product.re[1]],
            im: [self.im[0] - product.im[0], self.im[1] - product.im[1]],
        }
    }

    fn times(self, m: Complex64) -> Self {
        let Twin { re, im } = self;
        Twin {
            re: [re[0] * m.re - im[0] * m.im, re[1] * m.re - im[1] * m.im],
            im: [re[0] * m.im + im[0] * m.re, re[1] * m.im + im[1] * m.re],
        }
    }

    fn scaled(self, factor: f64) -> Self {
        Twin { re: self.re.map(|x| x * factor), im: self.im.map(|x| x * factor) }
    }
}

/// [`divide`] for any kind of coefficient.
pub(super) fn divide_terms<T: Term>(g: &mut [T], d: &[Complex64]) {
    match d.len() {
        2 => by(g, d, [0]),
        3 => by(g, d, [0; 2]),
        4 => by(g, d, [0; 3]),
        5 => by(g, d, [0; 4]),
        6 => by(g, d, [0; 5]),
        _ => {}
    }
}

/// The same for one degree.
fn by<T: Term, const DEGREE: usize>(g: &mut [T], d: &[Complex64], _: [u8; DEGREE]) {
    let inverse = d[DEGREE].inv();
    // Against the monic divisor first, so that each step waits for one product only.
    let monic: [Complex64; DEGREE] = std::array::from_fn(|j| d[j] * inverse);
    // Phi' has no term of degree K.
    if monic[DEGREE - 1] == Complex64::new(0.0, 0.0) {
        steps::<T, DEGREE, true>(g, &monic, inverse);
    } else {
        steps::<T, DEGREE, false>(g, &monic, inverse);
    }
}

fn steps<T: Term, const DEGREE: usize, const GAP: bool>(
    g: &mut [T],
    monic: &[Complex64; DEGREE],
    inverse: Complex64,
) {
    let Some(first) = g.len().checked_sub(DEGREE) else { return };
    // The entries at and just below the one that is divided.
    let mut window: [T; DEGREE] = std::array::from_fn(|j| g[first + j]);
    for n in (DEGREE..g.len()).rev() {
        let quotient = window[DEGREE - 1];
        for j in (1..DEGREE).rev() {
            window[j] = if GAP && j == DEGREE - 1 {
                window[j - 1]
            } else {
                window[j - 1].minus(quotient, monic[j])
            };
        }
        window[0] = if GAP && DEGREE == 1 {
            g[n - DEGREE]
        } else {
            g[n - DEGREE].minus(quotient, monic[0])
        };
        g[n] = quotient.times(inverse);
    }
    g[..DEGREE].copy_from_slice(&window);
}

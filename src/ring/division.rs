//! Weierstrass division of a Taylor series by a polynomial.
//!
//! Method: synthetic division from the highest coefficient down. It is stable exactly when all
//! zeros of the divisor lie inside the ring (`|v| < 1`), which is what Weierstrass division asks
//! for, and stays so when the zeros merge. The contour integrals
//! `p_j = mean over the ring of v G/D sum_(l>j) d_l v^(l-1-j)` give the same remainder; the
//! recurrence needs no transform and costs a tenth.

use super::MAX_SADDLES;
use num_complex::Complex64;

/// Divides `G(v) = sum g_n v^n` by `D(v) = sum d_l v^l` of degree `d.len() - 1`:
/// `G = remainder + D H`. On return the first `d.len() - 1` entries of `g` hold the remainder
/// and the others the coefficients of `H`, in ascending order.
///
/// The last entry of `d` must not be zero, its degree not be above [`MAX_SADDLES`]. Cost: `g.len() * d.len()` products.
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
    let degree = d.len().saturating_sub(1).min(MAX_SADDLES);
    let Some(&lead) = d.last() else { return };
    let inverse = lead.inv();
    // Against the monic divisor first, so that each step waits for one product only.
    let mut monic = [Complex64::new(0.0, 0.0); MAX_SADDLES];
    for (m, &d) in monic.iter_mut().zip(&d[..degree]) {
        *m = d * inverse;
    }
    if degree == 2 && monic[1] == Complex64::new(0.0, 0.0) {
        // Phi' has no term of degree K: for two saddles only its constant term is left.
        for n in (2..g.len()).rev() {
            let quotient = g[n];
            g[n - 2] -= quotient * monic[0];
        }
    } else {
        for n in (degree..g.len()).rev() {
            let quotient = g[n];
            for (below, &m) in g[n - degree..n].iter_mut().zip(&monic) {
                *below -= quotient * m;
            }
        }
    }
    for quotient in g.iter_mut().skip(degree) {
        *quotient *= inverse;
    }
}

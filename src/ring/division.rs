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
/// The last entry of `d` must not be zero. Cost: `g.len() * d.len()` products.
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
    let degree = d.len().saturating_sub(1);
    let Some(&lead) = d.last() else { return };
    let inverse = lead.inv();
    for n in (degree..g.len()).rev() {
        let quotient = g[n] * inverse;
        g[n] = quotient;
        for l in 0..degree {
            g[n - degree + l] -= quotient * d[l];
        }
    }
}

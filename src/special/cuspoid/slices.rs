//! The same functions over slices: one call for many points, nothing allocated.

use super::*;
use crate::special::slices::{each, over_slices};

over_slices! { "cuspoid";
    pearcey_slice, pearcey, [f64; 2] => Cuspoid<Complex64, 2>, |[x1, x2]| pearcey(x1, x2), "[[0.0; 2], [1.0; 2]]", ".psi.re", 1.67481, 5e-6, "Psi_2(0, 0) = 1.67481 + 0.69373 i: DLMF 36.2.16.";
    swallowtail_slice, swallowtail, [f64; 3] => Cuspoid<Complex64, 3>, |[x1, x2, x3]| swallowtail(x1, x2, x3), "[[0.0; 3], [1.0; 3]]", ".psi", 1.74646, 5e-6, "Psi_3(0, 0, 0) = 1.74646: DLMF 36.2.16.";
    butterfly_slice, butterfly, [f64; 4] => Cuspoid<Complex64, 4>, |[x1, x2, x3, x4]| butterfly(x1, x2, x3, x4), "[[0.0; 4], [1.0; 4]]", ".psi.re", 1.79222, 5e-6, "Psi_4(0) = 1.79222 + 0.48022 i: DLMF 36.2.16.";
    pearcey_zero_near_slice, pearcey_zero_near, [f64; 2] => PearceyZero, |[x1, x2]| pearcey_zero_near(x1, x2), "[[2.3, -1.7], [0.5, -4.4]]", ".x1", 2.352175, 5e-6, "Kaminski & Paris, J. Comput. Appl. Math. 107 (1999), Table 1 (good to 4e-6).";
    pearcey_zero_inside_slice, pearcey_zero_inside, [usize; 2] => PearceyZero, |[row, place]| pearcey_zero_inside(row, place), "[[1, 0], [2, 0]]", ".x1", 0.527678, 5e-6, "Kaminski & Paris, J. Comput. Appl. Math. 107 (1999), Table 1 (good to 4e-6).";
    pearcey_zero_outside_slice, pearcey_zero_outside, usize => PearceyZero, |n| pearcey_zero_outside(n), "[0, 1]", ".x2", -1.743600, 5e-6, "Kaminski & Paris, J. Comput. Appl. Math. 107 (1999), Table 1 (good to 4e-6).";
}

/// [`real_line`] at each of `points`, into `out`.
///
/// Accuracy and cost per point as there. Errors: [`Error::Domain`] if the lengths differ; else as
/// there, at the first point that is refused (`out` is then filled up to that point).
///
/// ```
/// use merging_saddles::{Complex64, special::cuspoid::{real_line, real_line_slice}};
/// let points = [[Complex64::ZERO], [Complex64::I]];
/// let mut out = [real_line(&points[1])?; 2];
/// real_line_slice(&points, &mut out)?;
/// // Psi_1(0) = 1.54669 (DLMF 36.2.16).
/// assert!((out[0].psi.to_complex() - 1.54669).norm() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn real_line_slice<const K: usize>(
    points: &[[Complex64; K]],
    out: &mut [Cuspoid<Scaled, K>],
) -> Result<(), Error> {
    each(points, out, |x| real_line(&x))
}

/// [`between`] for one pair of valleys at each of `points`, into `out`.
///
/// Accuracy and cost per point as there. Errors: [`Error::Domain`] if the lengths differ; else as
/// there, at the first point that is refused (`out` is then filled up to that point).
///
/// ```
/// use merging_saddles::{Complex64, special::cuspoid::{between, between_slice}};
/// let points = [[Complex64::ZERO; 3], [Complex64::I; 3]];
/// let mut out = [between(&points[1], 2, 0)?; 2];
/// between_slice(&points, 2, 0, &mut out)?;
/// // Psi_3(0) = 1.74646 (DLMF 36.2.16).
/// assert!((out[0].psi.to_complex() - 1.74646).norm() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn between_slice<const K: usize>(
    points: &[[Complex64; K]],
    from: usize,
    to: usize,
    out: &mut [Cuspoid<Scaled, K>],
) -> Result<(), Error> {
    each(points, out, |x| between(&x, from, to))
}

/// [`moments`] with the same weights at each of `points`, into `out`.
///
/// Accuracy and cost per point as there. Errors: [`Error::Domain`] if the lengths differ; else as
/// there, at the first point that is refused (`out` is then filled up to that point).
///
/// ```
/// use merging_saddles::{Complex64, special::cuspoid::{moments, moments_slice}};
/// let points = [[Complex64::ZERO; 2], [Complex64::I; 2]];
/// let mut out = [moments(&points[1], &[1, 0, -1, 0])?; 2];
/// moments_slice(&points, &[1, 0, -1, 0], &mut out)?;
/// // Psi_2(0) = 1.67481 + 0.69373 i (DLMF 36.2.16).
/// assert!((out[0].mantissas[0] - Complex64::new(1.67481, 0.69373)).norm() < 1e-5);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn moments_slice<const K: usize>(
    points: &[[Complex64; K]],
    weights: &[i32],
    out: &mut [Moments],
) -> Result<(), Error> {
    each(points, out, |x| moments(&x, weights))
}

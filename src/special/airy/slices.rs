//! The same functions over slices: one call for many points, nothing allocated.

use super::*;
use crate::Error;

/// Refuses slices of different lengths.
fn same_length(points: usize, out: usize) -> Result<(), Error> {
    if points == out {
        return Ok(());
    }
    Err(Error::domain("length of the output", out as f64, "make all slices equally long"))
}

/// `$name(points, out)` from `$function(point)`; the example evaluates `$field` at 0.
macro_rules! over_slices {
    ($($name:ident, $function:ident, $point:ty => $value:ty, $field:literal, $exact:literal, $source:literal;)*) => {$(
        #[doc = concat!("[`", stringify!($function), "`] at each of `points`, into `out`.")]
        ///
        /// Accuracy and cost per point as there. Error: the lengths differ.
        ///
        /// ```
        #[doc = concat!("use merging_saddles::{Complex64, special::airy::{", stringify!($function), ", ", stringify!($name), "}};")]
        #[doc = concat!("let points: [", stringify!($point), "; 2] = [0.0.into(), 1.0.into()];")]
        #[doc = concat!("let mut out = [", stringify!($function), "(points[1]); 2];")]
        #[doc = concat!(stringify!($name), "(&points, &mut out)?;")]
        #[doc = concat!("// ", $source)]
        #[doc = concat!("let value: Complex64 = out[0]", $field, ".into();")]
        #[doc = concat!("assert!((value - ", stringify!($exact), ").norm() < 2e-16);")]
        #[doc = concat!("assert!(", stringify!($name), "(&points, &mut out[..1]).is_err());")]
        /// # Ok::<(), merging_saddles::Error>(())
        /// ```
        pub fn $name(points: &[$point], out: &mut [$value]) -> Result<(), Error> {
            same_length(points.len(), out.len())?;
            for (point, value) in points.iter().zip(out) {
                *value = $function(*point);
            }
            Ok(())
        }
    )*};
}

over_slices! {
    airy_slice, airy, Complex64 => Airy<Complex64>, ".ai", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    airy_real_slice, airy_real, f64 => Airy<f64>, ".bi", 0.614926627446000736, "Bi(0): DLMF 9.2.5.";
    airy_scaled_slice, airy_scaled, Complex64 => Airy<Complex64>, ".bi_prime", 0.448288357353826359, "Bi'(0): DLMF 9.2.6.";
    airy_real_scaled_slice, airy_real_scaled, f64 => Airy<f64>, ".ai", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    airy_extended_slice, airy_extended, Complex64 => Airy<Scaled>, ".ai_prime.to_complex()", -0.258819403792806798, "Ai'(0): DLMF 9.2.4.";
    rotated_slice, rotated, Complex64 => Rotated<Complex64>, ".plus", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    rotated_extended_slice, rotated_extended, Complex64 => Rotated<Scaled>, ".minus.to_complex()", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    ai_slice, ai, Complex64 => Complex64, "", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    ai_real_slice, ai_real, f64 => f64, "", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    bi_slice, bi, Complex64 => Complex64, "", 0.614926627446000736, "Bi(0): DLMF 9.2.5.";
    bi_real_slice, bi_real, f64 => f64, "", 0.614926627446000736, "Bi(0): DLMF 9.2.5.";
    scorer_slice, scorer, Complex64 => Scorer<Complex64>, ".gi", 0.204975542482000245, "Gi(0) = Bi(0)/3: DLMF 9.12.6, 9.2.5.";
    scorer_extended_slice, scorer_extended, Complex64 => Scorer<Scaled>, ".hi.to_complex()", 0.409951084964000491, "Hi(0) = 2 Bi(0)/3: DLMF 9.12.6, 9.2.5.";
    scorer_real_slice, scorer_real, f64 => Scorer<f64>, ".hi", 0.409951084964000491, "Hi(0) = 2 Bi(0)/3: DLMF 9.12.6, 9.2.5.";
    ai_integral_slice, ai_integral, Complex64 => AiryIntegral<Complex64>, ".to_infinity", 0.333333333333333333, "1/3: DLMF 9.10.11.";
    ai_integral_extended_slice, ai_integral_extended, Complex64 => AiryIntegral<Scaled>, ".to_infinity.to_complex()", 0.333333333333333333, "1/3: DLMF 9.10.11.";
    ai_integral_real_slice, ai_integral_real, f64 => AiryIntegral<f64>, ".to_infinity", 0.333333333333333333, "1/3: DLMF 9.10.11.";
}

/// [`modulus_phase`] at each of `points`, into `out`.
///
/// Accuracy and cost per point as there. Errors: the lengths differ, or those of the first point that
/// is refused; `out` is then filled up to that point.
///
/// ```
/// use merging_saddles::special::airy::{ModulusPhase, modulus_phase_slice};
/// let mut out = [ModulusPhase::default(); 2];
/// // theta(a_1) = pi at the first zero of Ai, DLMF table 9.9.1; theta(0) = pi/6, DLMF 9.2.3, 9.2.5.
/// modulus_phase_slice(&[-2.338107410459767, 0.0], &mut out)?;
/// assert!((out[0].phase - std::f64::consts::PI).abs() < 1e-15);
/// assert!((out[1].phase - std::f64::consts::FRAC_PI_6).abs() < 1e-15);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn modulus_phase_slice(points: &[f64], out: &mut [ModulusPhase]) -> Result<(), Error> {
    same_length(points.len(), out.len())?;
    for (point, value) in points.iter().zip(out) {
        *value = modulus_phase(*point)?;
    }
    Ok(())
}

/// [`incomplete_airy`] for each pair of `x` and `a`, into `out`.
///
/// Accuracy and cost per point as there. Errors: the lengths differ, or those of the first pair that
/// is refused; `out` is then filled up to that pair.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::{IncompleteAiry, incomplete_airy_slice}};
/// let mut out = [IncompleteAiry::default()];
/// incomplete_airy_slice(&[Complex64::ZERO], &[Complex64::ZERO], &mut out)?;
/// // The real part is pi Ai(0): DLMF 9.5.1, 9.2.3.
/// assert!((out[0].i0.re - std::f64::consts::PI * 0.355028053887817239).abs() < 1e-15);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn incomplete_airy_slice(
    x: &[Complex64],
    a: &[Complex64],
    out: &mut [IncompleteAiry<Complex64>],
) -> Result<(), Error> {
    same_length(x.len(), out.len())?;
    same_length(a.len(), out.len())?;
    for ((x, a), value) in x.iter().zip(a).zip(out) {
        *value = incomplete_airy(*x, *a)?;
    }
    Ok(())
}

/// [`incomplete_airy_extended`] for each pair of `x` and `a`, into `out`.
///
/// Accuracy, cost and errors as in [`incomplete_airy_slice`].
///
/// ```
/// use merging_saddles::{Complex64, special::airy::*};
/// let zero = [Complex64::ZERO];
/// let mut out = [incomplete_airy_extended(Complex64::ONE, Complex64::ONE)?];
/// incomplete_airy_extended_slice(&zero, &zero, &mut out)?;
/// // The real part is pi Ai(0): DLMF 9.5.1, 9.2.3.
/// let exact = std::f64::consts::PI * 0.355028053887817239;
/// assert!((out[0].i0.to_complex().re - exact).abs() < 1e-15);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn incomplete_airy_extended_slice(
    x: &[Complex64],
    a: &[Complex64],
    out: &mut [IncompleteAiry<Scaled>],
) -> Result<(), Error> {
    same_length(x.len(), out.len())?;
    same_length(a.len(), out.len())?;
    for ((x, a), value) in x.iter().zip(a).zip(out) {
        *value = incomplete_airy_extended(*x, *a)?;
    }
    Ok(())
}

//! One way to run a function over slices: many points in one call, nothing allocated.

use crate::Error;

/// `out[i] = function(points[i])`; refuses slices of different lengths, and stops at the first point
/// that is refused.
#[inline]
pub(super) fn each<P: Copy, V>(
    points: &[P],
    out: &mut [V],
    function: impl Fn(P) -> Result<V, Error>,
) -> Result<(), Error> {
    if points.len() != out.len() {
        let what = "length of the output";
        return Err(Error::domain(what, out.len() as f64, "pass as many places as points"));
    }
    for (point, place) in points.iter().zip(out) {
        *place = function(*point)?;
    }
    Ok(())
}

/// `$name(points, out)` from `$function`, with `$call` for one point.
///
/// The example takes the points `$first` and `$second` and compares `$field` of the first value with
/// `$exact`, to `$digits`. `infallible` functions are told from those that refuse points.
macro_rules! over_slices {
    ($module:literal, infallible; $($name:ident, $function:ident, $point:ty => $value:ty, $field:literal, $exact:literal, $source:literal;)*) => {$(
        $crate::special::slices::over_slices! { @one $module, $name, $function, $point => $value,
            |point| Ok($function(point)), "[0.0.into(), 1.0.into()]", concat!(stringify!($function), "(points[1])"),
            $field, $exact, 2e-16, $source, "Errors: [`Error::Domain`](crate::Error::Domain) if the lengths differ." }
    )*};
    ($module:literal; $($name:ident, $function:ident, $point:ty => $value:ty, |$pattern:pat_param| $call:expr, $points:literal, $field:literal, $exact:literal, $digits:literal, $source:literal;)*) => {$(
        $crate::special::slices::over_slices! { @one $module, $name, $function, $point => $value,
            |$pattern| $call, $points, concat!("{ let ", stringify!($pattern), " = points[1]; ", stringify!($call), "? }"),
            $field, $exact, $digits, $source, "Errors: [`Error::Domain`](crate::Error::Domain) if the lengths differ; else as there, at the first point that is refused (`out` is then filled up to that point)." }
    )*};
    (@one $module:literal, $name:ident, $function:ident, $point:ty => $value:ty, |$pattern:pat_param| $call:expr, $points:literal, $start:expr, $field:literal, $exact:literal, $digits:literal, $source:literal, $errors:literal) => {
        #[doc = concat!("[`", stringify!($function), "`](", stringify!($function), "()) at each of `points`, into `out`.")]
        ///
        /// Accuracy and cost per point as there.
        #[doc = $errors]
        ///
        /// ```
        #[doc = concat!("use merging_saddles::{Complex64, special::", $module, "::{", stringify!($function), ", ", stringify!($name), "}};")]
        #[doc = concat!("let points: [", stringify!($point), "; 2] = ", $points, ";")]
        #[doc = concat!("let mut out = [", $start, "; 2];")]
        #[doc = concat!(stringify!($name), "(&points, &mut out)?;")]
        #[doc = concat!("// ", $source)]
        #[doc = concat!("let value: Complex64 = out[0]", $field, ".into();")]
        #[doc = concat!("assert!((value - ", stringify!($exact), ").norm() < ", stringify!($digits), ");")]
        #[doc = concat!("assert!(", stringify!($name), "(&points, &mut out[..1]).is_err());")]
        /// # Ok::<(), merging_saddles::Error>(())
        /// ```
        pub fn $name(points: &[$point], out: &mut [$value]) -> Result<(), crate::Error> {
            $crate::special::slices::each(points, out, |$pattern| $call)
        }
    };
}
pub(super) use over_slices;

//! Values in two parts, one of which may leave the range of doubles.

use crate::Scaled;
use crate::scaled::ldexp;
use num_complex::Complex64;
use std::ops::Neg;

/// `mantissa * 2^exponent + rest`.
#[derive(Clone, Copy)]
pub(super) struct Split {
    pub(super) mantissa: Complex64,
    pub(super) exponent: i64,
    pub(super) rest: Complex64,
}

impl Split {
    /// A value of moderate size.
    #[inline]
    pub(super) fn moderate(rest: Complex64) -> Self {
        Split { mantissa: Complex64::ZERO, exponent: 0, rest }
    }

    /// As one number: infinite or zero where it leaves the range.
    #[inline]
    pub(super) fn plain(self) -> Complex64 {
        let part = |x: f64, rest: f64| {
            // An infinite factor with a direction: the other component is exactly 0.
            if x == 0.0 { rest } else { ldexp(x, self.exponent) + rest }
        };
        Complex64::new(part(self.mantissa.re, self.rest.re), part(self.mantissa.im, self.rest.im))
    }

    /// With the exponent apart.
    #[inline]
    pub(super) fn extended(self) -> Scaled {
        Scaled::new(self.mantissa, self.exponent) + Scaled::new(self.rest, 0)
    }

    #[inline]
    pub(super) fn conj(self) -> Self {
        Split { mantissa: self.mantissa.conj(), rest: self.rest.conj(), ..self }
    }

    /// Both parts times a factor.
    #[inline]
    pub(super) fn times(self, factor: Complex64) -> Self {
        Split { mantissa: self.mantissa * factor, rest: self.rest * factor, ..self }
    }

    /// A number of moderate size more.
    #[inline]
    pub(super) fn plus(self, more: Complex64) -> Self {
        Split { rest: self.rest + more, ..self }
    }
}

impl Neg for Split {
    type Output = Self;
    #[inline]
    fn neg(self) -> Self {
        Split { mantissa: -self.mantissa, rest: -self.rest, ..self }
    }
}

/// Carries a function of the first quadrant to a point anywhere, given that it is odd and real on the
/// real axis.
#[inline]
pub(super) fn odd(z: Complex64, first: impl Fn(f64, f64) -> Split) -> Split {
    let value = first(z.re.abs(), z.im.abs());
    let value =
        if z.re.is_sign_negative() != z.im.is_sign_negative() { value.conj() } else { value };
    if z.re.is_sign_negative() { -value } else { value }
}

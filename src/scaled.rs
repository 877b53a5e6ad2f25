//! A complex number with its exponent carried apart, for values beyond the range of `f64`.

use num_complex::Complex64;
use std::ops::{Mul, Neg};

/// `mantissa * 2^exponent`. Nothing is lost where the value itself would over- or underflow.
///
/// After any operation of this type the larger component of the mantissa lies in `[1, 2)`
/// unless the value is zero (mantissa 0, exponent 0) or not finite.
///
/// ```
/// use merging_saddles::{Complex64, Scaled};
/// // e^1000 overflows; its ratio to e^999 is e (mathematical constant, DLMF 4.2.11).
/// let big = Scaled::exp(Complex64::new(1000.0, 0.0));
/// let ratio = big * Scaled::exp(Complex64::new(-999.0, 0.0));
/// assert!(big.to_complex().re.is_infinite());
/// assert!((ratio.to_complex().re - 2.718281828459045).abs() < 1e-15);
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scaled {
    /// The digits.
    pub mantissa: Complex64,
    /// The power of two.
    pub exponent: i64,
}

/// `2^n` for any `n`, with 0 and infinity beyond the range.
pub(crate) fn pow2(n: i64) -> f64 {
    if n > 1023 {
        f64::INFINITY
    } else if n >= -1022 {
        f64::from_bits(((n + 1023) as u64) << 52)
    } else if n >= -1074 {
        f64::from_bits(1u64 << (n + 1074))
    } else {
        0.0
    }
}

/// `x * 2^n` with one rounding at most, also into the subnormal range.
pub(crate) fn ldexp(x: f64, n: i64) -> f64 {
    if x == 0.0 || !x.is_finite() {
        return x;
    }
    let n = n.clamp(-4200, 4200);
    if (-1022..=1023).contains(&n) {
        return x * pow2(n);
    }
    // Two exact steps towards the range and one that may round.
    let step = if n > 0 { 1000 } else { -900 };
    let (mut y, mut left) = (x, n);
    while left.abs() > 1000 {
        let next = y * pow2(step);
        if next == 0.0 || next.is_infinite() {
            return next;
        }
        // Stop before a step that would round: finish with the rest in one product.
        if step < 0 && next.abs() < f64::MIN_POSITIVE {
            return y * pow2(left.max(-1074));
        }
        y = next;
        left -= step;
    }
    y * pow2(left)
}

/// The binary exponent of a finite non-zero number (`2^e <= |x| < 2^(e+1)`).
fn exponent_of(x: f64) -> i64 {
    let bits = (x.to_bits() >> 52) & 0x7ff;
    if bits == 0 {
        // Subnormal: bring it into the normal range first.
        exponent_of(x * pow2(64)) - 64
    } else {
        bits as i64 - 1023
    }
}

impl Scaled {
    /// Zero.
    pub const ZERO: Scaled = Scaled { mantissa: Complex64::new(0.0, 0.0), exponent: 0 };

    /// `mantissa * 2^exponent`, brought to standard form.
    pub fn new(mantissa: Complex64, exponent: i64) -> Self {
        let size = mantissa.re.abs().max(mantissa.im.abs());
        if mantissa.re.is_nan() || mantissa.im.is_nan() || size.is_infinite() {
            return Scaled { mantissa, exponent: 0 };
        }
        if size == 0.0 {
            return Scaled::ZERO;
        }
        let shift = exponent_of(size);
        let mantissa = Complex64::new(ldexp(mantissa.re, -shift), ldexp(mantissa.im, -shift));
        Scaled { mantissa, exponent: exponent.saturating_add(shift) }
    }

    /// `e^w`, for any finite `w`.
    pub fn exp(w: Complex64) -> Self {
        if w.re.abs() < 700.0 {
            return Scaled::new(w.exp(), 0);
        }
        if w.re.is_nan() || !w.im.is_finite() {
            return Scaled { mantissa: Complex64::new(f64::NAN, f64::NAN), exponent: 0 };
        }
        if w.re.abs() > 1e18 {
            return if w.re < 0.0 {
                Scaled::ZERO
            } else {
                Scaled { mantissa: Complex64::new(f64::INFINITY, 0.0), exponent: 0 }
            };
        }
        // e^re = 2^n e^(re - n ln 2); ln 2 in two parts, the first with 21 trailing zero bits.
        const LN2_HI: f64 = 0.693_147_180_369_123_8;
        const LN2_LO: f64 = 1.908_214_929_270_587_7e-10;
        let n = (w.re * std::f64::consts::LOG2_E).round();
        let rest = n.mul_add(-LN2_HI, w.re) - n * LN2_LO;
        Scaled::new(Complex64::new(rest, w.im).exp(), n as i64)
    }

    /// The plain number: infinity or zero where it does not fit.
    pub fn to_complex(self) -> Complex64 {
        Complex64::new(
            ldexp(self.mantissa.re, self.exponent),
            ldexp(self.mantissa.im, self.exponent),
        )
    }

    /// Natural logarithm of the modulus (minus infinity for zero).
    pub fn ln_norm(self) -> f64 {
        self.mantissa.norm().ln() + self.exponent as f64 * std::f64::consts::LN_2
    }

    /// The modulus.
    pub fn norm(self) -> Self {
        Scaled::new(Complex64::new(self.mantissa.norm(), 0.0), self.exponent)
    }

    /// True for zero.
    pub fn is_zero(self) -> bool {
        self.mantissa.re == 0.0 && self.mantissa.im == 0.0
    }

    /// True if the mantissa is finite.
    pub fn is_finite(self) -> bool {
        self.mantissa.re.is_finite() && self.mantissa.im.is_finite()
    }

    /// The complex conjugate.
    pub fn conj(self) -> Self {
        Scaled { mantissa: self.mantissa.conj(), exponent: self.exponent }
    }

    /// The mantissa that belongs to the given exponent: `value / 2^exponent`.
    pub fn mantissa_at(self, exponent: i64) -> Complex64 {
        let shift = self.exponent.saturating_sub(exponent);
        Complex64::new(ldexp(self.mantissa.re, shift), ldexp(self.mantissa.im, shift))
    }
}

impl From<Complex64> for Scaled {
    fn from(value: Complex64) -> Self {
        Scaled::new(value, 0)
    }
}

impl Mul for Scaled {
    type Output = Scaled;
    fn mul(self, other: Scaled) -> Scaled {
        Scaled::new(self.mantissa * other.mantissa, self.exponent.saturating_add(other.exponent))
    }
}

impl Mul<Complex64> for Scaled {
    type Output = Scaled;
    fn mul(self, factor: Complex64) -> Scaled {
        self * Scaled::from(factor)
    }
}

impl Mul<f64> for Scaled {
    type Output = Scaled;
    fn mul(self, factor: f64) -> Scaled {
        self * Scaled::from(Complex64::new(factor, 0.0))
    }
}

impl std::ops::Add for Scaled {
    type Output = Scaled;
    fn add(self, other: Scaled) -> Scaled {
        if self.is_zero() {
            return other;
        }
        if other.is_zero() {
            return self;
        }
        let top = self.exponent.max(other.exponent);
        Scaled::new(self.mantissa_at(top) + other.mantissa_at(top), top)
    }
}

impl Neg for Scaled {
    type Output = Scaled;
    fn neg(self) -> Scaled {
        Scaled { mantissa: -self.mantissa, exponent: self.exponent }
    }
}

//! Numbers as an unevaluated sum of two doubles, for phases that must be right to far more than
//! their leading digits.
//!
//! Sums after Knuth, products after Dekker with Veltkamp's splitting (common practice; no fused
//! multiply-add is assumed, since a call to it is slow where the processor has none). Products are
//! exact for factors below 2^996 whose product lies above 2^-969.

use num_complex::Complex64;

/// `a + b = hi + lo` exactly.
#[inline]
pub(crate) fn two_sum(a: f64, b: f64) -> Dd {
    let hi = a + b;
    let from_b = hi - a;
    Dd { hi, lo: (a - (hi - from_b)) + (b - from_b) }
}

/// `a + b = hi + lo` exactly for `|a| >= |b|` or `a = 0`.
#[inline]
pub(crate) fn quick_two_sum(a: f64, b: f64) -> Dd {
    let hi = a + b;
    Dd { hi, lo: b - (hi - a) }
}

/// The two halves of a number (26 bits each).
#[inline]
fn halves(a: f64) -> (f64, f64) {
    let shifted = 134_217_729.0 * a; // 2^27 + 1
    let top = shifted - (shifted - a);
    (top, a - top)
}

/// `a * b = hi + lo` exactly.
#[inline]
pub(crate) fn two_product(a: f64, b: f64) -> Dd {
    let hi = a * b;
    let (a1, a2) = halves(a);
    let (b1, b2) = halves(b);
    Dd { hi, lo: ((a1 * b1 - hi) + a1 * b2 + a2 * b1) + a2 * b2 }
}

/// `hi + lo` with `|lo|` at most half a unit in the last place of `hi`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Dd {
    /// The leading word.
    pub hi: f64,
    /// What it lacks.
    pub lo: f64,
}

impl Dd {
    /// The sum, to about 2^-104 of the larger term.
    #[inline]
    pub(crate) fn plus(self, other: Dd) -> Dd {
        let sum = two_sum(self.hi, other.hi);
        quick_two_sum(sum.hi, sum.lo + (self.lo + other.lo))
    }

    /// The product, to about 2^-102.
    #[inline]
    pub(crate) fn times(self, other: Dd) -> Dd {
        let product = two_product(self.hi, other.hi);
        quick_two_sum(product.hi, product.lo + (self.hi * other.lo + self.lo * other.hi))
    }

    /// The negative.
    #[inline]
    pub(crate) fn minus(self) -> Dd {
        Dd { hi: -self.hi, lo: -self.lo }
    }
}

/// A constant for argument reduction.
pub(crate) struct Period {
    /// As the sum of three doubles.
    parts: [f64; 3],
    /// The same, the first two with 30 bits each: small multiples of them are exact.
    short: [f64; 3],
    inverse: f64,
}

/// pi/2.
pub(crate) const HALF_PI: Period = Period {
    parts: [std::f64::consts::FRAC_PI_2, 6.123233995736766e-17, -1.4973849048591698e-33],
    short: [1.570796325802803, 9.920935791635221e-10, 5.170182981794105e-19],
    inverse: std::f64::consts::FRAC_2_PI,
};

/// ln 2.
pub(crate) const LN_2: Period = Period {
    parts: [std::f64::consts::LN_2, 2.3190468138462996e-17, 5.707708438416212e-34],
    short: [0.6931471796706319, 8.893134232496047e-10, 6.390629507645039e-19],
    inverse: std::f64::consts::LOG2_E,
};

/// Added and subtracted, it rounds to an integer.
const ROUNDER: f64 = 6_755_399_441_055_744.0; // 1.5 * 2^52
/// Below this the quotient by a period has at most 22 bits.
const SHORT: f64 = 2e6;

impl Period {
    /// `x = n * period + r` with `|r|` at most a hair above half the period; for `|x| < 2^62`.
    #[inline]
    pub(crate) fn reduce(&self, x: Dd) -> (i64, Dd) {
        if x.hi.abs() < SHORT {
            return self.reduce_short(x);
        }
        let (n, r) = self.reduce_once(x);
        if x.hi.abs() < 1e8 {
            return (n, r);
        }
        // The quotient itself was rounded: the rest may hold several periods more.
        let (more, r) = self.reduce_once(r);
        (n + more, r)
    }

    /// For `|x| < SHORT` (Cody and Waite's reduction; common practice).
    #[inline]
    fn reduce_short(&self, x: Dd) -> (i64, Dd) {
        let n = (x.hi * self.inverse + ROUNDER) - ROUNDER;
        // Exact, since the two are close to each other or n is zero.
        let top = x.hi - n * self.short[0];
        let sum = two_sum(top, -(n * self.short[1]));
        (n as i64, quick_two_sum(sum.hi, sum.lo + (x.lo - n * self.short[2])))
    }

    #[inline]
    fn reduce_once(&self, x: Dd) -> (i64, Dd) {
        let quotient = x.hi * self.inverse;
        let n =
            if quotient.abs() < 1e15 { (quotient + ROUNDER) - ROUNDER } else { quotient.round() };
        let first = two_product(n, self.parts[0]);
        let second = two_product(n, self.parts[1]);
        let top = two_sum(x.hi, -first.hi);
        let middle = two_sum(x.lo, -first.lo);
        let low = two_sum(middle.hi, -second.hi);
        let rest = low.lo + middle.lo + top.lo - second.lo - n * self.parts[2];
        let sum = two_sum(top.hi, low.hi);
        (n as i64, quick_two_sum(sum.hi, sum.lo + rest))
    }
}

/// sin and cos of a number of any size below 2^62, to about one unit in the last place.
#[inline]
pub(crate) fn sin_cos(x: Dd) -> (f64, f64) {
    let (n, r) = HALF_PI.reduce(x);
    let q = r.hi * r.hi;
    // Taylor series (DLMF 4.19.1, 4.19.2); |r| <= pi/4.
    const S: [f64; 8] = odd_series(-1.0);
    const C: [f64; 8] = even_series(-1.0);
    let sin = r.hi + r.hi * (q * horner(&S, q));
    let cos = 1.0 + q * horner(&C, q);
    let (sin, cos) = (sin + r.lo * cos, cos - r.lo * sin);
    match n & 3 {
        0 => (sin, cos),
        1 => (cos, -sin),
        2 => (-sin, -cos),
        _ => (-cos, sin),
    }
}

/// `e^x = up * 2^n` and `e^-x = down * 2^-n`, returned as `(up, down, n)`; for `|x| < 2^62`.
#[inline]
pub(crate) fn exp_both(x: Dd) -> (f64, f64, i64) {
    let (n, r) = LN_2.reduce(x);
    let q = r.hi * r.hi;
    // Taylor series (DLMF 4.33.1, 4.33.2); |r| <= ln(2)/2.
    const S: [f64; 6] = odd_series(1.0);
    const C: [f64; 6] = even_series(1.0);
    let sinh = r.hi * (q * horner(&S, q)) + r.lo + r.hi;
    let cosh = q * horner(&C, q) + r.lo * r.hi;
    (1.0 + (cosh + sinh), 1.0 + (cosh - sinh), n)
}

/// A complex number in double-double.
#[derive(Clone, Copy)]
pub(crate) struct Precise {
    /// The real part.
    pub re: Dd,
    /// The imaginary part.
    pub im: Dd,
}

/// The sum, to 2^-104 of itself.
#[inline]
fn close_sum(a: Dd, b: Dd) -> Dd {
    let top = two_sum(a.hi, b.hi);
    let low = two_sum(a.lo, b.lo);
    let sum = quick_two_sum(top.hi, top.lo + low.hi);
    quick_two_sum(sum.hi, sum.lo + low.lo)
}

/// Product with a plain number.
#[inline]
fn scaled(a: Dd, b: f64) -> Dd {
    let product = two_product(a.hi, b);
    quick_two_sum(product.hi, product.lo + a.lo * b)
}

impl Precise {
    /// Exactly this number.
    pub(crate) fn from(z: Complex64) -> Self {
        Precise { re: Dd { hi: z.re, lo: 0.0 }, im: Dd { hi: z.im, lo: 0.0 } }
    }

    /// `self * t + other`.
    pub(crate) fn times_plus(self, t: Complex64, other: Precise) -> Self {
        let re = close_sum(scaled(self.re, t.re), scaled(self.im, -t.im));
        let im = close_sum(scaled(self.re, t.im), scaled(self.im, t.re));
        Precise { re: close_sum(re, other.re), im: close_sum(im, other.im) }
    }

    /// Rounded.
    pub(crate) fn round(self) -> Complex64 {
        Complex64::new(self.re.hi, self.im.hi)
    }
}

/// `e^w` as a number and an exponent of two.
pub(crate) fn exponential(w: Precise) -> (Complex64, i64) {
    let (sin, cos) = sin_cos(w.im);
    let (up, _, n) = exp_both(w.re);
    (Complex64::new(up * cos, up * sin), n)
}

/// `sign^j / (2j+1)!` for j = 1, 2, ...
const fn odd_series<const N: usize>(sign: f64) -> [f64; N] {
    let mut out = [0.0; N];
    let (mut term, mut j) = (1.0, 0);
    while j < N {
        let n = (2 * j + 2) as f64;
        term *= sign / (n * (n + 1.0));
        out[j] = term;
        j += 1;
    }
    out
}

/// `sign^j / (2j)!` for j = 1, 2, ...
const fn even_series<const N: usize>(sign: f64) -> [f64; N] {
    let mut out = [0.0; N];
    let (mut term, mut j) = (1.0, 0);
    while j < N {
        let n = (2 * j + 1) as f64;
        term *= sign / (n * (n + 1.0));
        out[j] = term;
        j += 1;
    }
    out
}

#[inline]
fn horner<const N: usize>(coefficients: &[f64; N], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, c| sum * x + c)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn products_and_sums_are_exact() {
        // (2^27 + 1)^2 = 2^54 + 2^28 + 1 has 55 bits.
        let p = two_product(134_217_729.0, 134_217_729.0);
        assert_eq!((p.hi, p.lo), (18_014_398_777_917_440.0, 1.0));
        let s = two_sum(1e16, 1.25);
        assert_eq!((s.hi, s.lo), (1e16 + 2.0, -0.75));
    }

    #[test]
    fn sine_and_cosine_keep_the_low_word() {
        // sin(2^60), cos(2^60), sin(10^6), cos(10^6) and e^1000 / 2^1443 from 150-digit arithmetic (mpmath).
        let (s, c) = sin_cos(Dd { hi: 1_152_921_504_606_846_976.0, lo: 0.0 });
        assert!((s - SIN_2_60).abs() < 3e-16 && (c - COS_2_60).abs() < 3e-16, "{s} {c}");
        let (s, c) = sin_cos(Dd { hi: 1e6, lo: 0.0 });
        assert!((s - SIN_1E6).abs() < 1.2e-16 && (c - COS_1E6).abs() < 1.2e-16, "{s} {c}");
        let (up, down, n) = exp_both(Dd { hi: 1000.0, lo: 0.0 });
        assert_eq!(n, 1443);
        assert!((up - EXP_1000).abs() < 3e-16 * up && (up * down - 1.0).abs() < 5e-16);
    }
    const SIN_2_60: f64 = -0.8306492176372546;
    const COS_2_60: f64 = -0.5567960822766417;
    const SIN_1E6: f64 = -0.34999350217129294;
    const COS_1E6: f64 = 0.9367521275331447;
    const EXP_1000: f64 = 0.809465158140234;
}

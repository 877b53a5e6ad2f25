//! The transition functions of a mode at its cut-off.
//!
//! Near cut-off the field of a slowly varying guide obeys, in the layer's own range `t` and
//! distance from the boundary `y`,
//!
//! ```text
//! i U_t + U_yy = 0   (y > 0),      U_y = t U   (y = 0)
//! U(t, y) = sqrt(2/pi) * integral of p exp(i p y - i p^2 t - (2/3) p^3) dp
//! ```
//!
//! The contour ends at +infinity and begins in one of two valleys: at `infinity e^(2 pi i/3)`
//! ([`bound`]: for `t -> -infinity` the bound mode, of unit norm at every real `t`) or at
//! `infinity e^(-2 pi i/3)` ([`free`]: no bound mode comes in).
//!
//! Method. With `p = -i t/2 + p'` the exponent is `t y/2 + i t^3/6 + b p' - (2/3) p'^3`,
//! `b = i y - t^2/2`: two moments of an Airy integral (DLMF 9.5.4), so `U` is Ai and Ai' at
//! `z = e^(-+2 pi i/3) 2^(-1/3) b`. Two regions:
//!
//! - `|(2/3) z^(3/2)| < 18`: that closed form. The prefactor `exp(t y/2 + i t^3/6)` overflows long
//!   before `U` does, so every factor carries its exponent apart.
//! - beyond: the expansions of Ai and Ai' (DLMF 9.7.5, 9.7.6; the second exponential beyond the
//!   Stokes line from 9.2.12), summed saddle by saddle. The two terms of `U` then cancel in the
//!   algebra (`v_k - u_k = -12 k u_k/(6 k - 1)`) and not in the digits, and the whole exponent is
//!   the cubic at the saddle `p_s`: stationary there, so `p_s` in plain doubles and the cubic in
//!   double-double give the phase to its last digit.
//!
//! Source: the boundary-layer problem is that of mode disappearance in shoaling guides (Pierce, J.
//! Acoust. Soc. Am. 72 (1982) 523, cited from memory); the closed form is derived here.

use crate::special::airy::rotated_extended;
use crate::special::double_double::{Dd, exp_both, quick_two_sum, sin_cos, two_sum};
use crate::{Complex64, Error, Scaled};

/// A transition function and its derivative across the boundary.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Transition<T> {
    /// `U(t, y)`.
    pub u: T,
    /// The derivative of `U` with respect to `y`.
    pub u_y: T,
}

const I: Complex64 = Complex64::new(0.0, 1.0);
/// e^(2 pi i/3)
const TURN: Complex64 = Complex64::new(-0.5, 0.866_025_403_784_438_6);
/// 2^(-1/3)
const CBRT_HALF: Dd = Dd { hi: 0.793_700_525_984_099_8, lo: -5.434_504_097_098_911_5e-17 };
const TWO_THIRDS: Dd = Dd { hi: 0.666_666_666_666_666_6, lo: 3.700_743_415_417_188e-17 };
const SIXTH: Dd = Dd { hi: 0.166_666_666_666_666_66, lo: 9.251_858_538_542_97e-18 };
const SQRT_TWO_OVER_PI: f64 = 0.797_884_560_802_865_4;
/// From this `|zeta|` on the smallest term of the expansion is below the rounding.
const FAR: f64 = 18.0;

/// The transition function of a bound mode that goes through cut-off.
///
/// `U -> sqrt(-2 t) exp(t y + i t^3/3 + i pi/4)` for `t -> -infinity`; the integral of `|U|^2` over
/// `y >= 0` is 1 at every real `t`; `|U(t, 0)| t^(5/2) -> 1/sqrt(2)` for `t -> +infinity`, when the
/// mode has become a beam along `y = 2^(2/3) t`.
///
/// Both arguments are pure numbers, complex where the medium absorbs (`U` is entire in both).
/// Values beyond the range of `f64` come out as infinity or zero: see [`bound_extended`].
///
/// Errors: an argument that is not finite ([`Error::Domain`]), or one whose phase exceeds 10^15
/// ([`Error::NoDigits`]; reached at `|t|` of about 10^5).
///
/// Accuracy: 1e-13 of `max(|U|, |U_y|/(1 + |t|))`. Cost: one pair of Airy functions, or less.
///
/// ```
/// use merging_saddles::guide::layer::bound;
/// // At t = 0, y = 0 (derived here from DLMF 9.2.4): |U| = sqrt(2/pi) 2^(-2/3) 2 pi |Ai'(0)|,
/// // Ai'(0) = -0.2588194037928068 (DLMF 9.2.4), and the boundary condition U_y = t U gives 0.
/// let at_cut_off = bound(0.0, 0.0)?;
/// let expected = (2.0 / std::f64::consts::PI).sqrt()
///     * 2f64.powf(-2.0 / 3.0) * 2.0 * std::f64::consts::PI * 0.2588194037928068;
/// assert!((at_cut_off.u.norm() - expected).abs() < 1e-14);
/// assert!(at_cut_off.u_y.norm() < 1e-15);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn bound(
    t: impl Into<Complex64>,
    y: impl Into<Complex64>,
) -> Result<Transition<Complex64>, Error> {
    bound_extended(t, y).map(Transition::plain)
}

/// [`bound`] with the exponents apart, for values that leave the range of `f64`.
///
/// ```
/// use merging_saddles::guide::layer::{bound, bound_extended};
/// // A deeply bound mode is sqrt(-2 t) e^(t y) (derived relation): e^(-1000) has no double.
/// assert_eq!(bound(-1000.0, 1.0)?.u.norm(), 0.0);
/// let ln = bound_extended(-1000.0, 1.0)?.u.ln_norm();
/// assert!((ln - (2000f64.sqrt().ln() - 1000.0)).abs() < 1e-3);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn bound_extended(
    t: impl Into<Complex64>,
    y: impl Into<Complex64>,
) -> Result<Transition<Scaled>, Error> {
    transition(t.into(), y.into(), Start::Above)
}

/// The transition function without a bound mode as `t -> -infinity`.
///
/// The second solution that is regular at cut-off: its contour begins at
/// `infinity e^(-2 pi i/3)`. It grows with `y` and serves as the partner of [`bound`] in matching.
/// Arguments, errors and accuracy as there.
///
/// ```
/// use merging_saddles::guide::layer::{bound, free};
/// // At t = 0, y = 0 both have the same modulus (derived relation: conjugate contours).
/// let (b, f) = (bound(0.0, 0.0)?.u, free(0.0, 0.0)?.u);
/// assert!((b.norm() - f.norm()).abs() < 1e-15);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn free(
    t: impl Into<Complex64>,
    y: impl Into<Complex64>,
) -> Result<Transition<Complex64>, Error> {
    free_extended(t, y).map(Transition::plain)
}

/// [`free`] with the exponents apart, for values that leave the range of `f64`.
///
/// ```
/// use merging_saddles::guide::layer::free_extended;
/// // The boundary condition U_y = t U at y = 0 (definition), where |U| is about e^(9000).
/// let far = free_extended(30.0, 0.0)?;
/// let ratio = (far.u_y.ln_norm() - far.u.ln_norm()).exp();
/// assert!(far.u.to_complex().norm().is_finite() && (ratio - 30.0).abs() < 1e-9);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn free_extended(
    t: impl Into<Complex64>,
    y: impl Into<Complex64>,
) -> Result<Transition<Scaled>, Error> {
    transition(t.into(), y.into(), Start::Below)
}

impl Transition<Scaled> {
    fn plain(self) -> Transition<Complex64> {
        Transition { u: self.u.to_complex(), u_y: self.u_y.to_complex() }
    }
}

/// The valley in which the contour begins: at `infinity e^(2 pi i/3)` or below the real axis.
#[derive(Clone, Copy, PartialEq)]
enum Start {
    Above,
    Below,
}

impl Start {
    /// Direction of the Airy argument over `2^(-1/3) b`.
    fn direction(self) -> Complex64 {
        if self == Start::Above { TURN.conj() } else { TURN }
    }

    /// The sign that makes the contour end at +infinity.
    fn sign(self) -> f64 {
        if self == Start::Above { 1.0 } else { -1.0 }
    }
}

fn transition(t: Complex64, y: Complex64, start: Start) -> Result<Transition<Scaled>, Error> {
    for (what, value) in [("t", t), ("y", y)] {
        if !(value.re.is_finite() && value.im.is_finite()) {
            return Err(Error::Domain { what, value, remedy: "pass a finite number" });
        }
    }
    // No phase of the function is larger than this.
    let (size_t, size_y) = (t.norm(), y.norm());
    let root = size_t + size_y.sqrt();
    if root * (size_y + root * (size_t + root)) > 1e15 {
        return Err(Error::NoDigits {
            what: "the transition function",
            value: if size_y > size_t * size_t { y } else { t },
            digits: 0.0,
            remedy: "keep |t| below 3e4 and |y| below 5e9; farther from cut-off the mode is \
                     adiabatic or gone",
        });
    }
    // b = i y - t^2/2, in double-double: near the caustic of complex t its terms cancel.
    let (t2, y2) = (Wide::new(t), Wide::new(y));
    let b = y2.times_i().plus(t2.times(t2).scale(exact(-0.5)));
    let w = b.scale(CBRT_HALF);
    let z = w.rounded() * start.direction();
    let root_z = z.sqrt();
    let zeta = z * root_z * (2.0 / 3.0);
    Ok(if zeta.norm() < FAR {
        near(t, t2, y2, b.rounded(), w, start)
    } else {
        far(t, y, z, root_z, zeta, start)
    })
}

/// The closed form by Ai and Ai'.
fn near(
    t: Complex64,
    t2: Wide,
    y2: Wide,
    b: Complex64,
    w: Wide,
    start: Start,
) -> Transition<Scaled> {
    let e = start.direction();
    let top = w.rounded();
    let pair = rotated_extended(top);
    let (ai, ai_prime) = match start {
        Start::Above => (pair.minus, pair.minus_prime),
        Start::Below => (pair.plus, pair.plus_prime),
    };
    // One Taylor step for what rounding took from w.
    let missing = w.rest() * e;
    let (ai, ai_prime) = (ai + ai_prime * missing, ai_prime + ai * (missing * (e * top)));
    let two_pi_i = I * std::f64::consts::TAU;
    let half = CBRT_HALF.hi;
    let i0 = ai * (two_pi_i * e * half);
    let i1 = ai_prime * (two_pi_i * (e * e) * (half * half));
    // exp(t y/2 + i t^3/6)
    let exponent =
        t2.times(y2).scale(exact(0.5)).plus(t2.times(t2).times(t2).scale(SIXTH).times_i()).exp();
    let factor = exponent * (start.sign() * SQRT_TWO_OVER_PI);
    let u = i1 + i0 * (I * t * -0.5);
    let u_y = i0 * ((b - t * t * 0.5) * 0.5) + i1 * (-I * t);
    Transition { u: factor * u, u_y: factor * u_y * I }
}

/// The expansion for large argument, saddle by saddle.
fn far(
    t: Complex64,
    y: Complex64,
    z: Complex64,
    root_z: Complex64,
    zeta: Complex64,
    start: Start,
) -> Transition<Scaled> {
    // p' = a s maps the cubic to s^3/3 - z s: a = -2^(-1/3) e^(-+2 pi i/3), saddles s = +-sqrt z.
    let a = start.direction() * -CBRT_HALF.hi;
    let c = a * root_z;
    // The saddles have the product -i y/2: the smaller one from the larger, without cancellation.
    let (direct, other) = (c - I * t * 0.5, -c - I * t * 0.5);
    let product = I * y * -0.5;
    let (direct, other) = if direct.norm() >= other.norm() {
        (direct, product / direct)
    } else {
        (product / other, other)
    };
    let g = -I * std::f64::consts::SQRT_2 * a / root_z.sqrt() * start.sign();
    let main = saddle(t, y, direct, c, -zeta.inv(), g);
    // Beyond the Stokes lines |arg z| = 2 pi/3 the other exponential is there as well.
    if z.im.abs() >= -3f64.sqrt() * z.re {
        return main;
    }
    let turn = if z.im >= 0.0 { I } else { -I };
    let second = saddle(t, y, other, -c, zeta.inv(), g * turn);
    Transition { u: main.u + second.u, u_y: main.u_y + second.u_y }
}

/// One saddle's contribution; `x = -+1/zeta` and `c = p + i t/2`.
fn saddle(
    t: Complex64,
    y: Complex64,
    p: Complex64,
    c: Complex64,
    x: Complex64,
    g: Complex64,
) -> Transition<Scaled> {
    // sum of u_k x^k and of (v_k - u_k) x^k, DLMF 9.7.2.
    let one = Complex64::new(1.0, 0.0);
    let (mut term, mut sum, mut rest) = (one, one, Complex64::new(0.0, 0.0));
    let mut size = 1.0;
    for k in 1..=40 {
        let k = f64::from(k);
        let ratio =
            (6.0 * k - 5.0) * (6.0 * k - 3.0) * (6.0 * k - 1.0) / (216.0 * k * (2.0 * k - 1.0));
        let next = term * x * ratio;
        if next.norm() >= size {
            break;
        }
        term = next;
        size = term.norm();
        sum += term;
        rest -= term * (12.0 * k / (6.0 * k - 1.0));
        if size < 1e-18 {
            break;
        }
    }
    // The cubic i p y - i p^2 t - (2/3) p^3.
    let wide = Wide::new(p);
    let inner = wide.scale(TWO_THIRDS).plus(Wide::new(I * t));
    let exponent = wide.times(Wide::new(I * y).plus(wide.times(inner).negative())).exp();
    Transition {
        u: exponent * (g * (p * sum + c * rest)),
        u_y: exponent * (I * g * (p * p * sum - I * t * c * rest)),
    }
}

/// A double as it is.
fn exact(hi: f64) -> Dd {
    Dd { hi, lo: 0.0 }
}

/// `a + b` to about 2^-104 of the larger term.
fn sum(a: Dd, b: Dd) -> Dd {
    let top = two_sum(a.hi, b.hi);
    quick_two_sum(top.hi, top.lo + (a.lo + b.lo))
}

/// A complex number in double-double.
#[derive(Clone, Copy)]
struct Wide {
    re: Dd,
    im: Dd,
}

impl Wide {
    fn new(z: Complex64) -> Self {
        Wide { re: exact(z.re), im: exact(z.im) }
    }

    fn plus(self, other: Wide) -> Wide {
        Wide { re: sum(self.re, other.re), im: sum(self.im, other.im) }
    }

    fn negative(self) -> Wide {
        Wide { re: self.re.minus(), im: self.im.minus() }
    }

    fn times(self, other: Wide) -> Wide {
        Wide {
            re: sum(self.re.times(other.re), self.im.times(other.im).minus()),
            im: sum(self.re.times(other.im), self.im.times(other.re)),
        }
    }

    fn times_i(self) -> Wide {
        Wide { re: self.im.minus(), im: self.re }
    }

    fn scale(self, factor: Dd) -> Wide {
        Wide { re: self.re.times(factor), im: self.im.times(factor) }
    }

    fn rounded(self) -> Complex64 {
        Complex64::new(self.re.hi, self.im.hi)
    }

    fn rest(self) -> Complex64 {
        Complex64::new(self.re.lo, self.im.lo)
    }

    fn exp(self) -> Scaled {
        let (up, _, n) = exp_both(self.re);
        let (sin, cos) = sin_cos(self.im);
        Scaled::new(Complex64::new(up * cos, up * sin), n)
    }
}

//! Incomplete Airy integrals.
//!
//! With `phi(t) = i (t^3/3 + x t)` and the valleys of `e^phi` around `arg t = pi/6, 5 pi/6, -pi/2`:
//! from the end point `a` a chain of straight pieces descends into some valley v; the integral along
//! it is a sum of Gauss-Legendre rules (20 points for a change of the phase of at most 18), and the
//! rest, from v to the valley of the definition, is a complete Airy integral (DLMF 9.5.4, its
//! rotated forms). Any valley is right as long as both parts use the same one: no Stokes line needs
//! attention, and no part exceeds the end-point or the saddle-point contribution it stands for.
//!
//! Pieces point to the lowest of 16 points on a circle, the first of them being in the direction of
//! steepest descent; on a saddle that finds the way down all the same. The phase at `a` is taken in
//! double-double and split off; the sums contain differences only.

use super::pair::SIN_60;
use super::{airy_extended, rotated_extended};
use crate::special::double_double::{Dd, exp_both, sin_cos, two_product};
use crate::special::panels::RULE;
use crate::{Error, Scaled};
use num_complex::Complex64;
use std::f64::consts::{FRAC_PI_3, TAU};

/// The integrals with 1 and with t under the integral.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct IncompleteAiry<T> {
    /// The integral of `exp(i (t^3/3 + x t))`.
    pub i0: T,
    /// The integral of `t exp(i (t^3/3 + x t))`.
    pub i1: T,
}

/// The integrand is this many factors of e below its start where the chain may end.
const DEPTH: f64 = 39.0;
/// More pieces than any chain needs.
const LIMIT: usize = 400;
/// The largest phase that double-double arithmetic leaves with all digits.
const LARGEST_PHASE: f64 = 1e15;

/// A chain that does not end: never seen.
const LOST: Error = Error::NoConvergence {
    what: "the way down from a",
    limit: LIMIT,
    remedy: "move a or x by a little",
};

/// `phi` about a point: `slope h + curvature h^2/2 + i h^3/3`.
struct Local {
    slope: Complex64,
    curvature: Complex64,
}

impl Local {
    fn at(t: Complex64, x: Complex64) -> Self {
        let i = Complex64::I;
        Local { slope: i * (t * t + x), curvature: 2.0 * i * t }
    }

    /// The change of phi over the step `h`.
    fn change(&self, h: Complex64) -> Complex64 {
        h * (self.slope + h * (self.curvature * 0.5 + h * Complex64::new(0.0, 1.0 / 3.0)))
    }

    /// The length over which the first term changes by `first` and the others by `other` at most.
    fn length(&self, first: f64, other: f64) -> f64 {
        let second = (2.0 * other / self.curvature.norm()).sqrt();
        (first / self.slope.norm()).min(second).min((3.0 * other).cbrt())
    }

    /// The lowest point on the circle of radius `length`.
    fn lowest(&self, length: f64) -> Complex64 {
        let size = self.slope.norm();
        let steepest = if size > 0.0 { -self.slope.conj() / size } else { Complex64::ONE } * length;
        let mut best = (f64::INFINITY, steepest);
        for j in 0..16 {
            let h = steepest * Complex64::from_polar(1.0, TAU * f64::from(j) / 16.0);
            let height = self.change(h).re;
            if height < best.0 {
                best = (height, h);
            }
        }
        best.1
    }
}

/// The integrals from `a` to infinity in the valley around `arg t = pi/6`,
///
/// ```text
/// I_m(x, a) = integral of t^m exp(i (t^3/3 + x t)) dt,   m = 0, 1
/// ```
///
/// for complex `x` and `a`. Over the whole line `I_0` is `2 pi Ai(x)` (DLMF 9.5.4). Overflow and
/// underflow go to infinity and zero; [`incomplete_airy_extended`] keeps the exponent apart.
///
/// Accuracy, relative to the modulus: 2e-15 away from zeros (measured for `|x| <= 200`, `|a| <= 18`).
/// Cost: some 4 microseconds. Errors: NaN or infinity, and a phase `|a|^3/3 + |x a|` above 1e15.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::{airy_real, incomplete_airy}};
/// // From far out on the negative axis (in the valley around 5 pi/6) nothing is missing: DLMF 9.5.4.
/// let start = Complex64::from_polar(9.0, 5.0 * std::f64::consts::FRAC_PI_6);
/// let v = incomplete_airy(Complex64::new(-1.25, 0.0), start)?;
/// let whole = 2.0 * std::f64::consts::PI * airy_real(-1.25).ai;
/// assert!((v.i0 - whole).norm() < 1e-14);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn incomplete_airy(x: Complex64, a: Complex64) -> Result<IncompleteAiry<Complex64>, Error> {
    let v = incomplete_airy_extended(x, a)?;
    Ok(IncompleteAiry { i0: v.i0.to_complex(), i1: v.i1.to_complex() })
}

/// [`incomplete_airy`] with the exponent carried apart.
///
/// ```
/// use merging_saddles::{Complex64, special::airy::incomplete_airy_extended};
/// // I_0(0, a) is about i e^(i a^3/3)/a^2 far out (one integration by parts of the definition),
/// // here of the size of e^9000: a = 30 i, next term 2/(a^3).
/// let v = incomplete_airy_extended(Complex64::new(0.0, 0.0), Complex64::new(0.0, 30.0))?;
/// assert!((v.i0.ln_norm() - (9000.0 - 900f64.ln())).abs() < 1e-4);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn incomplete_airy_extended(
    x: Complex64,
    a: Complex64,
) -> Result<IncompleteAiry<Scaled>, Error> {
    check(x, a)?;
    let (sums, end) = descend(x, a)?;
    let at_start = exponential(x, a);
    let (i0, i1) = (at_start * sums[0], at_start * sums[1]);
    // The factor w = e^(2 pi i/3) of the rotated forms.
    let w = Complex64::new(-0.5, SIN_60);
    let tau_i = Complex64::new(0.0, TAU);
    Ok(match valley(x, end)? {
        Valley::Right => IncompleteAiry { i0, i1 },
        Valley::Left => {
            let v = airy_extended(x);
            IncompleteAiry { i0: i0 + v.ai * TAU, i1: i1 + v.ai_prime * -tau_i }
        }
        Valley::Bottom => {
            let v = rotated_extended(x);
            IncompleteAiry {
                i0: i0 + v.minus * (w.conj() * -TAU),
                i1: i1 + v.minus_prime * (w * tau_i),
            }
        }
    })
}

fn check(x: Complex64, a: Complex64) -> Result<(), Error> {
    for (what, value) in [("x", x), ("a", a)] {
        if !(value.re.is_finite() && value.im.is_finite()) {
            return Err(Error::Domain { what, value, remedy: "pass a finite number" });
        }
    }
    let size = a.norm().powi(3) / 3.0 + x.norm() * a.norm() + x.norm().powf(1.5);
    if size > LARGEST_PHASE {
        return Err(Error::NoDigits {
            what: "incomplete Airy integral",
            value: if a.norm() > x.norm().sqrt() { a } else { x },
            digits: 31.0 - size.log10(),
            remedy: "keep |a|^3/3 + |x a| + |x|^(3/2) below 1e15",
        });
    }
    Ok(())
}

/// `e^(phi(a))`, its argument `i a (a^2/3 + x)` in double-double.
fn exponential(x: Complex64, a: Complex64) -> Scaled {
    const THIRD: Dd = Dd { hi: 1.0 / 3.0, lo: 1.850_371_707_708_594e-17 };
    let word = |hi: f64| Dd { hi, lo: 0.0 };
    let difference = |p: Dd, q: Dd| p.plus(q.minus());
    let square_re = difference(two_product(a.re, a.re), two_product(a.im, a.im));
    let square_im = two_product(2.0 * a.re, a.im);
    let re = square_re.times(THIRD).plus(word(x.re));
    let im = square_im.times(THIRD).plus(word(x.im));
    let phase = difference(re.times(word(a.re)), im.times(word(a.im)));
    let height = re.times(word(a.im)).plus(im.times(word(a.re))).minus();
    let (sin, cos) = sin_cos(phase);
    let (up, _, n) = exp_both(height);
    Scaled::new(Complex64::new(cos * up, sin * up), n)
}

/// The integrals of `t^m e^(phi(t) - phi(a))` down from `a`, and where the chain ends.
fn descend(x: Complex64, a: Complex64) -> Result<([Complex64; 2], Complex64), Error> {
    let start = Local::at(a, x);
    let mut sums = [Complex64::ZERO; 2];
    let mut h = Complex64::ZERO;
    for _ in 0..LIMIT {
        let local = Local::at(a + h, x);
        let step = local.lowest(local.length(10.0, 4.0));
        for (node, weight) in RULE {
            for place in [0.5 - 0.5 * node, 0.5 + 0.5 * node] {
                let here = h + step * place;
                let term = start.change(here).exp() * step * (0.5 * weight);
                sums[0] += term;
                sums[1] += term * (a + here);
            }
        }
        h += step;
        if start.change(h).re < -DEPTH {
            return Ok((sums, a + h));
        }
    }
    Err(LOST)
}

enum Valley {
    Right,
    Left,
    Bottom,
}

/// The valley below `t`: on down, without integrating, until the place is clear.
fn valley(x: Complex64, mut t: Complex64) -> Result<Valley, Error> {
    let saddle = (-x).sqrt();
    let size = saddle.norm();
    let deepest = 2.0 / 3.0 * size * size * size;
    for _ in 0..LIMIT {
        let height = (Complex64::I * t * (t * t / 3.0 + x)).re;
        // Below both saddles the three valleys are apart; this far out their angles tell them.
        if height < -deepest - 1.0 && t.norm() > 3.0 * size {
            let angle = t.arg();
            return Ok(if angle.abs() > FRAC_PI_3 * 1.5 && angle > 0.0 {
                Valley::Left
            } else if angle > -FRAC_PI_3 * 0.5 && angle < FRAC_PI_3 * 1.5 {
                Valley::Right
            } else if angle < -FRAC_PI_3 * 2.5 {
                Valley::Left
            } else {
                Valley::Bottom
            });
        }
        let local = Local::at(t, x);
        let reach = 0.25 * (t - saddle).norm().min((t + saddle).norm());
        t += local.lowest(reach.max(local.length(2.0, 1.0)));
    }
    Err(LOST)
}

//! Zeros of the Pearcey integral on the real plane.
//!
//! Newton's method in both parameters with the exact derivatives, from the asymptotic places
//! DLMF 36.7.2 (inside the cusp) and 36.7.3 (outside).

use super::pearcey;
use crate::Error;
use std::f64::consts::PI;

/// A zero of the Pearcey integral; `(-x1, x2)` is another one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PearceyZero {
    /// x_1.
    pub x1: f64,
    /// x_2.
    pub x2: f64,
}

const STEPS: usize = 40;

/// The zero to which Newton's method leads from `(x1, x2)`.
///
/// Accuracy: 2e-14 of the distance from the origin (zeros with `x2 > -11`, `x1 < 16`). Cost: about
/// five evaluations.
///
/// # Errors
/// [`Error::NoConvergence`] if no zero is reached in 40 steps of at most one quarter (there are none
/// for `x2 > 0`), [`Error::Domain`] and [`Error::NoDigits`] as [`pearcey`].
///
/// ```
/// use merging_saddles::special::cuspoid::pearcey_zero_near;
/// // Kaminski & Paris, J. Comput. Appl. Math. 107 (1999), Table 1, prints -1.743600, 2.352175
/// // (good to 4e-6).
/// let zero = pearcey_zero_near(2.3, -1.7)?;
/// assert!((zero.x1 - 2.352175).abs() < 5e-6 && (zero.x2 + 1.743600).abs() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn pearcey_zero_near(x1: f64, x2: f64) -> Result<PearceyZero, Error> {
    let (mut x1, mut x2) = (x1, x2);
    let mut last = f64::INFINITY;
    for _ in 0..STEPS {
        let v = pearcey(x1, x2)?;
        let [a, b] = v.derivatives;
        // Psi + a d1 + b d2 = 0 for real d1, d2.
        let determinant = a.re * b.im - a.im * b.re;
        let d1 = (v.psi.im * b.re - v.psi.re * b.im) / determinant;
        let d2 = (v.psi.re * a.im - v.psi.im * a.re) / determinant;
        let length = d1.hypot(d2);
        if !length.is_finite() {
            break;
        }
        let size = 1.0 + x1.hypot(x2);
        if length < 1e-10 * size && length >= 0.5 * last {
            // Only rounding is left.
            return Ok(PearceyZero { x1, x2 });
        }
        let cut = (0.25 / length).min(1.0);
        x1 += cut * d1;
        x2 += cut * d2;
        last = length;
    }
    Err(Error::NoConvergence {
        what: "Newton's method for a zero of the Pearcey integral",
        limit: STEPS,
        remedy: "start closer to a zero; all lie at x2 < -1.7",
    })
}

/// Zeros inside the cusp, `8 x_2^3 + 27 x_1^2 < 0`, with `x_1 > 0`: number `place` (from 0, by
/// increasing `x_1`) in row `row` (from 1, by decreasing `x_2`). Row `m` has `m` zeros.
///
/// Near `x_1 = 0` they lie at `x_2 = -sqrt(2 pi (2m + 1))`,
/// `x_1 = sqrt(-2/x_2) (2n + 1/2 + (-1)^m/2 +- 1/4) pi` (DLMF 36.7.2), from where the three terms
/// of stationary phase are brought to cancel before Newton's method takes over. Accuracy: as
/// [`pearcey_zero_near`].
///
/// # Errors
/// [`Error::Domain`] for row 0 and for a place that the row does not have; otherwise as
/// [`pearcey_zero_near`].
///
/// ```
/// use merging_saddles::special::cuspoid::pearcey_zero_inside;
/// // Kaminski & Paris (1999), Table 1: -4.378045, 0.527678 (good to 4e-6).
/// let zero = pearcey_zero_inside(1, 0)?;
/// assert!((zero.x1 - 0.527678).abs() < 5e-6 && (zero.x2 + 4.378045).abs() < 5e-6);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn pearcey_zero_inside(row: usize, place: usize) -> Result<PearceyZero, Error> {
    if row == 0 {
        return Err(Error::domain("row of zeros", 0.0, "rows are counted from 1"));
    }
    if place >= row {
        return Err(Error::domain("place", place as f64, "row m has places 0 to m - 1"));
    }
    // x_1 = sqrt(-2/x_2) (d +- 1/4) pi: places 0+, 2-, 2+, 4-, .. in odd rows, 1-, 1+, 3-, .. in
    // even ones.
    let odd = row % 2 == 1;
    let minus = odd == (place % 2 == 1);
    let d = if minus { place + 1 } else { place };
    let sign = if minus { 1.0 } else { -1.0 };
    let x2 = -(2.0 * PI * (2.0 * row as f64 + 1.0)).sqrt();
    let x1 = (-2.0 / x2).sqrt() * PI * (d as f64 - 0.25 * sign);
    let turns = |n: f64| 0.5 * PI - 2.0 * PI * n;
    let (row, d) = (row as f64, d as f64);
    let (first, second) = (turns(0.5 * (row + 1.0 + d)), turns(0.5 * (row + 1.0 - d)));
    let (x1, x2) = cancelled(x1, x2, first, second, sign);
    pearcey_zero_near(x1, x2)
}

/// Where the three terms of stationary phase cancel: `f_1 - f_0 = first + sign beta_1`,
/// `f_2 - f_0 = second - sign beta_2`, `beta` the angles of the triangle of the three moduli at the
/// middle one (saddle 0); 1 and 2 are the minima at negative and positive t.
fn cancelled(x1: f64, x2: f64, first: f64, second: f64, sign: f64) -> (f64, f64) {
    let (mut x1, mut x2) = (x1, x2);
    for _ in 0..STEPS {
        // Stay inside the cusp.
        x2 = x2.min(-1.0);
        let caustic = (8.0f64 / 27.0).sqrt() * x2.abs().powf(1.5);
        x1 = x1.clamp(-0.5 * caustic, 0.98 * caustic);
        // 4 t^3 + 2 x_2 t + x_1 = 0: three real solutions.
        let radius = 2.0 * (-x2 / 6.0).sqrt();
        let angle = (-x1 / caustic).acos() / 3.0;
        let at = |k: f64| radius * (angle + k * 2.0 * PI / 3.0).cos();
        let (t1, t2, t0) = (at(1.0), at(0.0), at(-1.0));
        let f = |t: f64| ((t * t + x2) * t + x1) * t;
        let a = |t: f64| 1.0 / (12.0 * t * t + 2.0 * x2).abs().sqrt();
        let (a1, a2, a0) = (a(t1), a(t2), a(t0));
        let beta =
            |p: f64, q: f64| ((p * p + a0 * a0 - q * q) / (2.0 * p * a0)).clamp(-1.0, 1.0).acos();
        let e1 = f(t1) - f(t0) - first - sign * beta(a1, a2);
        let e2 = f(t2) - f(t0) - second + sign * beta(a2, a1);
        // df/dx_m = t^m at a saddle.
        let (p1, q1) = (t1 - t0, t1 * t1 - t0 * t0);
        let (p2, q2) = (t2 - t0, t2 * t2 - t0 * t0);
        let determinant = p1 * q2 - p2 * q1;
        let d1 = (q1 * e2 - q2 * e1) / determinant;
        let d2 = (p2 * e1 - p1 * e2) / determinant;
        let length = d1.hypot(d2);
        if !length.is_finite() || length < 1e-4 {
            break;
        }
        let cut = (1.0 / length).min(1.0);
        x1 += cut * d1;
        x2 += cut * d2;
    }
    (x1, x2)
}

/// Zeros outside the cusp, `8 x_2^3 + 27 x_1^2 > 0`, with `x_1 > 0`: number `n`, from 0, along the
/// caustic by decreasing `x_2`.
///
/// They start from `x_1 = sqrt(8/27) |x_2|^(3/2) (1 + xi)`, `x_2 = -sqrt(3 pi (8n+5)/(9+8 xi))` with
/// `3 pi (8n+5) xi^(3/2)/(9+8 xi) = (27/16) sqrt(3/2) (ln(1/xi) + 3 ln(3/2))` (DLMF 36.7.3).
/// Accuracy, cost: as [`pearcey_zero_near`].
///
/// # Errors
/// As [`pearcey_zero_near`].
pub fn pearcey_zero_outside(n: usize) -> Result<PearceyZero, Error> {
    let turns = 3.0 * PI * (8.0 * n as f64 + 5.0);
    // Left minus right grows with xi.
    let excess = |xi: f64| {
        turns * xi * xi.sqrt() / (9.0 + 8.0 * xi)
            - 27.0 / 16.0 * 1.5f64.sqrt() * (3.0 * 1.5f64.ln() - xi.ln())
    };
    let (mut low, mut high) = (0.0, 4.0);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if excess(middle) > 0.0 { high = middle } else { low = middle }
    }
    let xi = 0.5 * (low + high);
    let x2 = -(turns / (9.0 + 8.0 * xi)).sqrt();
    let x1 = (8.0f64 / 27.0).sqrt() * x2.abs().powf(1.5) * (1.0 + xi);
    pearcey_zero_near(x1, x2)
}

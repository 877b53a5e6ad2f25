//! Steepest paths of `Re h`, `h = i e^(i delta) f`.
//!
//! Method. `t = Re h` is the variable, `dz/dt = 1/h'`. Second-order predictor, then one Newton
//! step onto the absolute target `h_start + t`, so that errors never add up. A step is accepted
//! when that correction is small against the step and against the radius of curvature. One that came
//! down next to a saddle so far off its height that Newton can't put it there is taken back.
//!
//! Source: steepest descent is P. Debye's (1909); the step rule was found by trial.

use crate::integral::Phase;
use crate::ring::ZERO;
use num_complex::Complex64;

/// `h = i e^(i delta) f`: the exponent, turned a little to leave Stokes lines.
#[derive(Clone, Copy)]
pub(crate) struct Exponent<'a> {
    phase: &'a dyn Phase,
    factor: Complex64,
}

impl<'a> Exponent<'a> {
    pub fn new(phase: &'a dyn Phase, delta: f64) -> Self {
        Exponent { phase, factor: Complex64::new(0.0, 1.0) * Complex64::from_polar(1.0, delta) }
    }

    pub fn height(&self, z: Complex64) -> f64 {
        self.of(self.phase.value(z)).re
    }

    /// `h` from `f`.
    pub fn of(&self, f: Complex64) -> Complex64 {
        f * self.factor
    }

    fn value_and_slope(&self, z: Complex64) -> (Complex64, Complex64) {
        let (f, d) = self.phase.value_and_derivative(z);
        (f * self.factor, d * self.factor)
    }

    pub fn jet(&self, z: Complex64) -> [Complex64; 3] {
        self.phase.jet(z).map(|f| f * self.factor)
    }
}

/// Why a trace ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Ended {
    /// The height asked for was reached.
    Reached,
    /// Uphill it came to a branch cut of the phase as the closure has it.
    Cut,
    /// The bound on steps, a singularity or another saddle stopped it.
    Stalled,
}

/// Branch cuts that one descent crosses at most.
const CUTS: usize = 4;
/// The next step may be longer by this.
const GROWTH: f64 = 2.5;
/// A step that is taken back is tried again with this part of its length.
const BACK: f64 = 0.3;
/// The last point is as exact as this part of the way.
const EXACT: f64 = 1e-9;
/// Steps of one trace at most.
const STEPS: usize = 400;

/// Follows the steepest path from `start` to the height `goal` (up or down), pushing each point
/// after `start` onto `path`. No step is longer than `longest`.
pub(crate) fn trace(
    h: &Exponent,
    start: Complex64,
    goal: f64,
    longest: f64,
    path: &mut Vec<Complex64>,
) -> Ended {
    let [mut origin, mut slope, mut bend] = h.jet(start);
    let mut z = start;
    let direction = if goal > origin.re { 1.0 } else { -1.0 };
    // Rounding of the heights themselves and of their range is the scale, whatever the unit.
    let own = 1e-12 * origin.norm();
    let mut rounding = own + 1e-13 * (goal - origin.re).abs();
    if slope.norm_sqr() < rounding * bend.norm() {
        // A far goal may be very high: the range nearby.
        let near = [0.1 * longest, -0.1 * longest].map(|d| (h.height(start + d) - origin.re).abs());
        rounding = own + 1e-13 * near[0].max(near[1]).min((goal - origin.re).abs());
    }
    if slope.norm_sqr() < rounding * bend.norm() {
        // On a saddle, to rounding: the path has no direction of its own there.
        z = leave(h, start, (origin.re, 1e4 * rounding), direction, longest);
        path.push(z);
        [origin, slope, bend] = h.jet(z);
    }
    let mut span = (goal - origin.re).abs();
    let mut cuts = 0;
    let mut t = 0.0;
    let mut shrink = 1.0;
    // Where h'' happens to vanish the natural step is no guide: steps grow by a factor at most.
    let mut reach = 0.1 * longest;
    let mut before: Option<(Complex64, f64)> = None;
    'steps: for _ in 0..STEPS {
        if t >= span {
            return Ended::Reached;
        }
        let size = slope.norm();
        if !(size > 0.0 && size.is_finite() && bend.re.is_finite() && bend.im.is_finite()) {
            return Ended::Stalled;
        }
        let natural = 0.6 * size * size / bend.norm();
        let dt = (natural * shrink).min(reach * size).min((span - t) * 1.000_001 + 1e-12 * span);
        let w = slope.inv() * (direction * dt);
        let target = origin + direction * (t + dt);
        let step = w - bend / (slope * 2.0) * w * w;
        let (value, ahead) = h.value_and_slope(z + step);
        let correction = (target - value) / ahead;
        // The second derivative by the secant: one evaluation a step.
        let secant = (ahead - slope) / step;
        // The slope may not change much either: a long step can land on another path.
        let good = (correction * secant / ahead).norm() < 0.15
            && correction.norm() < 0.3 * w.norm()
            && near_one(ahead / slope, 1.0);
        if good {
            before = Some((z, t));
            z += step + correction;
            t += dt;
            reach = (GROWTH * w.norm()).min(longest);
            path.push(z);
            slope = ahead + secant * correction;
            bend = secant;
            shrink = 1.0;
            // What Newton's step left over may be more than the last of a long way down.
            if t >= span && (secant * correction * correction).norm() > EXACT * span {
                let (value, slope) = h.value_and_slope(z);
                let rest = (origin + direction * t - value) / slope;
                if let Some(last) = path.last_mut().filter(|_| rest.norm() < w.norm()) {
                    *last += rest;
                }
            }
        } else {
            // Where the slope is smooth but the value jumps, the path leaves the sheet that the closure
            // is on; the contour is on it, and can't be met again. The jump is measured from the value at
            // the point itself, which may be off its height.
            let cut = shrink < 0.1 && near_one(ahead / slope, 0.2);
            let rise = cut.then(|| value - h.of(h.phase.value(z)));
            let jump = rise.map_or(ZERO, |rise| rise - (slope + ahead) * step * 0.5);
            if jump.norm() > 0.5 * (size * w.norm()) {
                if direction > 0.0 || cuts == CUTS || !jump.re.is_finite() {
                    return Ended::Cut;
                }
                // Downhill it goes on, on its own sheet, until it is low on the closure's too.
                cuts += 1;
                origin += jump;
                span += jump.re.max(0.0);
                continue;
            }
            // Put the point exactly on its height and measure anew before a shorter step.
            for _ in 0..2 {
                let [here, d, dd] = h.jet(z);
                let polish = (origin + direction * t - here) / d;
                (slope, bend) = (d, dd);
                if (polish * dd / d).norm() < 0.3 {
                    z += polish;
                    slope += dd * polish;
                } else if let Some((last, height)) = before.take() {
                    // Next to a saddle the last step came down too far off: back, and less at once.
                    reach = BACK * (z - last).norm();
                    (z, t) = (last, height);
                    path.pop();
                    let [_, d, dd] = h.jet(z);
                    (slope, bend) = (d, dd);
                    continue 'steps;
                }
            }
            shrink *= 0.4;
            if shrink < 1e-8 {
                return Ended::Stalled;
            }
        }
    }
    Ended::Stalled
}

/// `|ln q| < limit`; the logarithm is taken only where `|q - 1|` leaves it open.
fn near_one(q: Complex64, limit: f64) -> bool {
    let distance = (q - 1.0).norm_sqr();
    // |q - 1| <= e^|ln q| - 1 and |ln q| <= -ln(1 - |q - 1|).
    let (sure, most) = (-(-limit).exp_m1(), limit.exp_m1());
    distance < sure * sure || (distance < most * most && q.ln().norm() < limit)
}

/// A point a little way off a saddle, where the height changes most in the direction wanted.
fn leave(
    h: &Exponent,
    saddle: Complex64,
    (height, enough): (f64, f64),
    direction: f64,
    longest: f64,
) -> Complex64 {
    const ANGLES: usize = 48;
    let mut radius = 1e-7 * longest;
    let mut best = saddle;
    for _ in 0..24 {
        let gain = |z: &Complex64| direction * (h.height(*z) - height);
        best = (0..ANGLES)
            .map(|n| {
                let angle = std::f64::consts::TAU * n as f64 / ANGLES as f64;
                saddle + Complex64::from_polar(radius, angle)
            })
            .fold(best, |best, z| if gain(&z) > gain(&best) { z } else { best });
        if gain(&best) > enough {
            break;
        }
        radius *= 2.0;
    }
    best
}

//! The normal form of a phase near a cluster of K+1 saddles.
//!
//! Method. Wanted are `A`, `x_1..x_K` and a map `z(u)`, analytic and one-to-one in `|u| <= R`,
//! with `f(z(u)) = A + Phi(u)`, `Phi(u) = u^(K+2) + x_K u^K + .. + x_1 u` (DLMF 36.2.1). Newton:
//! the residual `r = f(z(u)) - A - Phi(u)` on the ring is divided by `Phi'`,
//! `r = p + Phi' H`; `p` corrects `A, x_1..x_K`, and `z <- z - H z'`. Quadratic convergence.
//! K = -1 (no saddle, `Phi = u`) serves finite end points: there `z(0)` and `A` stay fixed.
//!
//! Regions. All zeros of `Phi'` must lie inside the ring, all other saddles and singularities
//! outside `z(ring)`. A first small ring is enlarged step by step: the Taylor coefficients of
//! the smaller one start Newton on the larger.
//!
//! Source: the existence of the form is N. Levinson's theorem (Duke Math. J. 28 (1961) 345, from
//! memory); for K = 1 C. Chester, B. Friedman, F. Ursell (1957).

use super::{
    Coefficients, I, KEPT, MAX_SADDLES, POINTS, Values, ZERO, divide, evaluate, tail,
    to_coefficients, to_values, unit_points,
};
use crate::integral::Phase;
use num_complex::Complex64;

/// A phase in normal form on one ring.
#[derive(Clone, Debug)]
pub struct NormalForm {
    degree: usize,
    radius: f64,
    /// `x_0 = A` and `x_1..x_K`, entry `j` multiplied by `R^j`.
    unfolding: [Complex64; MAX_SADDLES],
    map: Coefficients,
    residual: f64,
    tail: f64,
    evaluations: usize,
}

/// How small the last Newton step must be, relative to the first-order coefficient of the map.
const SETTLED: f64 = 3e-15;

/// Last coefficients of the map below this, relative to its first-order one, may be rounding alone.
const ROUNDING: f64 = 1e-15;

impl NormalForm {
    /// A form with `saddles = K + 1` saddles (0 for an end point) around `centre`, whose ring has
    /// the mean radius `reach` in the `z` plane. None if Newton does not settle.
    pub fn find(
        phase: &dyn Phase,
        saddles: usize,
        centre: Complex64,
        reach: f64,
    ) -> Option<NormalForm> {
        if saddles > MAX_SADDLES || !(reach.is_finite() && reach > 0.0) {
            return None;
        }
        let degree = saddles + 1;
        let mut values: Values =
            std::array::from_fn(|s| phase.value(centre + unit_points()[s] * reach));
        to_coefficients(&mut values);
        // In v: f = sum a_n v^n with z = centre + reach v. Let v -> c v so that a_D c^D = R^D with
        // R = |a_D|^(1/D), which leaves |c| = 1: the ring keeps its mean radius.
        let lead = values[degree];
        let turn = Complex64::from_polar(1.0, -lead.arg() / degree as f64);
        let radius = lead.norm().powf(1.0 / degree as f64);
        if !(radius.is_finite() && radius > 0.0) {
            return None;
        }
        let mut map = [ZERO; KEPT];
        map[0] = centre;
        map[1] = turn * reach;
        // One or two terms of the reversion of a_D V^D + a_(D+1) V^(D+1) + .. = R^D v^D, V = v + ..
        let next = values[degree + 1] / lead * turn;
        map[2] = -map[1] * next / degree as f64;
        if saddles == 1 {
            let after = values[4] / lead * turn * turn;
            map[3] = map[1] * (next * next * 0.625 - after * 0.5);
        }
        let mut unfolding = [ZERO; MAX_SADDLES];
        let mut power = Complex64::new(1.0, 0.0);
        for (x, a) in unfolding.iter_mut().zip(&values).take(saddles.max(1)) {
            *x = a * power;
            power *= turn;
        }
        if saddles == 0 {
            unfolding[0] = phase.value(centre);
        }
        let mut form = NormalForm {
            degree,
            radius,
            unfolding,
            map,
            residual: f64::INFINITY,
            tail: f64::INFINITY,
            evaluations: POINTS,
        };
        form.settle(phase, 14).then_some(form)
    }

    /// A form of two saddles far apart, whose places say more than a circle round their centre: `A` and `x_1`
    /// from `f` at both, the first map from the cubic that has the right value and slope at both. The
    /// saddles lie at `filling` of the ring's radius. None if Newton does not settle.
    pub(crate) fn find_fold(
        phase: &dyn Phase,
        saddles: [Complex64; 2],
        filling: f64,
    ) -> Option<NormalForm> {
        let [(f1, bend1), (f2, bend2)] = saddles.map(|z| {
            let [f, _, bend] = phase.jet(z);
            (f, bend)
        });
        // Phi(u_s) = -2 u_s^3; any of the three roots will do.
        let u = ((f2 - f1) * 0.25).powf(1.0 / 3.0);
        let radius = u.norm() / filling;
        if !(radius.is_finite() && radius > 0.0) {
            return None;
        }
        let (mean, half) = ((saddles[0] + saddles[1]) * 0.5, (saddles[0] - saddles[1]) * 0.5);
        // u_s dz/du at both: (dz/du)^2 = Phi''/f'', the sign nearer to that of the chord.
        let slope = |square: Complex64| {
            let root = square.sqrt() * u;
            if (root * half.conj()).re < 0.0 { -root } else { root }
        };
        let (first, second) = (slope(u * 6.0 / bend1), slope(-u * 6.0 / bend2));
        let cube = ((first + second) * 0.5 - half) * 0.5;
        let square = (first - second) * 0.25;
        let scale = u.inv() * radius;
        let mut map = [ZERO; KEPT];
        map[0] = mean - square;
        map[1] = (half - cube) * scale;
        map[2] = square * scale * scale;
        map[3] = cube * scale * scale * scale;
        let mut unfolding = [ZERO; MAX_SADDLES];
        unfolding[0] = (f1 + f2) * 0.5;
        unfolding[1] = u * u * (-3.0 * radius);
        let mut form = NormalForm {
            degree: 3,
            radius,
            unfolding,
            map,
            residual: f64::INFINITY,
            tail: f64::INFINITY,
            evaluations: 0,
        };
        form.settle(phase, 14).then_some(form)
    }

    /// The same form on a ring `factor` times as large. None if Newton does not settle there.
    pub fn resized(&self, phase: &dyn Phase, factor: f64) -> Option<NormalForm> {
        let mut form = self.rescaled(factor);
        // What is left of the last coefficients is rounding, and would grow the most.
        let noise = ROUNDING * self.map[1].norm();
        for (new, old) in form.map.iter_mut().zip(&self.map).rev() {
            if old.norm() > noise {
                break;
            }
            *new = ZERO;
        }
        form.evaluations = 0;
        form.settle(phase, 7).then_some(form)
    }

    /// The same form on a smaller ring: nothing new has to be found.
    pub(crate) fn shrunk(&self, factor: f64) -> NormalForm {
        let mut form = self.rescaled(factor.min(1.0));
        form.measure_tail();
        form
    }

    fn rescaled(&self, factor: f64) -> NormalForm {
        let mut form = self.clone();
        form.radius *= factor;
        let mut power = 1.0;
        for n in 0..KEPT {
            form.map[n] *= power;
            if n < form.saddles() {
                form.unfolding[n] *= power;
            }
            power *= factor;
        }
        form
    }

    fn measure_tail(&mut self) {
        let mut full = [ZERO; POINTS];
        full[..KEPT].copy_from_slice(&self.map);
        self.tail = tail(&full, 1, 0.0);
    }

    /// Newton's method with Weierstrass division, at most `limit` steps.
    fn settle(&mut self, phase: &dyn Phase, limit: usize) -> bool {
        let saddles = self.saddles();
        let mut last_step = f64::INFINITY;
        for _ in 0..limit {
            let mut residual = to_values(&self.map);
            let mut largest = 0.0f64;
            for (r, target) in residual.iter_mut().zip(&to_values(&self.unfolded())) {
                *r = phase.value(*r) - target;
                // NaN must not be lost in the maximum.
                let square = r.norm_sqr();
                largest = if square > largest || square.is_nan() { square } else { largest };
            }
            self.evaluations += POINTS;
            if !largest.is_finite() {
                return false;
            }
            // By chance it may be smaller than the rounding of what was subtracted.
            let rounding = 0.5 * f64::EPSILON * self.radius.powi(self.degree as i32);
            self.residual = largest.sqrt().max(rounding);
            to_coefficients(&mut residual);
            // K + 1 coefficients beyond the kept ones: they decide the last ones of the map.
            let dividend = &mut residual[..KEPT + saddles];
            if saddles == 0 {
                // The end point stays where it is.
                dividend[0] = ZERO;
            }
            divide(dividend, &self.derivative()[..self.degree]);
            for (x, p) in self.unfolding.iter_mut().zip(&*dividend).take(saddles) {
                *x += p;
            }
            let quotient: Coefficients = std::array::from_fn(|n| dividend[n + saddles]);
            let mut correction = to_values(&quotient);
            let slope = to_values(&self.map_derivative());
            for (c, s) in correction.iter_mut().zip(&slope) {
                *c *= s;
            }
            to_coefficients(&mut correction);
            let mut step = 0.0f64;
            let skip = usize::from(saddles == 0);
            for (z, c) in self.map.iter_mut().zip(&correction).skip(skip) {
                *z -= c;
                step = step.max(c.norm_sqr());
            }
            let step = step.sqrt();
            let scale = self.map[1].norm();
            if !(step.is_finite() && step < 10.0 * scale && step < 4.0 * last_step) {
                return false;
            }
            // Settled: at the rounding level, or small and no longer falling.
            if step < SETTLED * scale || (step < 1e-7 * scale && step > 0.3 * last_step) {
                self.measure_tail();
                return true;
            }
            last_step = step;
        }
        false
    }

    /// Coefficients in `v` of `A + Phi`.
    fn unfolded(&self) -> Coefficients {
        let mut c = [ZERO; KEPT];
        c[..MAX_SADDLES].copy_from_slice(&self.unfolding);
        c[self.degree] += self.radius.powi(self.degree as i32);
        c
    }

    /// Coefficients in `v` of `Phi'(u)`; the first `K + 2` entries are used.
    pub fn derivative(&self) -> [Complex64; MAX_SADDLES + 1] {
        let mut d = [ZERO; MAX_SADDLES + 1];
        for j in 1..self.saddles() {
            d[j - 1] = self.unfolding[j] * (j as f64 / self.radius);
        }
        d[self.degree - 1] =
            Complex64::new(self.degree as f64 * self.radius.powi(self.degree as i32 - 1), 0.0);
        d
    }

    /// Coefficients in `v` of `dz/du`.
    pub fn map_derivative(&self) -> Coefficients {
        std::array::from_fn(|n| {
            if n + 1 < KEPT { self.map[n + 1] * ((n + 1) as f64 / self.radius) } else { ZERO }
        })
    }

    /// `K + 2`, the power of the leading term.
    pub fn degree(&self) -> usize {
        self.degree
    }

    /// `K + 1`, the number of saddles in the cluster.
    pub fn saddles(&self) -> usize {
        self.degree - 1
    }

    /// The ring's radius in `u`.
    pub fn radius(&self) -> f64 {
        self.radius
    }

    /// `A`.
    pub fn level(&self) -> Complex64 {
        self.unfolding[0]
    }

    /// `x_j`, the coefficient of `u^j`, for `1 <= j <= K`; zero otherwise.
    pub fn x(&self, j: usize) -> Complex64 {
        if (1..self.saddles()).contains(&j) {
            self.unfolding[j] / self.radius.powi(j as i32)
        } else {
            ZERO
        }
    }

    /// Taylor coefficients of `z` in `v = u/R`.
    pub fn map(&self) -> &Coefficients {
        &self.map
    }

    /// `z(R v)`.
    pub fn point(&self, v: Complex64) -> Complex64 {
        evaluate(&self.map, v)
    }

    /// `max |f(z(u)) - A - Phi(u)|` on the ring at the last step: the noise of the caller's phase
    /// where the ring is well chosen.
    pub fn residual(&self) -> f64 {
        self.residual
    }

    /// The size of the last kept Taylor coefficients of the map relative to its largest.
    pub fn tail(&self) -> f64 {
        self.tail
    }

    /// Evaluations of the phase that this form took.
    pub fn evaluations(&self) -> usize {
        self.evaluations
    }

    /// The zeros of `Phi'` in `v = u/R` (the first `K + 1` entries), by simultaneous iteration;
    /// merged ones to about the root of the rounding error, which is enough for sizes and labels.
    pub fn saddles_on_disc(&self) -> [Complex64; MAX_SADDLES] {
        let count = self.saddles();
        let d = self.derivative();
        let lead = d[count];
        let mut roots = [ZERO; MAX_SADDLES];
        if count == 1 {
            roots[0] = -d[0] / lead;
        } else if count == 2 {
            // Phi' has no term in u^K, so the pair is symmetric.
            roots[0] = (-d[0] / lead).sqrt();
            roots[1] = -roots[0];
        } else if count > 2 {
            for (j, root) in roots.iter_mut().take(count).enumerate() {
                *root = Complex64::from_polar(
                    0.5,
                    0.4 + std::f64::consts::TAU * j as f64 / count as f64,
                );
            }
            for _ in 0..60 {
                let mut step = 0.0f64;
                for j in 0..count {
                    let mut divisor = lead;
                    for other in (0..count).filter(|&other| other != j) {
                        divisor *= roots[j] - roots[other];
                    }
                    let change = evaluate(&d[..=count], roots[j]) / divisor;
                    if change.re.is_finite() && change.im.is_finite() {
                        roots[j] -= change;
                        step = step.max(change.norm());
                    }
                }
                if step < 1e-14 {
                    break;
                }
            }
        }
        roots
    }

    /// `Phi(u)` at `u = R v`.
    pub(crate) fn unfolding_at(&self, v: Complex64) -> Complex64 {
        let lower = evaluate(&self.unfolding[1..self.saddles().max(1)], v) * v;
        lower + v.powi(self.degree as i32) * self.radius.powi(self.degree as i32)
    }

    /// `Phi'(u)` at `u = R v`.
    pub(crate) fn slope(&self, v: Complex64) -> Complex64 {
        evaluate(&self.derivative()[..self.degree], v)
    }

    /// `i u Phi'(u)` at `u = R v`: its real part is the slope of `Re(i Phi)` along the radius.
    pub(crate) fn radial_slope(&self, v: Complex64) -> Complex64 {
        I * v * self.radius * self.slope(v)
    }
}

//! The normal form of a phase near a cluster of K+1 saddles.
//!
//! Method. Wanted are `A`, `x_1..x_K` and a map `z(u)`, analytic and one-to-one in `|u| <= R`,
//! with `f(z(u)) = A + Phi(u)`, `Phi(u) = u^(K+2) + x_K u^K + .. + x_1 u` (DLMF 36.2.1). Newton:
//! the residual `r = f(z(u)) - A - Phi(u)` on the ring is divided by `Phi'`,
//! `r = p + Phi' H`; `p` corrects `A, x_1..x_K`, and `z <- z - H z'`. Quadratic convergence.
//! K = -1 (no saddle, `Phi = u`) serves finite end points: there `z(0)` and `A` stay fixed.
//!
//! Regions. All zeros of `Phi'` must lie inside the ring, all other saddles and singularities
//! outside `z(ring)`. The first steps are taken on a quarter of the points. A first small ring is
//! enlarged step by step: the Taylor coefficients of the smaller one start Newton on the larger.
//!
//! Source: the existence of the form is N. Levinson's theorem (Duke Math. J. 28 (1961) 345, from
//! memory); for K = 1 C. Chester, B. Friedman, F. Ursell (1957).

use super::{
    COARSE, Coefficients, I, KEPT, MAX_SADDLES, POINTS, ZERO, divide, evaluate, foreseen_tail,
    map_tail, rescale, to_coefficients, unit_points, values_of,
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
    /// What `A` lacks as a double: it is a mean over the ring, known better than any value of `f`.
    level_rest: Complex64,
    map: Coefficients,
    residual: f64,
    unresolved: f64,
    tail: f64,
    evaluations: usize,
}

/// How small the last Newton step must be, relative to the first-order coefficient of the map.
const SETTLED: f64 = 3e-15;
/// Steps on a quarter of the points end below this: those points know no better.
const ROUGH: f64 = 1e-3;
/// Steps of Newton's method that fall by less than this ...
const SLOW: f64 = 0.4;
/// ... so many times one after the other while large do not lead to a form that is of use.
const PATIENCE: usize = 3;

/// A phase on a circle, and what its leading coefficient says of a form with `Phi = u^D + ..`.
pub(super) struct Leading {
    /// Coefficients in `v`, `z = centre + reach v`, from a quarter of the points.
    pub values: [Complex64; COARSE],
    /// With `v -> turn v` the coefficient of `v^D` is `R^D`: the ring keeps its mean radius.
    pub turn: Complex64,
    pub radius: f64,
}

impl Leading {
    /// None where the phase is not finite or has no such term.
    pub fn new(phase: &dyn Phase, centre: Complex64, reach: f64, degree: usize) -> Option<Self> {
        let mut values: [Complex64; COARSE] = std::array::from_fn(|s| {
            phase.value(centre + unit_points()[s * (POINTS / COARSE)] * reach)
        });
        to_coefficients(&mut values);
        let lead = values[degree];
        let turn = Complex64::from_polar(1.0, -lead.arg() / degree as f64);
        let radius = lead.norm().powf(1.0 / degree as f64);
        (radius.is_finite() && radius > 0.0).then_some(Leading { values, turn, radius })
    }
}

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
        let Leading { values, turn, radius } = Leading::new(phase, centre, reach, degree)?;
        let lead = values[degree];
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
            level_rest: ZERO,
            map,
            residual: f64::INFINITY,
            unresolved: f64::INFINITY,
            tail: f64::INFINITY,
            evaluations: COARSE,
        };
        form.sketch(phase);
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
            level_rest: ZERO,
            map,
            residual: f64::INFINITY,
            unresolved: f64::INFINITY,
            tail: f64::INFINITY,
            evaluations: 0,
        };
        form.settle(phase, 14).then_some(form)
    }

    /// The same form on a ring `factor` times as large (below 1: made anew on a smaller one). None if
    /// Newton does not settle there.
    pub fn resized(&self, phase: &dyn Phase, factor: f64) -> Option<NormalForm> {
        let mut form = self.rescaled(factor);
        form.evaluations = 0;
        // What is rounding on this ring would be more than that on a larger one.
        let noise = 0.5 * f64::EPSILON * self.map[0].norm().max(self.map[1].norm());
        for (new, old) in form.map.iter_mut().zip(&self.map).skip(2) {
            if old.norm_sqr() < noise * noise {
                *new = ZERO;
            }
        }
        if !form.settle(phase, 10) {
            return None;
        }
        if factor < 1.0 {
            // The larger ring's rounding was in what the last step was measured from.
            form.residuals::<POINTS>(phase)?;
        }
        Some(form)
    }

    /// The same form on a smaller ring: nothing new has to be found.
    pub(crate) fn shrunk(&self, factor: f64) -> NormalForm {
        let mut form = self.rescaled(factor.min(1.0));
        form.tail = map_tail(&form.map);
        form
    }

    fn rescaled(&self, factor: f64) -> NormalForm {
        let mut form = self.clone();
        form.radius *= factor;
        rescale(&mut form.map, factor);
        rescale(&mut form.unfolding[..self.saddles()], factor);
        form
    }

    /// Newton's first steps on a quarter of the points, as far as they lead; nothing changes where they
    /// lead nowhere.
    fn sketch(&mut self, phase: &dyn Phase) {
        let before = self.clone();
        let mut last_step = f64::INFINITY;
        for _ in 0..3 {
            let step = match self.residuals::<COARSE>(phase) {
                Some(residuals) => self.correct(residuals) / self.map[1].norm(),
                None => f64::INFINITY,
            };
            if !(step < 0.3 && step < 0.5 * last_step) {
                *self = before;
                break;
            }
            if step < ROUGH {
                break;
            }
            last_step = step;
        }
    }

    /// Newton's method with Weierstrass division, at most `limit` steps.
    fn settle(&mut self, phase: &dyn Phase, limit: usize) -> bool {
        let mut last_step = f64::INFINITY;
        let mut expected = f64::INFINITY;
        let mut slow = 0;
        for _ in 0..limit {
            let Some(residuals) = self.residuals::<POINTS>(phase) else { return false };
            let mut scale = self.map[1].norm();
            // Rounding alone is left to be corrected, in `A` and `x_j` only.
            if expected < SETTLED * scale {
                self.divide_out(residuals);
                return self.finish();
            }
            let step = self.correct(residuals);
            if !(step.is_finite() && step < 10.0 * scale && step < 4.0 * last_step) {
                return false;
            }
            scale = self.map[1].norm();
            // Settled: at the rounding level, or small and no longer falling.
            if step < SETTLED * scale || (step < 1e-7 * scale && step > 0.3 * last_step) {
                return self.finish();
            }
            // The next step falls by this ratio at least, by its square where all goes well.
            let ratio = step / last_step.min(0.1 * scale);
            expected = if ratio < 1e-3 { step * ratio } else { f64::INFINITY };
            slow = if step > SLOW * last_step && step > ROUGH * scale { slow + 1 } else { 0 };
            if slow == PATIENCE {
                return false;
            }
            last_step = step;
        }
        false
    }

    fn finish(&mut self) -> bool {
        self.tail = map_tail(&self.map);
        self.unfolding[0].is_finite()
    }

    /// Coefficients of `f(z(u)) - A - Phi(u)` on `N` points; None where it is not finite.
    fn residuals<const N: usize>(&mut self, phase: &dyn Phase) -> Option<[Complex64; N]> {
        let mut values = values_of::<N>(&self.map);
        let roots = unit_points();
        let lead = self.radius.powi(self.degree as i32);
        let level = self.unfolding[0];
        for (s, value) in values.iter_mut().enumerate() {
            let power = |j: usize| roots[s * j * (POINTS / N) % POINTS];
            let mut target = self.level_rest + power(self.degree) * lead;
            for (j, x) in self.unfolding.iter().enumerate().take(self.saddles()).skip(1) {
                target += x * power(j);
            }
            *value = (phase.value(*value) - level) - target;
        }
        self.evaluations += N;
        to_coefficients(&mut values);
        // What no step can remove is noise, or not resolved; NaN is not lost in the sums.
        let size = |part: &[Complex64]| {
            let energy: f64 = part.iter().map(|c| c.norm_sqr()).sum();
            (energy * N as f64 / part.len() as f64).sqrt()
        };
        // By chance it may be smaller than the rounding of what was subtracted.
        let rounding = 0.25 * f64::EPSILON * lead;
        self.residual = size(&values[N * 3 / 4..]).max(rounding);
        self.unresolved = size(&values[N / 2 + self.saddles()..N * 3 / 4]);
        (self.residual.is_finite() && self.unresolved.is_finite()).then_some(values)
    }

    /// Divides by `Phi'`: the remainder goes to `A` and `x_j`, the quotient is returned.
    fn divide_out<const N: usize>(&mut self, mut residuals: [Complex64; N]) -> Coefficients {
        let saddles = self.saddles();
        let kept = N / 2;
        // K + 1 coefficients beyond the kept ones: they decide the last ones of the map.
        let dividend = &mut residuals[..kept + saddles];
        let mean = dividend[0];
        if saddles == 0 {
            // The end point stays where it is; f there is the mean over the ring.
            dividend[0] = ZERO;
        }
        divide(dividend, &self.derivative()[..self.degree]);
        self.add_to_level(if saddles == 0 { mean } else { dividend[0] });
        for (x, p) in self.unfolding.iter_mut().zip(&*dividend).take(saddles).skip(1) {
            *x += p;
        }
        let mut quotient = [ZERO; KEPT];
        quotient[..kept].copy_from_slice(&dividend[saddles..]);
        quotient
    }

    fn add_to_level(&mut self, change: Complex64) {
        let old = self.unfolding[0];
        let rest = self.level_rest + change;
        self.unfolding[0] = old + rest;
        self.level_rest = rest - (self.unfolding[0] - old);
    }

    /// One step of Newton's method; returns its size.
    fn correct<const N: usize>(&mut self, residuals: [Complex64; N]) -> f64 {
        let kept = N / 2;
        let quotient = self.divide_out(residuals);
        let mut correction = values_of::<N>(&quotient);
        for (c, s) in correction.iter_mut().zip(&values_of::<N>(&self.map_derivative())) {
            *c *= s;
        }
        to_coefficients(&mut correction);
        let mut step = 0.0f64;
        let skip = usize::from(self.saddles() == 0);
        for (z, c) in self.map[..kept].iter_mut().zip(&correction).skip(skip) {
            *z -= c;
            step = step.max(c.norm_sqr());
        }
        step.sqrt()
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

    /// What [`level`](NormalForm::level) lacks as a double.
    pub(crate) fn level_rest(&self) -> Complex64 {
        self.level_rest
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

    /// What of `f(z(u)) - A - Phi(u)` on the ring no Newton step can remove, as a root mean square: the noise
    /// of the caller's phase where the ring is well chosen, and singularities inside where it is not.
    pub fn residual(&self) -> f64 {
        self.residual
    }

    /// The same from the first powers beyond those that are kept: what is not resolved.
    pub(crate) fn unresolved(&self) -> f64 {
        self.unresolved
    }

    /// The size of the last kept Taylor coefficients of the map relative to its largest.
    pub fn tail(&self) -> f64 {
        self.tail
    }

    /// What the tail will be on a ring larger by `factor`, as far as can be seen.
    pub(crate) fn foreseen_tail(&self, factor: f64) -> f64 {
        foreseen_tail(&self.map, 1, factor)
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
        // The power of v without a call: this is asked for all round the ring.
        let mut lead = Complex64::new(1.0, 0.0);
        for _ in 0..self.degree {
            lead *= v * self.radius;
        }
        evaluate(&self.unfolding[1..self.saddles().max(1)], v) * v + lead
    }

    /// `Phi'(u)` at `u = R v`.
    pub(crate) fn slope(&self, v: Complex64) -> Complex64 {
        evaluate(&self.derivative()[..self.degree], v)
    }

    /// `i u Phi'(u)` at `u = R v`: its real part is the slope of `Re(i Phi)` along the radius.
    pub(crate) fn radial_slope(&self, v: Complex64) -> Complex64 {
        // Phi' R = sum j x_j R^j v^(j - 1), without powers.
        let mut sum = Complex64::new(self.degree as f64, 0.0);
        for _ in 0..self.degree {
            sum *= self.radius;
        }
        // There is no term in u^(K+1).
        if self.degree > 1 {
            sum *= v;
        }
        for j in (1..self.saddles()).rev() {
            sum = sum * v + self.unfolding[j] * j as f64;
        }
        I * v * sum
    }
}

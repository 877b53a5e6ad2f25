//! Normal form and expansion about an algebraic end point, which stays at the origin.
//!
//! Method. The integrand has the factor `(z - b)^(lambda - 1)` at the end `b`. With
//! `f(z(u)) = f(b) + Phi(u)`, `z(0) = b`, `Phi = u^D + x_K1 u^K1 + .. + x_1 u` (`D = K + 2`, `K1 = K + 1`
//! saddles near the end, `K = -1`: none) the factor is `u^(lambda - 1)` times an analytic one. Newton
//! as in [`NormalForm`](super::NormalForm), with the division by `u Phi'`: its remainder corrects the
//! `x_j`, its quotient the map, `z <- z - H u z'`. The expansion comes from `G_n = p^(n) + u Phi' H_n` and
//! integration by parts, `G_(n+1) = -(lambda H_n + u H_n')/(i k)`, which leaves no boundary term:
//!
//! `integral of u^(lambda-1) G_0 exp(i k Phi) ~ sum_n k^(-n) sum_(j < D) p_j^(n) integral of u^(lambda-1+j) exp(i k Phi)`.
//!
//! Source: K = -1 is Watson's lemma (DLMF 2.4(i)); N. Bleistein, Comm. Pure Appl. Math. 19 (1966) 353
//! for an algebraic end near a saddle.

use super::normal_form::Leading;
use super::orders::unit_noise;
use super::{
    Coefficients, I, KEPT, MAX_ORDERS, POINTS, Values, ZERO, divide, evaluate, map_tail, rescale,
    tail, taylor, to_coefficients, to_values,
};
use crate::integral::{Amplitude, Phase};
use num_complex::Complex64;

/// The largest `D`: two saddles near the end.
pub(crate) const MAX_DEGREE: usize = 3;

/// A phase in normal form about an end point, on one ring.
#[derive(Clone, Debug)]
pub(crate) struct BasedForm {
    degree: usize,
    radius: f64,
    level: Complex64,
    /// `x_j R^j` at index `j`, the last being `R^D`.
    x: [Complex64; MAX_DEGREE + 1],
    map: Coefficients,
    residual: f64,
    tail: f64,
}

/// How small the last Newton step must be, relative to the map's first coefficient.
const SETTLED: f64 = 3e-15;

impl BasedForm {
    /// With `saddles` saddles near the end point `base`, on a ring of mean radius `reach` in the `z`
    /// plane. None if Newton does not settle.
    pub fn find(
        phase: &dyn Phase,
        saddles: usize,
        base: Complex64,
        reach: f64,
    ) -> Option<BasedForm> {
        let degree = saddles + 1;
        if degree > MAX_DEGREE || !(reach.is_finite() && reach > 0.0) {
            return None;
        }
        let Leading { values, turn, radius } = Leading::new(phase, base, reach, degree)?;
        let mut map = [ZERO; KEPT];
        map[0] = base;
        map[1] = turn * reach;
        let mut x = [ZERO; MAX_DEGREE + 1];
        let mut power = turn;
        for j in 1..degree {
            x[j] = values[j] * power;
            power *= turn;
        }
        x[degree] = Complex64::new(radius.powi(degree as i32), 0.0);
        let level = phase.value(base);
        let mut form =
            BasedForm { degree, radius, level, x, map, residual: f64::INFINITY, tail: 1.0 };
        form.settle(phase, 14).then_some(form)
    }

    /// The same on a ring `factor` times as large.
    pub fn resized(&self, phase: &dyn Phase, factor: f64) -> Option<BasedForm> {
        let mut form = self.rescaled(factor);
        form.settle(phase, 7).then_some(form)
    }

    /// The same on a smaller ring: nothing new has to be found. The residual vanishes at the end point, so
    /// it falls with the radius (Schwarz's lemma, textbook).
    pub fn shrunk(&self, factor: f64) -> BasedForm {
        let mut form = self.rescaled(factor);
        form.residual *= factor;
        form.tail = map_tail(&form.map);
        form
    }

    fn rescaled(&self, factor: f64) -> BasedForm {
        let mut form = self.clone();
        form.radius *= factor;
        rescale(&mut form.map, factor);
        rescale(&mut form.x[..=self.degree], factor);
        form
    }

    fn settle(&mut self, phase: &dyn Phase, limit: usize) -> bool {
        let degree = self.degree;
        let mut last_step = f64::INFINITY;
        for _ in 0..limit {
            let mut target = [ZERO; KEPT];
            target[..=degree].copy_from_slice(&self.x[..=degree]);
            let mut residual = to_values(&self.map);
            let mut largest = 0.0f64;
            for (r, target) in residual.iter_mut().zip(&to_values(&target)) {
                *r = phase.value(*r) - self.level - target;
                let square = r.norm_sqr();
                largest = if square > largest || square.is_nan() { square } else { largest };
            }
            if !largest.is_finite() {
                return false;
            }
            self.residual = largest.sqrt();
            to_coefficients(&mut residual);
            // The end point stays where it is.
            residual[0] = ZERO;
            let dividend = &mut residual[..KEPT + degree];
            divide(dividend, &self.divisor()[..=degree]);
            for (x, p) in self.x[..degree].iter_mut().zip(&*dividend).skip(1) {
                *x += p;
            }
            let quotient: Coefficients = std::array::from_fn(|n| dividend[n + degree]);
            let slope: Coefficients = std::array::from_fn(|n| self.map[n] * n as f64);
            let mut correction = to_values(&quotient);
            for (c, s) in correction.iter_mut().zip(&to_values(&slope)) {
                *c *= s;
            }
            to_coefficients(&mut correction);
            let mut step = 0.0f64;
            for (z, c) in self.map.iter_mut().zip(&correction).skip(1) {
                *z -= c;
                step = step.max(c.norm_sqr());
            }
            let step = step.sqrt();
            let scale = self.map[1].norm();
            if !(step.is_finite() && step < 10.0 * scale && step < 4.0 * last_step) {
                return false;
            }
            if step < SETTLED * scale || (step < 1e-7 * scale && step > 0.3 * last_step) {
                self.tail = map_tail(&self.map);
                return true;
            }
            last_step = step;
        }
        false
    }

    /// Coefficients in `v` of `u Phi'`.
    fn divisor(&self) -> [Complex64; MAX_DEGREE + 1] {
        std::array::from_fn(|j| self.x[j] * j as f64)
    }

    /// `D`.
    pub fn degree(&self) -> usize {
        self.degree
    }

    /// The ring's radius in `u`.
    pub fn radius(&self) -> f64 {
        self.radius
    }

    /// `x_1 .. x_K1`.
    pub fn x(&self) -> [Complex64; MAX_DEGREE - 1] {
        let x = |j: usize| self.x[j] / self.radius.powi(j as i32);
        std::array::from_fn(|n| if n + 1 < self.degree { x(n + 1) } else { ZERO })
    }

    /// The saddles in the plane of `v`, as many as there are.
    pub fn saddles(&self) -> impl Iterator<Item = Complex64> {
        let [_, a, b, c] = self.divisor();
        let mut list = [ZERO; MAX_DEGREE - 1];
        if self.degree == 2 {
            list[0] = -a / b;
        } else if self.degree == 3 {
            // a + b v + c v^2 without cancellation.
            let root = (b * b - a * c * 4.0).sqrt();
            let q = if (b + root).norm() > (b - root).norm() { b + root } else { b - root };
            if q != ZERO {
                list = [q / (c * -2.0), a * -2.0 / q];
            }
        }
        list.into_iter().take(self.degree - 1)
    }

    /// The largest `|v|` of a saddle.
    pub fn filling(&self) -> f64 {
        self.saddles().fold(0.0, |m, s| m.max(s.norm()))
    }

    /// `z(R v)`.
    pub fn point(&self, v: Complex64) -> Complex64 {
        evaluate(&self.map, v)
    }

    /// Taylor coefficients of `z` in `v`.
    pub fn map(&self) -> &Coefficients {
        &self.map
    }

    /// `dz/du` at the end point.
    pub fn slope(&self) -> Complex64 {
        self.map[1] / self.radius
    }

    /// `Phi` and `u Phi'` at `u = R v`.
    pub fn unfolding(&self, v: Complex64) -> (Complex64, Complex64) {
        (evaluate(&self.x, v), evaluate(&self.divisor(), v))
    }

    /// `max |f - f(b) - Phi|` on the ring at the last step.
    pub fn residual(&self) -> f64 {
        self.residual
    }

    /// How far the map's coefficients have not decayed.
    pub fn tail(&self) -> f64 {
        self.tail
    }
}

/// `p_j^(n)` at index `n`, `j`.
pub(crate) type Based = [[Complex64; MAX_DEGREE]; MAX_ORDERS];

/// The coefficients of the expansion on one ring, with what its error figure needs.
#[derive(Clone, Debug)]
pub(crate) struct BasedOrders {
    p: Based,
    noise: Based,
    /// `max |G_0|`.
    pub size: f64,
    pub tail: f64,
}

impl BasedOrders {
    /// For `g(z) (z - b)^(lambda - 1)`, the power such that its value at `b + s dz/du` is the positive
    /// one times that of `(dz/du)^(lambda - 1)` given as `power`. None if `g` is not finite.
    pub fn new(
        form: &BasedForm,
        amplitude: &dyn Amplitude,
        lambda: f64,
        power: Complex64,
    ) -> Option<BasedOrders> {
        let fill = |z, values: &mut [Complex64]| values[0] = amplitude.value(z);
        let noise = BasedOrders::unit(form, lambda);
        BasedOrders::several(form, (lambda, power), 1, fill, &noise).pop()?
    }

    /// The same for several amplitudes sampled together; `noise` as in [`BasedOrders::noises`].
    pub fn several(
        form: &BasedForm,
        (lambda, power): (f64, Complex64),
        count: usize,
        fill: impl Fn(Complex64, &mut [Complex64]),
        noise: &Based,
    ) -> Vec<Option<BasedOrders>> {
        let slope: Coefficients = std::array::from_fn(|n| {
            if n + 1 < KEPT { form.map[n + 1] * ((n + 1) as f64 / form.radius) } else { ZERO }
        });
        // (z - b)/u over its value at the end: one at v = 0, no zero inside.
        let first = form.map[1];
        let ratio: Coefficients =
            std::array::from_fn(|n| if n + 1 < KEPT { form.map[n + 1] / first } else { ZERO });
        let (slopes, ratios) = (to_values(&slope), to_values(&ratio));
        let mut values = vec![[ZERO; POINTS]; count];
        let mut here = vec![ZERO; count];
        for (s, z) in to_values(&form.map).into_iter().enumerate() {
            let factor = slopes[s] * (ratios[s].ln() * (lambda - 1.0)).exp() * power;
            fill(z, &mut here);
            for (values, g) in values.iter_mut().zip(&here) {
                values[s] = g * factor;
            }
        }
        let orders = |mut values: Values| {
            let size = values.iter().fold(0.0f64, |m, v| m.max(v.norm()));
            if !values.iter().all(|v| v.norm_sqr().is_finite()) {
                return None;
            }
            to_coefficients(&mut values);
            Some(BasedOrders {
                p: by_parts(form, lambda, &taylor(&values)),
                noise: *noise,
                size,
                // An amplitude that vanishes is known to all digits.
                tail: if size > 0.0 { tail(&values, 0, 0.1 * size) } else { 0.0 },
            })
        };
        values.into_iter().map(orders).collect()
    }

    /// What unit noise on the ring passes on to each order.
    pub fn unit(form: &BasedForm, lambda: f64) -> Based {
        by_parts(form, lambda, unit_noise())
    }

    /// What cannot be sampled: no figure can be trusted.
    pub fn unknown(noise: &Based) -> BasedOrders {
        let p = [[ZERO; MAX_DEGREE]; MAX_ORDERS];
        BasedOrders { p, noise: *noise, size: 1.0, tail: f64::INFINITY }
    }

    /// `p_j^(n)`.
    pub fn coefficients(&self, n: usize) -> &[Complex64; MAX_DEGREE] {
        &self.p[n]
    }

    /// The same for unit noise.
    pub fn noise(&self, n: usize) -> &[Complex64; MAX_DEGREE] {
        &self.noise[n]
    }

    /// The same of all orders.
    pub fn noises(&self) -> &Based {
        &self.noise
    }
}

fn by_parts(form: &BasedForm, lambda: f64, start: &Coefficients) -> Based {
    let degree = form.degree;
    let divisor = form.divisor();
    let mut p = [[ZERO; MAX_DEGREE]; MAX_ORDERS];
    let mut g = *start;
    let mut length = KEPT;
    let mut turn = Complex64::new(1.0, 0.0);
    for p in &mut p {
        divide(&mut g[..length], &divisor[..=degree]);
        let mut power = 1.0;
        for (p, &remainder) in p.iter_mut().zip(&g[..degree]) {
            *p = remainder * turn / power;
            power *= form.radius;
        }
        length -= degree;
        for m in 0..length {
            g[m] = g[m + degree] * (lambda + m as f64);
        }
        turn *= I;
    }
    p
}

const _: () = assert!(MAX_DEGREE * MAX_ORDERS < KEPT);

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_form_reproduces_the_phase_with_the_end_in_place() {
        let base = Complex64::new(0.2, -0.1);
        let phase = |z: Complex64| (z.cosh() + z * 0.3, z.sinh() + 0.3);
        for (saddles, reach) in [(0, 0.2), (1, 0.8)] {
            let form = BasedForm::find(&phase, saddles, base, reach).expect("a form");
            assert_eq!(form.map()[0], base);
            for v in [Complex64::new(0.4, 0.3), Complex64::new(-0.7, 0.1)] {
                let f = phase(form.point(v)).0 - phase(base).0;
                assert!((f - form.unfolding(v).0).norm() < 1e-14, "{saddles}");
            }
            for saddle in form.saddles() {
                assert!(phase(form.point(saddle)).1.norm() < 1e-13);
            }
        }
    }

    #[test]
    fn watson_coefficients_of_an_algebraic_end() {
        // Integral_0^inf z^(lambda-1) e^z exp(i k i z) dz = Gamma(lambda) (k - 1)^(-lambda), so that with the
        // moments Gamma(lambda) k^(-lambda) (u = i z) order n is (lambda)_n/n! (binomial series).
        let lambda = 1.0 / 3.0;
        let phase = |z: Complex64| (z * I, I);
        let form = BasedForm::find(&phase, 0, ZERO, 3.0).expect("a form");
        let g = |z: Complex64| z.exp();
        let power = (form.slope().ln() * (lambda - 1.0)).exp();
        let orders = BasedOrders::new(&form, &g, lambda, power).expect("orders");
        // u^(lambda-1) (dz/du)^(lambda-1) dz/du = (-i)^lambda.
        let unit = (Complex64::new(0.0, -1.0).ln() * lambda).exp();
        let mut exact = 1.0;
        for n in 0..MAX_ORDERS {
            let got = orders.coefficients(n)[0] / unit;
            let noise = orders.size * orders.noise(n)[0].norm();
            let rounding = 100.0 * f64::EPSILON * (exact + noise);
            assert!((got - exact).norm() < rounding && rounding < 1e-8, "{n}: {got} {exact}");
            exact *= (lambda + n as f64) / (n + 1) as f64;
        }
    }
}

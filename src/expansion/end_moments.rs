//! Moments from an algebraic end into a valley, with up to two saddles near the end.
//!
//! `M_j = integral from 0 to valley V of t^(lambda - 1 + j) exp(i Phi(t)) dt`, `j = 0 .. D - 1`,
//! `Phi = t^D + x_(D-1) t^(D-1) + .. + x_1 t`, `D = 1, 2, 3`, valley `V` at the angle `(pi/2 + 2 pi V)/D`.
//! `D = 1` is the gamma function (DLMF 5.9.1), `D = 2` the parabolic cylinder function (DLMF 12.5.1).
//!
//! Method. In the plane of `log t` the integrand is entire and 0 is a valley like the others, so every
//! path from 0 into valley `V` will do. Paths tried: down from 0; from 0 straight to a saddle and down on
//! either side; from 0 over both saddles (between the two saddles of a cubic the exponent runs on a straight
//! line, so there is no hill between). The lowest of those that arrive in the valley is taken. A path that
//! arrives in `V + D n` gives `e^(2 pi i lambda n)` times the moments.
//! Next to 0 the exponential's Taylor series is integrated term by term against the power, the rest
//! by 20-point Gauss-Legendre panels (`incomplete`), none longer than its distance from 0 allows.
//!
//! Source: contours of steepest descent (DLMF 2.4(iv)); put together for this crate.

use super::incomplete::{RULE, descent, reach};
use crate::ring::{MAX_DEGREE, ZERO};
use num_complex::Complex64;
use std::f64::consts::PI;

/// What is this many nepers below the peak does not count.
const FLOOR: f64 = 42.0;
/// Heights of saddles beyond which nothing is computed: they are better treated apart.
const FARTHEST: f64 = 250.0;
/// Steps of one descent, panels of one chord.
const STEPS: usize = 240;
/// Angles on the circle round a waypoint among which the ways down are looked for.
const ANGLES: usize = 64;
/// Ways down from one waypoint.
const WAYS: usize = 3;
/// The exponent's change next to 0, and over the first step from a saddle.
const FIRST: f64 = 1.0;
const LEAVING: f64 = 8.0;
/// Saddles that the exponent does not tell from 0 by more than this are no waypoints.
const NEXT: f64 = 0.05;
/// Change of the exponent over one panel.
const BUDGET: f64 = 10.0;
/// A step whose exponent falls by less than these parts of its Taylor terms is cut in two or three.
const STRAIGHT: [f64; 2] = [0.9, 0.7];
/// Steps against the distance from 0: inwards, outwards.
const INWARDS: f64 = 0.75;
const OUTWARDS: f64 = 1.5;

/// Moments, and the sums of the moduli that they are made of.
#[derive(Clone, Copy)]
pub(super) struct EndMoments {
    pub values: [Complex64; MAX_DEGREE],
    pub sizes: [f64; MAX_DEGREE],
}

/// `i Phi` with the power.
#[derive(Clone, Copy)]
struct Integrand {
    /// Coefficients of `t^0 .. t^D`, times `i`.
    c: [Complex64; MAX_DEGREE + 1],
    degree: usize,
    lambda: f64,
}

/// A point with its angle, continued along a path.
#[derive(Clone, Copy)]
struct Lifted {
    t: Complex64,
    angle: f64,
}

impl Lifted {
    fn ahead(self, t: Complex64) -> Lifted {
        let turned = if self.t == ZERO { t.arg() } else { self.angle + (t / self.t).arg() };
        Lifted { t, angle: turned }
    }
}

/// The paths of one integral at one wavenumber.
pub(super) struct Paths {
    integrand: Integrand,
    /// 0 and the saddles.
    waypoints: [Complex64; MAX_DEGREE],
    /// `k^(-1/D)`.
    unit: f64,
    /// For each valley modulo `D` the best path that arrives there.
    best: [Option<Route>; MAX_DEGREE],
}

#[derive(Clone, Copy)]
struct Route {
    /// Waypoints passed, the first being 0.
    stops: [usize; MAX_DEGREE],
    length: usize,
    /// The first step down from the last of them.
    step: Complex64,
    top: f64,
    /// The valley where it arrives.
    valley: i32,
}

impl Paths {
    /// With the coefficients `x_1 .. x_(D-1)` at wavenumber `k`; None if a saddle is too far away.
    pub fn new(x: &[Complex64], lambda: f64, k: f64) -> Option<Paths> {
        let degree = x.len() + 1;
        let unit = k.powf(-1.0 / degree as f64);
        let mut c = [ZERO; MAX_DEGREE + 1];
        let mut power = k;
        for (c, x) in c[1..].iter_mut().zip(x) {
            power *= unit;
            *c = Complex64::new(0.0, power) * x;
        }
        c[degree] = Complex64::new(0.0, 1.0);
        let integrand = Integrand { c, degree, lambda };
        let mut waypoints = [ZERO; MAX_DEGREE];
        let mut count = 1;
        let near = integrand.size(ZERO, NEXT)?;
        for s in integrand.saddles() {
            let height = integrand.value(s).norm();
            if height.is_nan() || height > FARTHEST {
                return None;
            }
            // What lies next to 0 is seen from there.
            if s.norm() > near {
                waypoints[count] = s;
                count += 1;
            }
        }
        let mut paths = Paths { integrand, waypoints, unit, best: [None; MAX_DEGREE] };
        for stops in [&[0][..], &[0, 1], &[0, 2], &[0, 1, 2], &[0, 2, 1]] {
            if stops.iter().all(|&stop| stop < count) {
                paths.enter(stops);
            }
        }
        Some(paths)
    }

    /// Takes note of the routes over some waypoints.
    fn enter(&mut self, stops: &[usize]) {
        let f = &self.integrand;
        let mut here = Lifted { t: ZERO, angle: 0.0 };
        let mut top = 0.0f64;
        for &stop in &stops[1..] {
            let to = self.waypoints[stop];
            const SAMPLES: usize = 12;
            for n in 1..=SAMPLES {
                let t = here.t + (to - here.t) * (n as f64 / SAMPLES as f64);
                top = top.max(f.value(t).re);
            }
            here = here.ahead(to);
        }
        let mut ways = [ZERO; WAYS];
        let found = f.ways_down(here.t, &mut ways);
        for &step in &ways[..found] {
            let Some(valley) = f.follow(here, step, |_, _| {}) else { continue };
            let slot = valley.rem_euclid(f.degree as i32) as usize;
            if self.best[slot].is_none_or(|best| top < best.top - 0.5) {
                let mut list = [0; MAX_DEGREE];
                list[..stops.len()].copy_from_slice(stops);
                self.best[slot] =
                    Some(Route { stops: list, length: stops.len(), step, top, valley });
            }
        }
    }

    /// The moments into a valley, with the powers of `k`. None if no path arrives there.
    pub fn toward(&self, valley: i32) -> Option<EndMoments> {
        let f = &self.integrand;
        let degree = f.degree as i32;
        let route = self.best[valley.rem_euclid(degree) as usize].as_ref()?;
        let mut sum = Sum::new(f);
        let mut here = Lifted { t: ZERO, angle: 0.0 };
        for &stop in &route.stops[1..route.length] {
            here = sum.chord(here, self.waypoints[stop])?;
        }
        f.follow(here, route.step, |from, step| sum.step(from, step))?;
        let turns = f64::from((route.valley - valley) / degree);
        let turn = Complex64::from_polar(1.0, -2.0 * PI * f.lambda * turns);
        let mut out = sum.moments;
        for (j, (value, size)) in out.values.iter_mut().zip(&mut out.sizes).enumerate() {
            let scale = self.unit.powf(f.lambda + j as f64);
            *value *= turn * scale;
            *size *= scale;
        }
        let finite = |v: &Complex64| v.re.is_finite() && v.im.is_finite();
        out.values.iter().all(finite).then_some(out)
    }
}

impl Integrand {
    fn value(&self, t: Complex64) -> Complex64 {
        self.c[..=self.degree].iter().rev().fold(ZERO, |sum, &c| sum * t + c)
    }

    /// Taylor coefficients of `i Phi` about a point.
    fn about(&self, t: Complex64) -> [Complex64; MAX_DEGREE + 1] {
        let mut list = self.c;
        for start in 0..self.degree {
            for j in (start..self.degree).rev() {
                let above = list[j + 1];
                list[j] += above * t;
            }
        }
        list
    }

    /// The radius about a point where the Taylor terms sum to a budget.
    fn size(&self, t: Complex64, budget: f64) -> Option<f64> {
        reach(&self.about(t)[1..=self.degree], budget)
    }

    fn saddles(&self) -> impl Iterator<Item = Complex64> {
        let [_, a, b, c] = self.c;
        let mut list = [ZERO; 2];
        let count = self.degree - 1;
        if count == 1 {
            list[0] = -a / (b * 2.0);
        } else if count == 2 {
            // a + 2 b t + 3 c t^2 = 0 without cancellation.
            let root = (b * b - a * c * 3.0).sqrt();
            let q = if (b + root).norm() > (b - root).norm() { b + root } else { b - root };
            list = if q == ZERO { [ZERO; 2] } else { [-q / (c * 3.0), -a / q] };
        }
        list.into_iter().take(count)
    }

    /// First steps down from a waypoint: the least points of a circle round it.
    fn ways_down(&self, from: Complex64, ways: &mut [Complex64; WAYS]) -> usize {
        let taylor = self.about(from);
        let budget = if from == ZERO { FIRST } else { LEAVING };
        let Some(mut radius) = reach(&taylor[1..=self.degree], budget) else { return 0 };
        if from != ZERO {
            radius = radius.min(INWARDS * from.norm());
        }
        radius = radius.min(self.bound(from, radius));
        let along =
            |s: Complex64| taylor[1..=self.degree].iter().rev().fold(ZERO, |sum, t| (sum + t) * s);
        let step = |n: usize| {
            Complex64::from_polar(radius, 2.0 * PI * (n % ANGLES) as f64 / ANGLES as f64)
        };
        let heights: [f64; ANGLES] = std::array::from_fn(|n| along(step(n)).re);
        let mut count = 0;
        for n in 0..ANGLES {
            let (before, after) = (heights[(n + ANGLES - 1) % ANGLES], heights[(n + 1) % ANGLES]);
            let least = heights[n] <= before && heights[n] < after;
            if least && heights[n] < 0.0 && count < WAYS {
                ways[count] = step(n);
                count += 1;
            }
        }
        count
    }

    /// The longest step that the power allows.
    fn bound(&self, from: Complex64, length: f64) -> f64 {
        if from == ZERO {
            length
        } else {
            BUDGET * from.norm() / (self.lambda - 1.0).abs().max(1.0)
        }
    }

    /// Goes down from a waypoint by a first step, each step taken note of until the rest is
    /// negligible; returns the valley.
    fn follow(
        &self,
        from: Lifted,
        first: Complex64,
        mut take: impl FnMut(Lifted, Complex64),
    ) -> Option<i32> {
        let degree = self.degree as f64;
        // The logarithm of the modulus, with the highest power.
        let level = |t: Complex64| self.value(t).re + (self.lambda + degree - 1.0) * t.norm().ln();
        take(from, first);
        let mut here = from.ahead(from.t + first);
        let mut peak =
            level(here.t).max(if from.t == ZERO { f64::NEG_INFINITY } else { level(from.t) });
        let mut done = false;
        for _ in 0..STEPS {
            let now = level(here.t);
            peak = peak.max(now);
            let size = here.t.norm();
            let taylor = self.about(here.t);
            // Falling for good: the exponent outweighs the power.
            done |= now < peak - FLOOR && taylor[1].norm() * size > 2.0 * (self.lambda + degree);
            if done {
                let lead = degree * size.powi(self.degree as i32 - 1);
                let rest = (taylor[1]
                    - self.c[self.degree] * here.t.powi(self.degree as i32 - 1) * degree)
                    .norm();
                let sinking = (self.c[self.degree] * here.t.powi(self.degree as i32)).re;
                if rest < 0.3 * lead && sinking < -0.8 * size.powi(self.degree as i32) {
                    let lift = here.angle * degree - 0.5 * PI;
                    return Some((lift / (2.0 * PI)).round() as i32);
                }
            }
            let budget = BUDGET + 0.6 * (peak - now).clamp(0.0, 1e3);
            let mut step = descent(&taylor[1..=self.degree], budget)?;
            let outwards = (here.t + step).norm() >= size;
            let longest = if outwards { OUTWARDS } else { INWARDS } * size;
            let longest = longest.min(self.bound(here.t, longest));
            if step.norm() > longest {
                step *= longest / step.norm();
            }
            if !done {
                take(here, step);
            }
            here = here.ahead(here.t + step);
        }
        None
    }
}

struct Sum<'a> {
    integrand: &'a Integrand,
    moments: EndMoments,
}

impl<'a> Sum<'a> {
    fn new(integrand: &'a Integrand) -> Sum<'a> {
        let moments = EndMoments { values: [ZERO; MAX_DEGREE], sizes: [0.0; MAX_DEGREE] };
        Sum { integrand, moments }
    }

    fn add(&mut self, mut term: Complex64, t: Complex64) {
        let EndMoments { values, sizes } = &mut self.moments;
        for (value, size) in values.iter_mut().zip(sizes).take(self.integrand.degree) {
            *value += term;
            *size += term.norm();
            term *= t;
        }
    }

    /// Along one step.
    fn step(&mut self, from: Lifted, step: Complex64) {
        let f = self.integrand;
        if from.t == ZERO {
            return self.first(step);
        }
        let taylor = f.about(from.t);
        let along =
            |s: Complex64| taylor[1..=f.degree].iter().rev().fold(ZERO, |sum, t| (sum + t) * s);
        let logarithm = Complex64::new(from.t.norm().ln(), from.angle);
        let start = taylor[0] + logarithm * (f.lambda - 1.0);
        let count = panels(&taylor[1..=f.degree], step);
        let half = step * (0.5 / count as f64);
        for panel in 0..count {
            let middle = half * (2 * panel + 1) as f64;
            for (node, weight) in RULE {
                for s in [middle - half * node, middle + half * node] {
                    let power = (s / from.t + 1.0).ln() * (f.lambda - 1.0);
                    self.add((start + power + along(s)).exp() * half * weight, from.t + s);
                }
            }
        }
    }

    /// From 0: the exponential as a Taylor series.
    fn first(&mut self, a: Complex64) {
        let f = self.integrand;
        const TERMS: usize = 48;
        let mut scaled = [ZERO; MAX_DEGREE + 1];
        let mut power = a;
        for (m, scaled) in scaled.iter_mut().enumerate().skip(1) {
            // m c_m a^m, for n e_n = sum_m m c_m a^m e_(n-m).
            *scaled = f.c[m] * power * m as f64;
            power *= a;
        }
        let mut e = [ZERO; TERMS];
        e[0] = Complex64::new(1.0, 0.0);
        for n in 1..TERMS {
            let sum: Complex64 = (1..=n.min(f.degree)).map(|m| scaled[m] * e[n - m]).sum();
            e[n] = sum / n as f64;
        }
        let front = (Complex64::new(a.norm().ln(), a.arg()) * f.lambda).exp();
        let mut power = front;
        for j in 0..f.degree {
            let terms = e.iter().enumerate().map(|(n, e)| e / (f.lambda + (n + j) as f64));
            let sum = terms.fold((ZERO, 0.0), |sum, e| (sum.0 + e, sum.1 + e.norm()));
            self.moments.values[j] += sum.0 * power;
            self.moments.sizes[j] += sum.1 * power.norm();
            power *= a;
        }
    }

    /// Along a straight leg.
    fn chord(&mut self, from: Lifted, to: Complex64) -> Option<Lifted> {
        let f = self.integrand;
        let mut here = from;
        for _ in 0..STEPS {
            let left = to - here.t;
            if left == ZERO {
                return Some(here);
            }
            let budget = if here.t == ZERO { FIRST } else { BUDGET };
            let mut longest = f.size(here.t, budget)?;
            if here.t != ZERO {
                let outwards = (left / here.t).re >= 0.0;
                longest = longest.min(if outwards { OUTWARDS } else { INWARDS } * here.t.norm());
            }
            longest = longest.min(f.bound(here.t, longest));
            let whole = left.norm() <= longest;
            let step = if whole { left } else { left * (longest / left.norm()) };
            self.step(here, step);
            here = here.ahead(if whole { to } else { here.t + step });
        }
        None
    }
}

/// Panels over a step: beside a saddle of high order the descent bends away from the chord, where the
/// exponent turns as much as it falls.
fn panels(taylor: &[Complex64], step: Complex64) -> usize {
    let fall = -taylor.iter().rev().fold(ZERO, |sum, &t| (sum + t) * step).re;
    let size = taylor.iter().rev().fold(0.0, |sum, t| (sum + t.norm()) * step.norm());
    1 + STRAIGHT.iter().filter(|part| fall < **part * size).count()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(x: &[Complex64], lambda: f64, valley: i32, exact: &[Complex64]) {
        let got = Paths::new(x, lambda, 1.0)
            .and_then(|p| p.toward(valley))
            .unwrap_or_else(|| panic!("{lambda} {x:?} {valley}"));
        for (j, exact) in exact.iter().enumerate() {
            let error = (got.values[j] - exact).norm();
            assert!(
                error < (2e-14 + 4e-16 * lambda) * got.sizes[j] && error < 4e-13 * exact.norm(),
                "{lambda} {x:?} {valley} {j}: {error:e} {exact:e}"
            );
        }
    }

    #[test]
    fn gamma_and_parabolic_cylinder_values() {
        // Gamma(1/3), Gamma(1/2), Gamma(5), Gamma(30.5) (mpmath, 20 digits; DLMF 5.4 for the second).
        for (x, exact) in [
            (1.0 / 3.0, 2.678_938_534_707_747_6),
            (0.5, PI.sqrt()),
            (5.0, 24.0),
            (30.5, 4.822_696_933_490_909e31),
            (100.0, 9.332_621_544_394_41e155),
        ] {
            check(&[], x, 0, &[Complex64::from_polar(exact, 0.5 * PI * x)]);
        }
        for [lambda, re, im, a, b, c, d] in CYLINDER {
            // t = e^(i pi/4) s/sqrt 2.
            let unit = Complex64::from_polar(0.5f64.sqrt(), 0.25 * PI);
            let x = Complex64::new(0.0, 1.0) * Complex64::new(re, im) / unit;
            let front = Complex64::from_polar(0.5f64.powf(0.5 * lambda), 0.25 * PI * lambda);
            let exact = [front * Complex64::new(a, b), front * unit * Complex64::new(c, d)];
            check(&[x], lambda, 0, &exact);
        }
    }

    #[test]
    fn cubic_values_and_a_turn_about_the_end() {
        for row in CUBIC {
            let c = |n: usize| Complex64::new(row[n], row[n + 1]);
            let (x, lambda, valley) = ([c(1), c(3)], row[0], row[5] as i32);
            check(&x, lambda, valley, &[c(6), c(8), c(10)]);
            let turn = Complex64::from_polar(1.0, 2.0 * PI * lambda);
            check(&x, lambda, valley + 3, &[c(6) * turn, c(8) * turn, c(10) * turn]);
        }
    }

    #[test]
    fn a_recurrence_by_parts_holds() {
        // lambda M_0 + i (x_1 M_1 + 2 x_2 M_2 + 3 M_3) = 0, M_3 being M_0 at lambda + 3 (by parts).
        let mut seed = 7u64;
        let mut next = || {
            seed = seed
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            (seed >> 11) as f64 / (1u64 << 53) as f64
        };
        let mut worst = 0.0f64;
        for _ in 0..4000 {
            let scale = 6.0 * 10f64.powf(-5.0 * next());
            let x = [scale * scale, scale]
                .map(|s| Complex64::from_polar(s * next(), 2.0 * PI * next()));
            let lambda = 0.05 + 3.0 * next();
            let valley = (6.0 * next()) as i32 - 3;
            let (Some(a), Some(b)) = (
                Paths::new(&x, lambda, 1.0).and_then(|p| p.toward(valley)),
                Paths::new(&x, lambda + 3.0, 1.0).and_then(|p| p.toward(valley)),
            ) else {
                assert!(scale > 3.0, "{x:?} {lambda} {valley}");
                continue;
            };
            let i = Complex64::new(0.0, 1.0);
            let terms = [
                a.values[0] * lambda,
                i * x[0] * a.values[1],
                i * x[1] * a.values[2] * 2.0,
                i * b.values[0] * 3.0,
            ];
            let sizes = lambda * a.sizes[0]
                + x[0].norm() * a.sizes[1]
                + 2.0 * x[1].norm() * a.sizes[2]
                + 3.0 * b.sizes[0];
            let error = terms.iter().sum::<Complex64>().norm() / sizes;
            worst = worst.max(error);
        }
        println!("recurrence to {worst:.1e}");
        assert!(worst < 2e-14, "{worst:e}");
    }

    /// `lambda`, `zeta`, `F_lambda`, `F_(lambda+1)` from `Gamma(mu) exp(zeta^2/4) U(mu - 1/2, zeta)` (mpmath, 40 digits).
    #[rustfmt::skip]
    #[allow(clippy::approx_constant)]
    const CYLINDER: [[f64; 7]; 33] = [
        [0.3333333333333333, 0.0, 0.0, 3.1239892304477412, 0.0, 1.0747641207672394, 0.0],
        [0.3333333333333333, 0.5, 0.0, 2.692197003057732, 0.0, 0.6927688913779385, 0.0],
        [0.3333333333333333, 3.0, 4.0, 1.4993583075871382, -0.4642962750040534, 0.04077608775263168, -0.09737093481419516],
        [0.3333333333333333, -1.0, -0.5, 4.515633215114274, 1.5942056950336072, 2.4585980005702033, 2.214596196463857],
        [0.3333333333333333, -5.0, 0.25, 79742.93617682363, -213888.11402151533, 331920.43264026946, -1059295.251136294],
        [0.3333333333333333, -6.0, 7.0, 0.9235280052845743, -0.8822241378093791, -0.0470980173463307, 0.00395426780615157],
        [0.3333333333333333, 0.0, 10.0, 1.0793034524196419, -0.6231361387917727, -0.0210589476758771, -0.03647516732855366],
        [0.3333333333333333, 12.0, 0.0, 1.1683521785468673, 0.0, 0.032161084852691466, 0.0],
        [0.3333333333333333, -8.0, -8.5, 0.8414562164249108, 0.8201986555524979, 0.02746231407016821, -0.06760676548623402],
        [0.3333333333333333, -2.0, 15.0, 0.9138432229894431, -0.5832220878576153, -0.015511001757546813, -0.018334864690307057],
        [0.3333333333333333, 0.1, -14.0, 0.9650359558758375, 0.5540832323153079, -0.01311566001354601, 0.023231356993433313],
        [0.5, 0.0, 0.0, 2.155800549540928, 0.0, 1.0304485122949956, 0.0],
        [0.5, 0.5, 0.0, 1.7489447053589575, 0.0, 0.6400391193540316, 0.0],
        [0.5, 3.0, 4.0, 0.7163756945460219, -0.3449617901522735, 0.02023395615601899, -0.07765966700168507],
        [0.5, -1.0, -0.5, 3.5037983229049603, 1.6400415708667098, 2.4584614361820942, 2.4077350268382793],
        [0.5, -5.0, 0.25, 100884.96887839011, -278449.3419057201, 422277.3747521685, -1388325.0080581037],
        [0.5, -6.0, 7.0, 0.24080096270297582, -0.5308847658096191, -0.030086710374908062, 0.0208086116453035],
        [0.5, 0.0, 10.0, 0.3978529193531929, -0.3978529193531929, -0.02020377775559591, -0.02020377775559591],
        [0.5, 12.0, 0.0, 0.5103505820548997, 0.0, 0.021049003965588682, 0.0],
        [0.5, -8.0, -8.5, 0.20501916243107662, 0.4650168329371751, 0.08451566863473642, -0.09769697093386928],
        [0.5, -2.0, 15.0, 0.300465862350528, -0.3434894072313308, -0.01265722264132301, -0.008371882962522148],
        [0.5, 0.1, -14.0, 0.33681185183580525, 0.33439598087142586, -0.011947440341808536, 0.01220967928623622],
        [2.25, 0.0, 0.0, 1.0269776963671562, 0.0, 1.3827065604856164, 0.0],
        [2.25, 0.5, 0.0, 0.5513800254104966, 0.0, 0.6329992156161856, 0.0],
        [2.25, 3.0, 4.0, -0.0111457831161775, -0.028830403144299445, -0.012869402719099962, -0.005515028579228149],
        [2.25, -1.0, -0.5, 2.79027705829875, 3.7603235774994612, 4.000148621957999, 7.816950702428316],
        [2.25, -5.0, 0.25, 1258115.5346721779, -4748780.088670823, 5471332.366365868, -25215505.359589063],
        [2.25, -6.0, 7.0, 0.040725933202633784, 0.05454039636703603, 0.5565529723256079, 0.030969292964536207],
        [2.25, 0.0, 10.0, -0.006114584685592039, 0.00253274390505105, 0.0005899448066580366, 0.0014242527532854056],
        [2.25, 12.0, 0.0, 0.00412401640881165, 0.0, 0.0007566493848007558, 0.0],
        [2.25, -8.0, -8.5, 0.8723590121052284, -0.08812169300755583, 7.734106818939119, 6.647808060237229],
        [2.25, -2.0, 15.0, -0.0019566145263004075, 0.0016322476380531115, 0.0002839643123201334, 0.00025880031147610907],
        [2.25, 0.1, -14.0, -0.002832485095177743, -0.0011193623328806827, 0.00017956671630172907, -0.00046440195437534283],
    ];

    /// `lambda`, `x_1`, `x_2`, valley, `M_0`, `M_1`, `M_2` by quadrature along the valley (mpmath, 30 digits).
    #[rustfmt::skip]
    #[allow(clippy::approx_constant)]
    const CUBIC: [[f64; 12]; 25] = [
        [0.3333333333333333, 0.0, 0.0, 0.0, 0.0, 0.0, 2.797736452002843, 0.4933164213996745, 0.508881669611915, 0.42700242128423643, 0.13568522650905182, 0.37279209598720564],
        [0.5, 0.0, 0.0, 0.0, 0.0, 1.0, 0.48022286410654724, 1.7922161278018789, -0.41777137910516676, -0.41777137910516676, 0.3634415148561299, 0.0973838604016439],
        [0.25, 1e-09, 0.0, 0.0, 0.0, 2.0, 1.4668802164322778, 3.5413621128875863, 0.6552021406082156, -0.2713936127358065, -0.15631555671453473, -0.3773791370301305],
        [0.75, -3.0, 0.0, 0.0, 0.0, 0.0, 0.6043782320414804, -1.3752394696617978, 0.23064844974484872, -1.021189707307676, 0.3355561593714876, -0.918450939160253],
        [0.75, -3.0, 0.0, 0.0, 0.0, 1.0, -1.399801101031316, -0.5450812084751809, 0.8851832497999105, 0.5589970840304163, -0.8867169230278609, -0.4121688515068754],
        [0.75, -3.0, 0.0, 0.0, 0.0, 2.0, -0.4622391220716654, -0.19146571342151647, -0.03863490902335475, 0.0932729213452337, 0.038552904430489636, 0.01596913588398259],
        [0.3333333333333333, -1.0, 2.0, 1.5, 0.5, 0.0, 1.9906813764608018, -0.04528845946714287, 0.22321167804576106, 0.022916541002905078, 0.07366515082273886, 0.028871334572359717],
        [0.3333333333333333, -1.0, 2.0, 1.5, 0.5, 1.0, -2.4641793171149424, 7.520826832659018, 3.293537880883965, -6.276175142615223, -3.013556590965151, 8.136615244165831],
        [0.3333333333333333, -1.0, 2.0, 1.5, 0.5, -1.0, 2.2707260812248102, -0.707392828972158, -0.024584815937173987, -0.45613781623488897, -0.25115930325683294, 0.011265302796184684],
        [2.25, 4.0, 0.0, -2.0, 0.0, 1.0, -0.016072224226405963, -0.0331013888555225, 0.014958242604345064, 0.0009288445645053589, -0.004768259565779508, 0.006361430631450508],
        [2.25, 0.0, 3.0, -3.0, 0.5, 0.0, 0.034658139840252164, -0.03613483830209495, 0.005891901924394887, -0.02394558130338534, -0.006007065745446774, -0.017109060900571585],
        [0.1, -0.5, 0.0, 0.0, 0.25, 1.0, 9.42930958107104, 3.012514085256194, -0.8517970643238523, -0.05291829813084071, 0.44197285419458393, -0.14054542874283954],
        [0.5, 2.0, -3.0, 2.0, 2.0, 1.0, 0.16092667895864124, 0.8914872019579472, -0.042897099882317456, -0.09716009723570154, 0.01771163050226018, 0.027602704945257066],
        [0.5, 2.0, -3.0, 2.0, 2.0, 0.0, 0.8781243593111432, 1.274098040965907, -0.21237383632798434, 0.3433238652896434, -0.19930420341680635, 0.03191963178008087],
        [0.5, 2.0, -3.0, 2.0, 2.0, 2.0, 0.175573229086571, 0.88014812484964, -0.0860394725029972, -0.10609468113041501, 0.06617805849482992, 0.11932786800006823],
        [1.5, 0.01, 0.0, 3.0, 0.0, 0.0, 0.10981836666007964, 0.21153605571720127, -0.021074825081971806, 0.08907180039749664, -0.03814126308592905, 0.028174893442876565],
        [1.5, 0.01, 0.0, 3.0, 0.0, 1.0, 0.2250409058189215, 1.380533224932561, 0.08731944499751741, -2.9835440817169516, -0.27063431843919794, 5.860549206352919],
        [1.5, 0.01, 0.0, 3.0, 0.0, 2.0, 0.2900458972096261, -0.06326438798474328, -0.10032353236121376, -0.09254131142309202, -0.01448773871379264, 0.08471874055255602],
        [0.5, 3.0, 0.0, 3.0, 0.0, 1.0, 1.712780123216016, 1.6909338111670993, -1.5627249624385893, -0.39200234450141674, 1.8774601863699576, -0.12270923525679477],
        [0.5, 3.0, 1e-07, 3.0, 0.0, 2.0, 0.6744513197670198, 2.375211372276815, 0.18962598933421854, -1.0955618471278574, -0.6823614805450303, 0.5131551400930675],
        [0.5, 3.0, 0.0, -3.0, 0.0, 0.0, 1.6909338111670993, 1.712780123216016, 0.39200234450141674, 1.5627249624385893, -0.12270923525679477, 1.8774601863699576],
        [12.0, 1.0, 0.0, -1.0, 0.0, 0.0, 9.084034056496517, -0.2140656429846404, 13.9341664110732, 6.922044659544404, 16.00756441979337, 22.18757375683872],
        [0.5, -9.0, 0.0, -4.0, 0.0, 0.0, 0.6674648040084845, -0.11945545490827772, 0.8315968399424969, 0.9564051315279419, 2.993243691323535, 3.4510460408076242],
        [0.5, -9.0, 0.0, -4.0, 0.0, 1.0, -0.30261459624810877, -0.33142405077412496, -0.13290565178919903, 0.6477118057082417, 0.11620202458001312, -0.5343526473309745],
        [0.5, -9.0, 0.0, -4.0, 0.0, 2.0, -0.42825397856668906, 0.4002582530833365, 0.01832776260323331, 0.025238935127246696, 0.004303393186726384, -0.002052834242855891],
    ];
}

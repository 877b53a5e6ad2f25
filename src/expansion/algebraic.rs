//! The contribution of an algebraic end point, alone or with one saddle near it.
//!
//! The integrand has the factor `(z - b)^(lambda - 1)`, `lambda > 0`, at a finite end `b`. On rings about
//! `b` (`ring::based`) the contour is a sum of paths from the end to valleys, each with a weight,
//!
//! `sum_n k^(-n) sum_j p_j^(n) sum_V w_V integral from 0 to valley V of u^(lambda-1+j) exp(i k Phi(u)) du`.
//!
//! - No saddle near: `Gamma(lambda) (i/k)^lambda`, the valley at the angle `pi/2 + 2 pi V` (Watson's
//!   lemma, DLMF 2.3(ii)).
//! - One saddle: parabolic cylinder functions, the valleys at `pi/4 + pi V`; two: the same with a cubic
//!   phase, the valleys at `pi/6 + 2 pi V/3`; both in `end_moments`.
//!
//! The sum is split in two: the end's own descent, and the rest, which is what the saddles add; each is
//! taken where its error figure is smaller, here or from the saddles' own series.
//!
//! Source: N. Bleistein, Comm. Pure Appl. Math. 19 (1966) 353.

use super::contribution::Contribution;
use super::end_moments::{EndMoments, Paths as Ways};
use super::figure::Parts;
use super::level::Level;
use crate::Scaled;
use crate::integral::{Amplitude, Phase};
use crate::ring::{BasedForm, BasedOrders, MAX_DEGREE, MAX_ORDERS, ZERO};
use crate::saddles::{Branch, Sheeting, Unrolled};
use num_complex::Complex64;
use std::f64::consts::PI;

/// Ratio between neighbouring rings.
const RATIO: f64 = 1.4;
/// Rings that are tried at most.
const TRIED: usize = 30;
/// Times that the first ring may be made smaller.
const FIRST: usize = 16;
const FILLING: f64 = 0.9;
const WORST_TAIL: f64 = 1e-5;
const CLEAN: f64 = 1e-12;
/// Tails below this may be set by rounding.
const ROUGH: f64 = 1e-7;
const LARGEST: f64 = 40.0;
const SMALLEST: f64 = 0.15;
/// The error of the moments, relative to their parts.
const ROUNDING: f64 = 8e-15;

/// An amplitude with the powers of algebraic ends.
pub(crate) struct Powered<'a> {
    pub amplitude: &'a dyn Amplitude,
    pub powers: Powers,
}

/// The powers of algebraic ends, each continued from a point off its end.
#[derive(Clone, Default)]
pub(crate) struct Powers(Vec<Factor>);

#[derive(Clone)]
struct Factor {
    base: Complex64,
    /// The point from which the power is continued, seen from the end, and its logarithm.
    centre: Complex64,
    logarithm: Complex64,
    exponent: f64,
    constant: Complex64,
}

impl<'a> Powered<'a> {
    /// `centre` seen from each branch at the given lifted angle.
    pub fn new(
        amplitude: &'a dyn Amplitude,
        centre: Complex64,
        branches: impl Iterator<Item = (Branch, f64)>,
    ) -> Powered<'a> {
        let factors = branches
            .map(|(branch, lift)| {
                let seen = centre - branch.base;
                Factor {
                    base: branch.base,
                    centre: seen,
                    logarithm: Complex64::new(seen.norm().ln(), lift),
                    exponent: branch.lambda - 1.0,
                    constant: branch.constant,
                }
            })
            .collect();
        Powered { amplitude, powers: Powers(factors) }
    }

    /// The amplitude itself if there is no power.
    pub fn simplest(&self) -> &dyn Amplitude {
        if self.powers.0.is_empty() { self.amplitude } else { self }
    }
}

impl Powers {
    /// `product` times all powers.
    pub fn times(&self, z: Complex64, product: Complex64) -> Complex64 {
        self.0.iter().fold(product, |product, f| {
            let logarithm = ((z - f.base) / f.centre).ln() + f.logarithm;
            product * f.constant * (logarithm * f.exponent).exp()
        })
    }
}

impl Amplitude for Powered<'_> {
    fn value(&self, z: Complex64) -> Complex64 {
        self.powers.times(z, self.amplitude.value(z))
    }
}

#[derive(Clone)]
pub(super) struct Ring {
    pub form: BasedForm,
    pub orders: BasedOrders,
    pub filling: f64,
    /// The value of `(dz/du)^(lambda - 1)` at the end.
    pub power: Complex64,
}

impl Ring {
    /// The same with another amplitude, perhaps on a smaller ring.
    pub fn with_orders(&self, form: &BasedForm, filling: f64, orders: BasedOrders) -> Ring {
        Ring { form: form.clone(), orders, filling, power: self.power }
    }
}

/// Paths from the end to valleys: valley number, weight with its sheet's factor.
type Paths = Vec<(i32, Complex64)>;

/// An algebraic end on rings about it.
#[derive(Clone)]
pub(crate) struct AlgebraicSeries {
    pub(super) lambda: f64,
    /// `Gamma(lambda) i^lambda`, where no saddle is near.
    gamma: Complex64,
    pub(super) rings: Vec<Ring>,
    /// The power of the other end.
    pub(super) powers: Powers,
    reference: usize,
    /// The end's own descent.
    own: Paths,
    /// What the saddles add.
    rest: Paths,
    /// The same as whole weights with points of the ring, for the certificate.
    pub valleys: Vec<(i32, Complex64)>,
    unrolled: Option<Unrolled>,
    sign: f64,
    level: Level,
}

/// The weights with the factors of their sheets about the other branch.
fn paths(weights: &[(i32, i32, i32)], other: Option<&Branch>) -> Paths {
    let path = |&(valley, sheet, weight): &(i32, i32, i32)| {
        let turned = other.map_or(0.0, |b| 2.0 * PI * b.lambda * f64::from(sheet));
        (valley, Complex64::from_polar(1.0, turned) * f64::from(weight))
    };
    weights.iter().map(path).collect()
}

/// Weights of equal paths added, without those that cancel.
fn collected(list: &[(i32, i32, i32)]) -> Vec<(i32, i32, i32)> {
    let mut sums: Vec<(i32, i32, i32)> = Vec::new();
    for &(valley, sheet, weight) in list {
        match sums.iter_mut().find(|s| s.0 == valley && s.1 == sheet) {
            Some(sum) => sum.2 += weight,
            None => sums.push((valley, sheet, weight)),
        }
    }
    sums.retain(|s| s.2 != 0);
    sums
}

/// Which part of the contour is asked for.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(crate) enum Part {
    /// The descent from the end.
    End,
    /// What the saddles near the end add.
    Saddles,
}

impl AlgebraicSeries {
    /// With `saddles` (0 to 2) near the end, the first ring at about `reach` from it but not below
    /// `least`. None if there is no normal form, or the contour cannot be followed.
    pub fn new(
        phase: &dyn Phase,
        amplitude: &dyn Amplitude,
        sheeting: &Sheeting,
        (branches, slot): (&[Branch], usize),
        saddles: usize,
        (reach, least): (f64, f64),
    ) -> Option<AlgebraicSeries> {
        let branch = branches[slot];
        let other = |_: &Branch| sheeting.at_end(1 - slot, branch.end);
        let others = branches.iter().enumerate().filter(|(n, _)| *n != slot);
        let smooth = Powered::new(amplitude, branch.base, others.map(|(_, b)| (*b, other(b))));
        // The angle of dz/du at the end: one on all rings, also where it is near half a turn.
        let mut start: Option<f64> = None;
        let mut ring = |form: BasedForm| -> Option<Ring> {
            let angle = branch.angle(branch.base + form.slope());
            let turns = ((start.unwrap_or(angle) - angle) / (2.0 * PI)).round();
            let angle = angle + 2.0 * PI * turns;
            start = Some(angle);
            let logarithm = Complex64::new(form.slope().norm().ln(), angle);
            let power = branch.constant * (logarithm * (branch.lambda - 1.0)).exp();
            let orders = BasedOrders::new(&form, &smooth, branch.lambda, power)?;
            let filling = form.filling();
            Some(Ring { form, orders, filling, power })
        };
        let tail = |ring: &Ring| ring.orders.tail.max(ring.form.tail());
        let mut reach = reach;
        let mut first: Option<Ring> = None;
        for _ in 0..FIRST {
            if reach < least {
                break;
            }
            if let Some(found) =
                BasedForm::find(phase, saddles, branch.base, reach).and_then(&mut ring)
            {
                let best = first.as_ref().map_or(f64::INFINITY, tail);
                // Where rounding sets the tails a smaller ring is no better; beside a cut it is.
                let noisy = tail(&found) > 0.3 * best && best < ROUGH;
                let done = found.filling * RATIO > FILLING || noisy || tail(&found) < CLEAN;
                if !noisy && tail(&found) < best && (found.filling < FILLING || first.is_none()) {
                    first = Some(found);
                }
                if done {
                    break;
                }
            }
            reach /= RATIO;
        }
        let mut trials = vec![first.filter(|ring| tail(ring) < WORST_TAIL)?];
        for _ in 0..TRIED {
            let last = &trials[trials.len() - 1];
            if last.form.radius().powi(saddles as i32 + 1) > LARGEST {
                break;
            }
            let Some(next) = last.form.resized(phase, RATIO).and_then(&mut ring) else { break };
            if tail(&next) > WORST_TAIL && tail(&next) > tail(last) {
                break;
            }
            trials.push(next);
        }
        let largest = trials.last()?.form.radius();
        let rings: Vec<Ring> = trials
            .into_iter()
            .filter(|r| r.filling < FILLING && r.form.radius() >= SMALLEST * largest)
            .collect();
        let reference = (0..rings.len())
            .min_by(|&a, &b| rings[a].form.residual().total_cmp(&rings[b].form.residual()))?;
        let unrolled = sheeting.unrolled(&rings[0].form, slot, start?)?;
        let sign = if branch.end == 0 { 1.0 } else { -1.0 };
        let radius = 0.2 * rings[0].form.map()[1].norm();
        let mut series = AlgebraicSeries {
            lambda: branch.lambda,
            gamma: Ways::new(&[], branch.lambda, 1.0)?.toward(0)?.values[0],
            rings,
            powers: smooth.powers.clone(),
            reference,
            own: Vec::new(),
            rest: Vec::new(),
            valleys: Vec::new(),
            unrolled: None,
            sign,
            level: Level::of(phase, branch.base, radius),
        };
        let other = branches.get(1 - slot);
        let degree = saddles as i32 + 1;
        let mut rest = unrolled.weights.clone();
        if saddles == 0 {
            series.own = paths(&rest, other);
            series.unrolled = Some(unrolled);
            return Some(series);
        }
        let copies = sheeting.copies(slot);
        let own: Vec<_> =
            copies.map(|(n, sheet, w)| (unrolled.own + degree * n, sheet, w)).collect();
        rest.extend(own.iter().map(|&(valley, sheet, weight)| (valley, sheet, -weight)));
        let rest = collected(&rest);
        series.own = paths(&own, other);
        series.rest = paths(&rest, other);
        for (valley, _, weight) in rest {
            if let Some(point) = unrolled.points[valley.rem_euclid(degree) as usize] {
                series.valleys.push((if series.sign > 0.0 { weight } else { -weight }, point));
            }
        }
        Some(series)
    }

    /// The same with other orders on its rings.
    pub(super) fn with_rings(&self, rings: Vec<Ring>) -> AlgebraicSeries {
        AlgebraicSeries { rings, ..self.clone() }
    }

    /// How the contour leaves the end, from the ring without a saddle.
    pub fn unrolled(&self) -> Option<&Unrolled> {
        self.unrolled.as_ref()
    }

    /// How many saddles are near.
    pub fn saddles(&self) -> usize {
        self.rings[self.reference].form.degree() - 1
    }

    /// Whether the contour is the end's own descent and no more.
    pub fn is_plain(&self) -> bool {
        self.rest.is_empty()
    }

    /// `integral of u^(lambda - 1 + j) exp(i k Phi)` over the paths, `j = 0 .. D - 1`, and the sizes of what
    /// they are summed from.
    fn moments(&self, paths: &Paths, k: f64) -> Option<[(Complex64, f64); MAX_DEGREE]> {
        let form = &self.rings[self.reference].form;
        let degree = form.degree();
        let mut sums = [(ZERO, 0.0); MAX_DEGREE];
        if degree == 1 {
            for &(valley, weight) in paths {
                let turn = Complex64::from_polar(1.0, 2.0 * PI * self.lambda * f64::from(valley));
                let value = weight * self.gamma * turn * k.powf(-self.lambda);
                sums[0].0 += value;
                sums[0].1 += value.norm();
            }
            return Some(sums);
        }
        let x = form.x();
        let ways = Ways::new(&x[..degree - 1], self.lambda, k)?;
        for &(valley, weight) in paths {
            let EndMoments { values, sizes } = ways.toward(valley)?;
            for ((sum, value), size) in sums.iter_mut().zip(values).zip(sizes) {
                sum.0 += weight * value;
                sum.1 += weight.norm() * size;
            }
        }
        Some(sums)
    }

    /// A part of the contribution at wavenumber `k` with at most `orders` orders; unknown where a
    /// saddle is too far away.
    pub fn at(&self, part: Part, k: f64, orders: usize) -> Contribution {
        let paths = if part == Part::End { &self.own } else { &self.rest };
        let Some(moments) = self.moments(paths, k) else { return Contribution::UNKNOWN };
        let mut best = (0, 0, f64::INFINITY);
        for (index, ring) in self.rings.iter().enumerate() {
            let (kept, figure) = parts(ring, &moments, k, orders).least(best.2);
            // Paths that nearly cancel.
            let lost: f64 =
                moments.iter().zip(ring.orders.coefficients(0)).map(|(m, p)| m.1 * p.norm()).sum();
            let figure = figure + ROUNDING * lost;
            if figure < best.2 {
                best = (index, kept, figure);
            }
        }
        let (index, kept, figure) = best;
        let ring = &self.rings[index];
        let mut sum = ZERO;
        let mut power = 1.0;
        for n in 0..kept {
            let p = ring.orders.coefficients(n);
            let order: Complex64 = p.iter().zip(&moments).map(|(p, m)| p * m.0).sum();
            sum += order * power;
            power /= k;
        }
        let noise = self.level.error(k) * sum.norm();
        Contribution::new(
            self.level.exponent(k),
            Scaled::from(sum * self.sign),
            Scaled::from(Complex64::new(figure + noise, 0.0)),
            kept,
        )
    }
}

fn parts(ring: &Ring, moments: &[(Complex64, f64); MAX_DEGREE], k: f64, orders: usize) -> Parts {
    let mut terms = [0.0; MAX_ORDERS];
    let mut noise = [0.0; MAX_ORDERS];
    let mut power = 1.0;
    for n in 0..MAX_ORDERS {
        let (p, q) = (ring.orders.coefficients(n), ring.orders.noise(n));
        for j in 0..MAX_DEGREE {
            terms[n] += power * p[j].norm() * moments[j].0.norm();
            noise[n] += power * q[j].norm() * moments[j].1;
        }
        power /= k;
    }
    let form = &ring.form;
    let reach = ring.filling * form.radius();
    let spread: f64 = form.x().iter().zip(1..).map(|(x, j)| x.norm() * reach.powi(j)).sum();
    Parts {
        terms,
        noise,
        size: ring.orders.size,
        residual: k * form.residual(),
        folded: ring.orders.tail + form.tail(),
        mean: 0.0,
        missing: 0.0,
        degree: form.degree(),
        spread: k * spread,
        filling: ring.filling,
        orders,
    }
}

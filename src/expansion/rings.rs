//! The rings of one cluster (or one end point): which are tried and which are kept.
//!
//! Method. A first small ring is enlarged by a constant ratio while the normal form holds and the
//! Taylor tails decay; inwards everything is known already. Poles of the amplitude have rings of their own,
//! some without and some with the pole split off.

use super::far_pole::far_pole;
use super::pole::{MappedPole, Pole};
use crate::integral::{Amplitude, Phase};
use crate::ring::{KEPT, NormalForm, Orders, Start, ZERO};
use num_complex::Complex64;

/// Ratio between neighbouring rings.
const RATIO: f64 = 1.4;
/// Rings that are tried at most.
const TRIED: usize = 30;
/// Mapped saddles must lie within this part of the ring.
pub(super) const FILLING: f64 = 0.9;
/// Tails beyond which a ring is of no use.
pub(super) const WORST_TAIL: f64 = 1e-5;
/// No ring is enlarged once `k R^(K+2)` is beyond this at the least wavenumber: nothing is gained there,
/// and the rounding error of `A` grows with it.
const LARGEST: f64 = 80.0;
/// Mapped saddles within this part of the ring leave room enough.
const ROOMY: f64 = 0.5;
/// The first ring has `k R^(K+2)` no larger than this at the least wavenumber.
const INNERMOST: f64 = 4.0;
/// The topology looks at the cluster on a ring with `k R^(K+2)` no larger than this, if the saddles
/// allow: the contour's descents must leave it.
const LOW: f64 = 12.0;
/// Rings are added at this ratio inside and outside a pole: there it can be split off.
const BY_POLE: f64 = 1.1;
/// With tails below this nothing singular lies inside a ring.
const SOUND: f64 = 1e-9;
/// The first ring is made smaller until its tails are below this.
const CLEAN: f64 = 1e-12;
/// A form with tails below this is worth bringing to a smaller ring.
const HOLDS: f64 = 1e-3;
/// Times that the first ring may be made smaller.
pub(super) const FIRST: usize = 16;
/// After so many rings without a form it is asked whether the phase has a cut there.
const FAILURES: usize = 3;
/// The last first rings that are tried, relative to the least one.
const TIGHT: [f64; 3] = [1.0, 0.92, 0.86];
/// First fillings of a fold whose saddles are far apart.
const LOOSE: [f64; 2] = [0.6, 0.8];
/// Branch points must lie beyond this part of a ring.
const CLEAR: f64 = 1.05;
/// Rings on which poles outside them are split off, too.
const FAR_RINGS: usize = 3;
/// In nepers: what is this far from a cluster leaves no trace in its series.
pub(super) const UNSEEN: f64 = 45.0;
/// The smallest ring that is kept, relative to the largest.
const SMALLEST: f64 = 0.2;

/// Tails as small as this are rounding.
const NOISE: f64 = 1e-15;
/// A larger ring is worth its larger tail for expansions of up to so many orders.
const WORTH: i32 = 11;

/// A ring that was tried.
struct Trial {
    form: NormalForm,
    start: Start,
    /// The largest `|u_s|/R`.
    filling: f64,
    /// Poles that are split off, one bit each.
    split: u32,
    poles: Vec<Option<MappedPole>>,
    /// How far `f` at a pole outside the ring that is split off, too, is from `f` at the cluster; zero
    /// without one.
    beyond: f64,
}

impl Trial {
    fn new(form: NormalForm, given: &Given) -> Option<Trial> {
        let holds = |&z: &Complex64| form.preimage(z, ZERO).is_some_and(|v| v.norm() < CLEAR);
        if given.outside.iter().any(holds) {
            return None;
        }
        let map = |(pole, ascent): &(Pole, Vec<Complex64>)| MappedPole::new(&form, pole, ascent);
        let poles: Vec<Option<MappedPole>> = given.poles.iter().map(map).collect();
        let split = poles
            .iter()
            .enumerate()
            .fold(0, |bits, (n, pole)| bits | u32::from(pole.is_some()) << n);
        Trial::with_poles(form, given, split, poles)
    }

    fn with_poles(
        form: NormalForm,
        given: &Given,
        split: u32,
        poles: Vec<Option<MappedPole>>,
    ) -> Option<Trial> {
        let part = |u| poles.iter().flatten().map(|pole| pole.part(u)).sum();
        let start = Start::without(&form, given.amplitude, part)?;
        let filling =
            form.saddles_on_disc()[..form.saddles()].iter().fold(0.0f64, |m, s| m.max(s.norm()));
        Some(Trial { form, start, filling, split, poles, beyond: 0.0 })
    }

    /// The same with the poles at places that are better known: the part taken out on the ring must be the one
    /// that is added again.
    fn with_places(self, given: &Given, best: &[Option<MappedPole>]) -> Option<Trial> {
        let pairs = || self.poles.iter().zip(best);
        let moved = pairs().any(|(own, best)| match (own, best) {
            (Some(own), Some(best)) => (own.u - best.u).norm() > best.blur,
            _ => false,
        });
        if !moved {
            return Some(self);
        }
        let poles = pairs().map(|(own, best)| own.as_ref().and(best.clone())).collect();
        let placed = Trial::with_poles(self.form, given, self.split, poles)?;
        Some(Trial { beyond: self.beyond, ..placed })
    }

    fn shrunk(&self, factor: f64) -> Trial {
        Trial {
            form: self.form.shrunk(factor),
            start: self.start.shrunk(factor),
            filling: self.filling / factor,
            split: self.split,
            poles: self.poles.clone(),
            beyond: self.beyond,
        }
    }

    /// The largest `|Phi|` at a saddle.
    fn saddle_heights(&self) -> f64 {
        let saddles = self.form.saddles_on_disc();
        let heights = saddles[..self.form.saddles()].iter().map(|&v| self.form.unfolding_at(v));
        heights.fold(0.0, |most, height| most.max(height.norm()))
    }

    fn tail(&self) -> f64 {
        self.start.tail().max(self.form.tail())
    }

    /// The tail on the next larger ring, as far as can be seen; named poles can be split off there.
    fn foreseen_tail(&self) -> f64 {
        let start = if self.poles.is_empty() { self.start.foreseen_tail(RATIO) } else { 0.0 };
        start.max(self.form.foreseen_tail(RATIO))
    }
}

/// A ring that is kept.
#[derive(Clone)]
pub(crate) struct Ring {
    pub form: NormalForm,
    pub start: Start,
    pub orders: Orders,
    pub filling: f64,
    /// Poles that are split off, one bit each.
    pub split: u32,
    /// As in a trial.
    pub beyond: f64,
}

/// What a caller gave, as the series need it: the poles each with its steepest ascent.
pub(crate) struct Given<'a> {
    /// The least wavenumber: the scale that the heights of rings are measured on.
    pub least: f64,
    pub phase: &'a dyn Phase,
    pub amplitude: &'a dyn Amplitude,
    pub poles: &'a [(Pole, Vec<Complex64>)],
    /// Branch points of the amplitude, which must lie outside all rings.
    pub outside: &'a [Complex64],
}

/// The rings of one cluster or end point.
pub(super) struct Rings {
    /// A small ring for the topology.
    pub inner: NormalForm,
    pub list: Vec<Ring>,
    /// The poles where they are known best.
    pub poles: Vec<Option<MappedPole>>,
}

/// The rings for some saddles (none: an end point) round `centre`, the first one at about `reach` from it
/// but not below `least`. None if there is no normal form.
pub(super) fn rings(
    given: &Given,
    saddles: &[Complex64],
    centre: Complex64,
    (reach, least): (f64, f64),
) -> Option<Rings> {
    let phase = given.phase;
    let first = first_ring(given, saddles.len(), centre, reach, least)
        .or_else(|| first_ring_of_fold(given, saddles))?;
    let degree = first.form.degree() as i32;
    let height = |form: &NormalForm| form.radius().powi(degree);
    let low = (LOW / given.least / height(&first.form))
        .powf(1.0 / f64::from(degree))
        .max(first.filling / 0.8);
    let inner = if low < 1.0 { first.form.shrunk(low) } else { first.form.clone() };
    let mut trials = vec![first];
    for _ in 0..TRIED {
        let last = &trials[trials.len() - 1];
        // The last Taylor coefficients grow at least like this.
        let expected = last.form.tail() * RATIO.powi(KEPT as i32 * 3 / 4);
        let enough = height(&last.form) * given.least > LARGEST && last.filling < ROOMY;
        // Each order passes on less of the rounding on a larger ring, but not so much less.
        let no_gain = last.foreseen_tail() > last.tail().max(NOISE) * RATIO.powi(degree * WORTH);
        if enough || no_gain || expected > WORST_TAIL {
            break;
        }
        let Some(next) = last.form.resized(phase, RATIO).and_then(|form| Trial::new(form, given))
        else {
            break;
        };
        // Past a pole the tails may recover.
        let worse = next.tail() > WORST_TAIL && next.tail() > last.tail();
        if worse && (given.poles.is_empty() || next.form.tail() > WORST_TAIL) {
            break;
        }
        trials.push(next);
    }
    let largest = trials.last()?.form.radius();
    // Inwards everything is known already, unless something singular lies inside.
    trials.reverse();
    while let Some(last) = trials.last()
        && last.form.radius() / RATIO >= SMALLEST * largest
        && last.filling * RATIO < FILLING
    {
        let inwards = if last.tail() < SOUND {
            last.shrunk(1.0 / RATIO)
        } else {
            Trial::new(last.form.shrunk(1.0 / RATIO), given)?
        };
        trials.push(inwards);
    }
    trials.reverse();
    for index in 0..given.poles.len() {
        add_rings_by_pole(given, &mut trials, index);
    }
    add_rings_without_far_poles(given, &mut trials);
    let kept = |ring: &Trial| {
        // A large tail is a singularity inside: no figure could be trusted.
        ring.filling < FILLING
            && ring.tail() < WORST_TAIL
            && ring.form.radius() >= SMALLEST * largest
            && ring.poles.iter().flatten().all(|pole| pole.is_clear_of(&ring.form))
    };
    let trials: Vec<Trial> = trials.into_iter().filter(kept).collect();
    // The place of a pole is the same on every ring, known to different accuracy.
    let mut poles: Vec<Option<MappedPole>> = vec![None; given.poles.len()];
    for trial in &trials {
        for (pole, mapped) in poles.iter_mut().zip(&trial.poles) {
            if let Some(mapped) = mapped
                && pole.as_ref().is_none_or(|best| mapped.blur < best.blur)
            {
                *pole = Some(mapped.clone());
            }
        }
    }
    let list = trials
        .into_iter()
        .filter_map(|trial| trial.with_places(given, &poles))
        .map(|Trial { form, start, filling, split, beyond, .. }| Ring {
            orders: Orders::new(&form, &start),
            form,
            start,
            filling,
            split,
            beyond,
        })
        .collect();
    Some(Rings { inner, list, poles })
}

/// A ring close inside and one close outside the circle of a pole: on both it can be split off.
fn add_rings_by_pole(given: &Given, trials: &mut Vec<Trial>, index: usize) {
    let pole = &given.poles[index].0;
    let Some(largest) = trials.last() else { return };
    let Some(v) = largest.form.locate(pole.z) else { return };
    let place = v.norm() * largest.form.radius();
    for radius in [place / BY_POLE, place * BY_POLE] {
        let near = |ring: &Trial| (ring.form.radius() / radius - 1.0).abs() < 0.02;
        let Some(at) = trials.iter().position(|ring| ring.form.radius() > radius) else { continue };
        let outer = &trials[at];
        let factor = radius / outer.form.radius();
        if trials.iter().any(near) || outer.filling > FILLING * factor {
            continue;
        }
        if let Some(ring) = Trial::new(outer.form.shrunk(factor), given) {
            trials.insert(at, ring);
        }
    }
}

/// The same for two saddles so far apart that no circle round both serves.
fn first_ring_of_fold(given: &Given, saddles: &[Complex64]) -> Option<Trial> {
    let &[first, second] = saddles else { return None };
    LOOSE.into_iter().find_map(|filling| {
        let form = NormalForm::find_fold(given.phase, [first, second], filling)?;
        Trial::new(form, given)
    })
}

/// The largest rings once more without the poles outside them that a series at the least wavenumber would
/// notice.
fn add_rings_without_far_poles(given: &Given, trials: &mut Vec<Trial>) {
    let Some(largest) = trials.last() else { return };
    let mut beyond = f64::INFINITY;
    let mut poles = vec![None; given.poles.len()];
    for trial in trials.iter() {
        for (pole, mapped) in poles.iter_mut().zip(&trial.poles) {
            *pole = mapped.clone().or(pole.take());
        }
    }
    let spread = largest.saddle_heights();
    for (mapped, (pole, ascent)) in poles.iter_mut().zip(given.poles) {
        let distance = ((pole.value - largest.form.level()).norm() - spread).max(0.0);
        if mapped.is_none() && distance * given.least < UNSEEN {
            *mapped = far_pole(given.phase, &largest.form, pole, ascent);
            if mapped.is_some() {
                beyond = beyond.min(distance);
            }
        }
    }
    if !beyond.is_finite() {
        return;
    }
    let split =
        poles.iter().enumerate().fold(0, |bits, (n, pole)| bits | u32::from(pole.is_some()) << n);
    let first = trials.len().saturating_sub(FAR_RINGS);
    for index in first..trials.len() {
        let form = trials[index].form.clone();
        if let Some(mut trial) = Trial::with_poles(form, given, split, poles.clone()) {
            trial.beyond = beyond.max(f64::MIN_POSITIVE);
            trials.push(trial);
        }
    }
}

/// Whether the phase does not settle towards a point: across a cut through it values differ at any distance.
fn jumps(phase: &dyn Phase, centre: Complex64, reach: f64) -> bool {
    const POINTS: usize = 8;
    let spread = |reach: f64| {
        let value = |n: usize| {
            let angle = std::f64::consts::TAU * (n as f64 + 0.3) / POINTS as f64;
            phase.value(centre + Complex64::from_polar(reach, angle))
        };
        let first = value(0);
        (1..POINTS).map(|n| (value(n) - first).norm()).fold(0.0, f64::max)
    };
    spread(0.5 * reach) > 0.7 * spread(reach)
}

/// The first ring: smaller while there is no form or the tails are not negligible, larger while
/// the mapped saddles do not fit.
fn first_ring(
    given: &Given,
    saddles: usize,
    centre: Complex64,
    reach: f64,
    least: f64,
) -> Option<Trial> {
    let smaller = |ring: &Trial, factor: f64| {
        let holds = ring.tail() < HOLDS;
        holds.then(|| ring.form.resized(given.phase, 1.0 / factor)).flatten()
    };
    let mut reach = reach;
    let mut found: Option<Trial> = None;
    // Something singular close to a loose cluster leaves no room for more.
    let mut tight = TIGHT.iter().filter(|_| saddles > 1).map(|part| part * least);
    // A form that holds on a larger ring, brought to this one.
    let mut known: Option<NormalForm> = None;
    let mut failures = 0;
    for _ in 0..FIRST {
        if reach < least {
            match tight.next() {
                Some(next) if found.is_none() => reach = next,
                _ => break,
            }
        }
        let form = known.take().or_else(|| NormalForm::find(given.phase, saddles, centre, reach));
        failures = if form.is_some() { 0 } else { failures + 1 };
        if failures > FAILURES && jumps(given.phase, centre, reach) {
            break;
        }
        if let Some(ring) = form.and_then(|form| Trial::new(form, given)) {
            // A large wavenumber needs a small ring: the noise of the phase grows with its size.
            let excess = (ring.form.radius().powi(ring.form.degree() as i32) * given.least
                / INNERMOST)
                .powf(1.0 / ring.form.degree() as f64)
                .min(ROOMY / ring.filling.max(1e-3));
            if excess > 1.01 && reach / excess > least {
                reach /= excess;
                known = smaller(&ring, excess);
                continue;
            }
            let crowded = ring.filling * RATIO > FILLING;
            // Where the noise of the phase sets the tails a smaller ring is no better.
            let best = found.as_ref().map_or(f64::INFINITY, Trial::tail);
            let noisy = ring.tail() > 0.3 * best;
            let done = crowded || noisy || ring.tail() < CLEAN;
            if !done {
                known = smaller(&ring, RATIO);
            }
            if !noisy && (ring.filling < FILLING || found.is_none()) {
                found = Some(ring);
            }
            if done {
                break;
            }
        }
        reach /= RATIO;
    }
    found
}

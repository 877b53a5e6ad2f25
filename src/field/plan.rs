//! A plan: every decision about an integral that does not depend on the wavenumber.

use super::build::{Problem, attempt};
use crate::estimate::Form;
use crate::expansion::{
    AlgebraicSeries, Contribution, Known, Moments, NearEnd, Part, Pole, Series,
};
use crate::integral::{Amplitude, Integral, Phase, check_continuous};
use crate::ring::MAX_SADDLES;
use crate::saddles::Group;
use crate::{Error, Estimate, Scaled};
use num_complex::Complex64;
use std::ops::{Bound, RangeBounds};

/// The largest number of groups of saddles in a plan.
pub(super) const MAX_GROUPS: usize = 64;
/// The largest number of poles.
const MAX_POLES: usize = 32;
/// Groups with one bit a saddle: a tree of `n` saddles has at most `2 n - 1` groups.
const _: () = assert!(MAX_GROUPS <= 64);

/// The least wavenumber of a plan, if the caller names none.
const LEAST_K: f64 = 2.0;
/// How many nepers below the highest contribution nothing matters.
const NEPERS: f64 = 40.0;

/// How wide round the contour saddles are looked for, in units of its size: wider if the
/// certificate says that a contributing saddle is missing.
const MARGINS: [f64; 3] = [0.3, 1.0, 3.0];

/// A plan with a relative error figure above this at the greatest wavenumber is tried to be bettered.
const POOR: f64 = 1e-2;

/// Rounding, in nepers.
const ROUNDING: f64 = 36.0;

/// A group of saddles with its series, if it has one that could be followed.
pub(super) struct Node {
    pub series: Option<Series>,
    pub parts: Option<(usize, usize)>,
    /// Its series is known, or it needs none: too high or too low to matter.
    pub settled: bool,
    /// Its saddles, one bit for each entry of the plan's list.
    pub members: u64,
}

impl Node {
    pub fn new(group: &Group) -> Node {
        let members = group.members.iter().fold(0, |bits, m| bits | 1u64 << m);
        Node { series: None, parts: group.parts, settled: false, members }
    }
}

/// A finite end point: its own series, and what it is in the rings of clusters near it.
pub(super) struct End {
    pub at: Complex64,
    pub sign: f64,
    pub own: Option<Series>,
    pub near: Vec<NearEnd>,
}

impl End {
    /// Whether its own series is as good as can be from this wavenumber on, or as needed beside a contribution
    /// of the height `top`.
    pub fn is_sharp(&self, least: f64, top: f64) -> bool {
        let Some(own) = &self.own else { return false };
        let own = own.at(least, usize::MAX);
        own.is_sharp() || own.error.ln_norm() < least * top - ROUNDING
    }

    /// The form with the smaller error figure.
    fn at(
        &self,
        nodes: &[Node],
        k: f64,
        orders: usize,
        mut known: Option<&mut [[Known; BOUNDARIES]; NEAR]>,
    ) -> Contribution {
        let mut best = self.own.as_ref().map(|own| own.at(k, orders));
        for (index, near) in self.near.iter().enumerate() {
            // The incomplete integrals cost more: not where the plain series is as good as can be.
            if best.is_some_and(|b| b.is_sharp()) {
                break;
            }
            let known = known.as_mut().and_then(|known| known.get_mut(index));
            let known: &mut [Known] = known.map_or(&mut [], |known| known);
            let series = nodes[near.node].series.as_ref();
            let found = series.and_then(|series| near.at(series, k, orders, known));
            if let Some(found) = found.filter(|f| best.is_none_or(|b| below(f.error, b.error))) {
                best = Some(found);
            }
        }
        best.unwrap_or(Contribution::UNKNOWN)
    }
}

/// An algebraic end point: alone, and with one or two saddles near it (an index of their node).
pub(super) struct AlgebraicEnd {
    pub own: Option<AlgebraicSeries>,
    pub near: Vec<(usize, AlgebraicSeries)>,
}

impl AlgebraicEnd {
    /// The form with the smaller error figure.
    fn at(&self, k: f64, orders: usize) -> Contribution {
        let near = self.near.iter().map(|(_, series)| series);
        let all = self.own.iter().chain(near).map(|series| series.at(Part::End, k, orders));
        all.reduce(|a, b| if below(b.error, a.error) { b } else { a })
            .unwrap_or(Contribution::UNKNOWN)
    }
}

/// A saddle as the plan remembers it.
pub(super) struct Place {
    pub z: Complex64,
    /// `i f`.
    pub exponent: Complex64,
    /// `|g|`.
    pub weight: f64,
    /// The size of its leading term, without `g` and the power of `k`: the lower term at a Stokes line.
    /// Alone, with `k^(-1/2)`, and as one of a fold, .., butterfly, with `k^(-1/D)`, `D` = 3 to 6.
    pub spread: f64,
    pub together: [f64; MAX_SADDLES - 1],
}

impl Place {
    /// The size of its leading term: where saddles are merged each alone would seem too large.
    fn size(&self, k: f64) -> Scaled {
        let sizes = self.together.iter().zip(3i32..).map(|(w, d)| w * k.powf(-1.0 / f64::from(d)));
        let size = self.weight * sizes.fold(self.spread / k.sqrt(), f64::min);
        let size = if size.is_finite() { size } else { 0.0 };
        Scaled::exp(Complex64::new(k * self.exponent.re, 0.0)) * size
    }
}

/// A finite end of the contour that was too low to matter.
pub(super) struct LowEnd {
    pub z: Complex64,
    /// `Re(i f)`.
    pub height: f64,
    /// `|g|`, `|f'|` and `|f''|`.
    pub weight: f64,
    pub slope: f64,
    pub bend: f64,
}

impl LowEnd {
    /// What it may add: below the plan's range that counts.
    fn size(&self, k: f64) -> Scaled {
        let width = (2.0 * std::f64::consts::PI / (k * self.bend)).sqrt();
        let size = 3.0 * self.weight * width.min((k * self.slope).recip());
        Scaled::exp(Complex64::new(k * self.height, 0.0)) * size
    }
}

/// Everything about an integral that does not depend on the wavenumber: the saddles, their
/// groups with the uniform expansion of each, which of them the contour needs, and the error
/// figures' ingredients. Made by [`Integral::plan`]; calls of [`Plan::at`] allocate nothing, and a
/// plan may be shared between threads.
pub struct Plan {
    /// Parts before wholes.
    pub(super) nodes: Vec<Node>,
    pub(super) roots: Vec<usize>,
    pub(super) ends: Vec<End>,
    pub(super) low_ends: Vec<LowEnd>,
    pub(super) algebraic: Vec<AlgebraicEnd>,
    pub(super) poles: Vec<Pole>,
    pub(super) saddles: Vec<Place>,
    /// Nothing with `Re(i f)` below this was looked at.
    pub(super) floor: f64,
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// Finds the saddles, groups them, decides which contribute, and computes their expansions.
    ///
    /// Groups of two to five saddles near each other or merged (fold, cusp, swallowtail, butterfly:
    /// K = 1 to 4) have a uniform expansion; single saddles and finite end points have their own, an
    /// end point near a group its uniform form, and poles named by [`Integral::pole`] are split off.
    /// Where saddles are close both forms are kept, and each wavenumber takes the one with the smaller
    /// error figure. [`Plan::explain`] says what was found.
    ///
    /// Cost: about 3,000 evaluations of the phase for one group, more for several; no allocation
    /// afterwards.
    ///
    /// # Errors
    /// If the contour is malformed, the phase is not finite on it, or it could not be decided
    /// which saddles contribute. The yardstick `quadrature` needs no such decision.
    ///
    /// # Source
    /// C. Chester, B. Friedman, F. Ursell, Proc. Camb. Phil. Soc. 53 (1957) 599; DLMF 2.4(v).
    ///
    /// ```
    /// use merging_saddles::{Complex64, Contour, Integral};
    /// // Stirling: Gamma(k + 1) = k^(k+1) integral_0^inf exp(k (ln z - z)) dz (DLMF 5.9.1).
    /// let integral = Integral::new(
    ///     |z: Complex64| {
    ///         let minus_i = Complex64::new(0.0, -1.0);
    ///         ((z.ln() - z) * minus_i, (z.inv() - 1.0) * minus_i)
    ///     },
    ///     Contour::through([0.3, 1.0, 3.0].map(Complex64::from)),
    /// );
    /// let u = integral.plan()?.at(10.0)?;
    /// let factorial = u.value.re * 10f64.powi(11);
    /// assert!((factorial - 3628800.0).abs() < 1e-6); // 10!
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn plan(&self) -> Result<Plan, Error> {
        self.plan_for(LEAST_K..)
    }

    /// A plan for the wavenumbers of a range ([`Integral::plan`]: from 2 on). A narrow range makes a
    /// cheaper plan, `k..=k` the cheapest.
    ///
    /// Contributions that are 40 nepers or more below the highest at the least `k` are left out: a
    /// larger one asks less of the phase, which need not be analytic as far down the valleys; so are finite
    /// ends of the contour that lie as low. Saddles are kept together only, or apart only, where the range
    /// allows no doubt which is better. Outside its range a plan still answers, and its error figure says what
    /// may be missing.
    ///
    /// # Errors
    /// As [`Integral::plan`], and if the range's ends are not finite numbers above zero (an open upper
    /// end is allowed).
    pub fn plan_for(&self, range: impl RangeBounds<f64>) -> Result<Plan, Error> {
        let end = |bound: Bound<&f64>, open: f64| match bound {
            Bound::Included(&k) | Bound::Excluded(&k) => k,
            Bound::Unbounded => open,
        };
        let least = end(range.start_bound(), LEAST_K);
        let greatest = end(range.end_bound(), f64::INFINITY);
        Error::require_positive("least wavenumber of the range", least)?;
        if greatest.is_nan() || greatest < least {
            let remedy = "give a range whose end is not below its start";
            return Err(Error::domain("greatest wavenumber of the range", greatest, remedy));
        }
        self.contour().check()?;
        self.check_powers()?;
        for &z in self.contour().points() {
            let (f, df) = self.phase().value_and_derivative(z);
            if !(f.re.is_finite() && f.im.is_finite() && df.re.is_finite() && df.im.is_finite()) {
                return Err(Error::NotFinite { what: "phase", at: z });
            }
        }
        check_continuous(self.phase(), self.contour())?;
        for &z in self.poles() {
            if !(z.re.is_finite() && z.im.is_finite()) {
                return Err(Error::Domain { what: "pole", value: z, remedy: "name finite places" });
            }
            // Its ascent starts there.
            let f = self.phase().value(z);
            if !(f.re.is_finite() && f.im.is_finite()) {
                return Err(Error::NotFinite { what: "phase", at: z });
            }
        }
        if self.poles().len() > MAX_POLES {
            let count = self.poles().len() as f64;
            return Err(Error::domain("number of poles", count, "name at most 32, the nearest"));
        }
        let problem = Problem {
            phase: self.phase(),
            amplitude: self.amplitude_ref(),
            contour: self.contour(),
            poles: self.poles(),
            powers: self.powers(),
            drop: NEPERS / least,
            wavenumbers: (least, greatest),
        };
        // Saddles next to the region may spoil the expansions of those inside: then its best plan.
        let figure = |plan: &Plan| {
            let top = plan.at(greatest).map(|u| u.relative_error);
            if greatest.is_finite() { top.unwrap_or(f64::INFINITY) } else { 0.0 }
        };
        let mut best: Option<(f64, Plan)> = None;
        let mut last = None;
        for margin in MARGINS {
            match attempt(&problem, margin) {
                Ok(plan) => {
                    let figure = figure(&plan);
                    if figure < POOR {
                        return Ok(plan);
                    }
                    if best.as_ref().is_none_or(|best| figure < best.0) {
                        best = Some((figure, plan));
                    }
                }
                Err(error) => last = Some(error),
            }
        }
        match best {
            Some((_, plan)) => Ok(plan),
            None => Err(last.expect("at least one attempt was made")),
        }
    }
}

/// Whether a group is settled as a whole or by its parts.
pub(super) fn decided(nodes: &[Node], index: usize) -> bool {
    let node = &nodes[index];
    node.settled || node.parts.is_some_and(|(a, b)| decided(nodes, a) && decided(nodes, b))
}

impl Plan {
    /// The integral at wavenumber `k`, with as many orders as lower the error figure.
    ///
    /// # Errors
    /// If `k` is not a finite number above zero, or no digit of the answer is certain.
    pub fn at(&self, k: f64) -> Result<Estimate, Error> {
        self.at_orders(k, usize::MAX)
    }

    /// The same with at most `orders` orders of each expansion (1: leading order only).
    ///
    /// # Errors
    /// As [`Plan::at`], and if `orders` is zero.
    pub fn at_orders(&self, k: f64, orders: usize) -> Result<Estimate, Error> {
        Plan::check(k, orders)?;
        let (total, form) = self.total(k, orders, None);
        finish(&total, total.size, form, k)
    }

    /// Refuses wavenumbers and numbers of orders that mean nothing.
    pub(super) fn check(k: f64, orders: usize) -> Result<(), Error> {
        Error::require_positive("wavenumber k", k)?;
        if orders == 0 {
            return Err(Error::domain("orders", 0.0, "keep one order or more"));
        }
        Ok(())
    }

    /// The sum of all contributions, without a judgement; `shared` holds the canonical integrals for
    /// other amplitudes on the same rings.
    pub(super) fn total(
        &self,
        k: f64,
        orders: usize,
        mut shared: Option<&mut Shared>,
    ) -> (Contribution, Form) {
        let mut total = Contribution::NONE;
        for (index, end) in self.ends.iter().enumerate() {
            let known = shared.as_mut().and_then(|shared| shared.ends.get_mut(index));
            total = total.and(&end.at(&self.nodes, k, orders, known));
        }
        for end in &self.algebraic {
            total = total.and(&end.at(k, orders));
        }
        for pole in self.poles.iter().filter(|pole| pole.crossings != 0) {
            total = total.and(&pole.at(k));
        }
        let mut best = [Choice::NONE; MAX_GROUPS];
        for (index, node) in self.nodes.iter().enumerate() {
            let parts =
                node.parts.filter(|&(a, b)| decided(&self.nodes, a) && decided(&self.nodes, b));
            let parts = parts.map(|(a, b)| best[a].and(&best[b]));
            let own = node.series.as_ref().map(|series| {
                if !series.contributes() {
                    return Choice::NONE;
                }
                Choice {
                    part: match &mut shared {
                        Some(shared) => series.summed(k, orders, shared.moments(index, series, k)),
                        None => series.at(k, orders),
                    },
                    clusters: 1,
                    largest: series.saddles(),
                    as_whole: true,
                }
            });
            let whole = self
                .beside_an_end(index, k, orders)
                .into_iter()
                .chain(own)
                .reduce(|a, b| if below(b.part.error, a.part.error) { b } else { a });
            best[index] = match (whole, parts) {
                (Some(whole), Some(parts)) if below(parts.part.error, whole.part.error) => parts,
                (Some(whole), _) => whole,
                (None, Some(parts)) => parts,
                (None, None) => Choice::NONE,
            };
        }
        let mut clusters = 0;
        let mut largest = 0;
        for &root in &self.roots {
            total = total.and(&best[root].part);
            clusters += best[root].clusters;
            largest = largest.max(best[root].largest);
            self.add_lower(root, &best, k, &mut total);
        }
        total.error = total.error + Scaled::exp(Complex64::new(k * self.floor, 0.0));
        for end in &self.low_ends {
            total.error = total.error + end.size(k);
        }
        let form = if clusters > 0 { Form::Saddles { clusters, largest } } else { Form::EndPoints };
        (total, form)
    }

    /// What a group adds, by the rings about an algebraic end near it.
    fn beside_an_end(&self, node: usize, k: f64, orders: usize) -> Option<Choice> {
        let ends = self.algebraic.iter().flat_map(|end| &end.near);
        let found = ends.filter(|(index, _)| *index == node).map(|(_, series)| {
            if series.is_plain() {
                return Choice::NONE;
            }
            let part = series.at(Part::Saddles, k, orders);
            Choice { part, clusters: 1, largest: series.saddles(), as_whole: true }
        });
        found.reduce(|a, b| if below(b.part.error, a.part.error) { b } else { a })
    }

    /// Adds to the error what lies on the far side of a Stokes line close by: there the term of a
    /// lower saddle is being switched on (M. V. Berry, Proc. R. Soc. Lond. A 422 (1989) 7), by
    /// `erfc(-s)/2`, `s = Im F/sqrt(2 Re F)`, `F` the difference of the exponents.
    fn add_lower(
        &self,
        index: usize,
        best: &[Choice; MAX_GROUPS],
        k: f64,
        total: &mut Contribution,
    ) {
        let node = &self.nodes[index];
        if !best[index].as_whole {
            if let Some((a, b)) = node.parts.filter(|_| best[index].clusters > 0) {
                self.add_lower(a, best, k, total);
                self.add_lower(b, best, k, total);
            }
            return;
        }
        for (other, lower) in self.saddles.iter().enumerate() {
            if node.members >> other & 1 == 1 {
                continue;
            }
            let near = self.saddles.iter().enumerate().any(|(own, upper)| {
                let f = (upper.exponent - lower.exponent) * k;
                node.members >> own & 1 == 1
                    && (1.0..45.0).contains(&f.re)
                    && f.im.abs() < 3.0 * (2.0 * f.re).sqrt()
            });
            if near {
                let size = lower.size(k);
                // Being switched on it shows in the upper's late terms: no more than those are in doubt.
                let own = best[index].part.error;
                let size = if below(own, size) { own } else { size };
                total.error = total.error + size;
            }
        }
    }
}

/// How a group is best summed at one wavenumber.
#[derive(Clone, Copy)]
struct Choice {
    part: Contribution,
    clusters: usize,
    largest: usize,
    as_whole: bool,
}

impl Choice {
    const NONE: Choice =
        Choice { part: Contribution::NONE, clusters: 0, largest: 0, as_whole: false };

    fn and(&self, other: &Choice) -> Choice {
        Choice {
            part: self.part.and(&other.part),
            clusters: self.clusters + other.clusters,
            largest: self.largest.max(other.largest),
            as_whole: false,
        }
    }
}

/// Whether one error is below another.
pub(super) fn below(a: Scaled, b: Scaled) -> bool {
    a.ln_norm() < b.ln_norm()
}

/// Groups near one end and rings of each whose incomplete integrals are kept.
const NEAR: usize = 3;
const BOUNDARIES: usize = 12;

/// Canonical integrals at one wavenumber, as far as they have been asked for: by node the complete ones,
/// by end, group and ring the incomplete ones.
pub(super) struct Shared {
    nodes: [Option<Option<Moments>>; MAX_GROUPS],
    ends: [[[Known; BOUNDARIES]; NEAR]; 2],
}

impl Shared {
    pub fn new() -> Shared {
        Shared { nodes: [None; MAX_GROUPS], ends: [[[None; BOUNDARIES]; NEAR]; 2] }
    }

    fn moments(&mut self, node: usize, series: &Series, k: f64) -> &Option<Moments> {
        self.nodes[node].get_or_insert_with(|| series.moments(k))
    }
}

/// Refuses what has no correct digit: an error as large as all contributions together, whose size is
/// about `size`.
pub(super) fn finish(
    total: &Contribution,
    size: Scaled,
    form: Form,
    k: f64,
) -> Result<Estimate, Error> {
    let finite = total.value.is_finite() && total.error.is_finite();
    if !finite || (!size.is_zero() && !below(total.error, size)) {
        return Err(Error::Undecided {
            reason: format!("at k = {k} the expansion's error figure is as large as its value"),
            remedy: "use `quadrature` at this wavenumber",
        });
    }
    Ok(Estimate::new(total.value, total.error, total.orders, form))
}

//! A plan: every decision about an integral that does not depend on the wavenumber.

use crate::estimate::Form;
use crate::expansion::{Contribution, LARGEST_CLUSTER, Series};
use crate::integral::{Amplitude, Integral, Phase, Termination};
use crate::saddles::{DROP, Group, Region, Saddle, Topology, Tree, locate};
use crate::{Error, Estimate, Scaled};
use num_complex::Complex64;

/// The largest number of groups of saddles in a plan.
const MAX_GROUPS: usize = 64;
/// Groups with one bit a saddle: a tree of `n` saddles has at most `2 n - 1` groups.
const _: () = assert!(MAX_GROUPS <= 64);

/// How wide round the contour saddles are looked for, in units of its size: wider if the
/// certificate says that a contributing saddle is missing.
const MARGINS: [f64; 3] = [0.3, 1.0, 3.0];
/// Quarterings before a count of no saddle is believed: a pole of the phase counts against one.
const FINEST: u32 = 2;

/// A group of saddles with its series, if it has one that could be followed.
struct Node {
    series: Option<Series>,
    parts: Option<(usize, usize)>,
    /// Its series is known, or it needs none: too high or too low to matter.
    settled: bool,
    /// Its saddles, one bit for each entry of the plan's list.
    members: u64,
}

impl Node {
    fn new(group: &Group) -> Node {
        let members = group.members.iter().fold(0, |bits, m| bits | 1u64 << m);
        Node { series: None, parts: group.parts, settled: false, members }
    }
}

/// Everything about an integral that does not depend on the wavenumber: the saddles, their
/// groups with the uniform expansion of each, which of them the contour needs, and the error
/// figures' ingredients. Made by [`Integral::plan`]; calls of [`Plan::at`] allocate nothing, and a
/// plan may be shared between threads.
pub struct Plan {
    /// Parts before wholes.
    nodes: Vec<Node>,
    roots: Vec<usize>,
    ends: Vec<Series>,
    /// `i f` at every saddle, and the size of its leading term without the power of `k`: the lower
    /// term at a Stokes line.
    saddles: Vec<(Complex64, f64)>,
    /// The greatest `Re(i f)` that contributes; nothing below `top - DROP` was looked at.
    top: f64,
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// Finds the saddles, groups them, decides which contribute, and computes their expansions.
    ///
    /// Groups of up to two saddles (a fold, K = 1) have a uniform expansion; single saddles and
    /// finite end points have their own. Where saddles are close both forms are kept, and each
    /// wavenumber takes the one with the smaller error figure. Three or more merging saddles, a
    /// finite end near a saddle, and poles or branch points of `f` or `g` near a saddle are not
    /// covered: the error figure says so, or the plan is refused.
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
        self.contour().check()?;
        for &z in self.contour().points() {
            let (f, df) = self.phase().value_and_derivative(z);
            if !(f.re.is_finite() && f.im.is_finite() && df.re.is_finite() && df.im.is_finite()) {
                return Err(Error::NotFinite { what: "phase", at: z });
            }
        }
        let mut last = None;
        for (margin, finest) in MARGINS.into_iter().zip(FINEST..) {
            match attempt(self.phase(), self.amplitude_ref(), self.contour(), margin, finest) {
                Ok(plan) => return Ok(plan),
                Err(error) => last = Some(error),
            }
        }
        Err(last.expect("at least one attempt was made"))
    }
}

fn undecided(reason: impl Into<String>) -> Error {
    Error::Undecided {
        reason: reason.into(),
        remedy: "use `quadrature` for this integral, or give a contour closer to the saddles",
    }
}

fn attempt(
    phase: &dyn Phase,
    amplitude: &dyn Amplitude,
    contour: &crate::Contour,
    margin: f64,
    finest: u32,
) -> Result<Plan, Error> {
    let region = Region::around(contour.points(), margin);
    let saddles = locate(phase, region, finest)?;
    let size = region.size();
    let topology = Topology::new(phase, contour, &saddles);

    let mut ends = Vec::new();
    let mut reach = Reach { top: f64::NEG_INFINITY, lowest: f64::INFINITY };
    let points = contour.points();
    for (at, sign, termination) in
        [(points[0], 1.0, contour.start()), (points[points.len() - 1], -1.0, contour.end())]
    {
        if termination == Termination::Finite {
            let near = saddles.iter().map(|s| (s.z - at).norm()).fold(size, f64::min);
            let series = Series::new(phase, amplitude, 0, at, (0.3 * near, 1e-6 * size))
                .ok_or_else(|| {
                    undecided(format!("the end point {at} is too close to a saddle or singularity"))
                })?;
            let f = phase.value(at);
            reach.include(height(f), topology.turned_height(f));
            ends.push(series.with_sign(sign));
        }
    }

    let tree = Tree::new(phase, &saddles, LARGEST_CLUSTER);
    if tree.groups.len() > MAX_GROUPS || saddles.len() > MAX_GROUPS {
        return Err(undecided(format!("{} saddles near the contour are too many", saddles.len())));
    }
    let nodes = resolve(phase, amplitude, &topology, &tree, &saddles, &mut reach, size)?;
    let top = reach.top;
    let mut plan = Plan { nodes, roots: tree.roots, ends, saddles: Vec::new(), top };
    let lowest = if reach.lowest.is_finite() { reach.lowest } else { topology.bottom() };
    certify(&plan, &topology, lowest - DROP)?;
    for saddle in &saddles {
        let [_, _, second] = phase.jet(saddle.z);
        let weight = amplitude.value(saddle.z).norm()
            * (2.0 * std::f64::consts::PI / second.norm().max(1e-3)).sqrt();
        let h = Complex64::new(0.0, 1.0) * saddle.value;
        plan.saddles.push((h, if weight.is_finite() { weight } else { 0.0 }));
    }
    Ok(plan)
}

/// `Re(i f)`.
fn height(f: Complex64) -> f64 {
    -f.im
}

/// What has been found to contribute so far.
struct Reach {
    /// The greatest `Re(i f)`.
    top: f64,
    /// The least height in the topology's turned exponent.
    lowest: f64,
}

impl Reach {
    fn include(&mut self, height: f64, turned: f64) {
        self.top = self.top.max(height);
        self.lowest = self.lowest.min(turned);
    }
}

/// Series and multiplicities of all groups, from the highest downwards.
fn resolve(
    phase: &dyn Phase,
    amplitude: &dyn Amplitude,
    topology: &Topology,
    tree: &Tree,
    saddles: &[Saddle],
    reach: &mut Reach,
    size: f64,
) -> Result<Vec<Node>, Error> {
    let highest = |g: &Group| {
        g.members.iter().map(|&m| height(saddles[m].value)).fold(f64::NEG_INFINITY, f64::max)
    };
    let lowest = |g: &Group| {
        let heights = g.members.iter().map(|&m| topology.turned_height(saddles[m].value));
        heights.fold(f64::INFINITY, f64::min)
    };
    let mut nodes: Vec<Node> = tree.groups.iter().map(Node::new).collect();
    let mut order: Vec<usize> = (0..tree.groups.len()).collect();
    order.sort_by(|&a, &b| highest(&tree.groups[b]).total_cmp(&highest(&tree.groups[a])));
    for index in order {
        let group = &tree.groups[index];
        if topology.above(lowest(group)) || highest(group) < reach.top - DROP {
            nodes[index].settled = true;
            continue;
        }
        let gap = if group.gap.is_finite() { group.gap } else { size };
        let Some(series) = Series::new(
            phase,
            amplitude,
            group.members.len(),
            group.centre,
            ((1.5 * group.radius).max(0.3 * gap), 1.2 * group.radius),
        ) else {
            continue;
        };
        let Some(m) = topology.multiplicities(series.form()) else {
            continue;
        };
        let series = series.with_multiplicities(m);
        if series.contributes() {
            reach.include(highest(group), lowest(group));
        }
        nodes[index].series = Some(series);
        nodes[index].settled = true;
    }
    // Every root must be decided, as a whole or by its parts.
    for &root in &tree.roots {
        if !decided(&nodes, root) {
            return Err(undecided(format!(
                "no normal form or no clear ridge for the saddles near {:.4}",
                tree.groups[root].centre
            )));
        }
    }
    Ok(nodes)
}

/// Whether a group is settled as a whole or by its parts.
fn decided(nodes: &[Node], index: usize) -> bool {
    let node = &nodes[index];
    node.settled || node.parts.is_some_and(|(a, b)| decided(nodes, a) && decided(nodes, b))
}

/// The certificate for the finest level that is known, then for each group against its parts.
fn certify(plan: &Plan, topology: &Topology, floor: f64) -> Result<(), Error> {
    let valleys = |series: &Series| {
        if series.contributes() {
            topology.valleys(series.form(), series.multiplicities(), floor)
        } else {
            Some(Vec::new())
        }
    };
    let mut all = Vec::new();
    let mut missing = false;
    let mut stack = plan.roots.clone();
    while let Some(index) = stack.pop() {
        let node = &plan.nodes[index];
        match node.parts {
            Some((a, b)) if decided(&plan.nodes, a) && decided(&plan.nodes, b) => {
                stack.extend([a, b])
            }
            _ => match node.series.as_ref().map(valleys) {
                Some(Some(list)) => all.extend(list),
                Some(None) => missing = true,
                None => {}
            },
        }
    }
    if missing || !topology.closes(&all, floor) {
        return Err(undecided("the contributions found do not join the two ends of the contour"));
    }
    Ok(())
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
        Error::require_positive("wavenumber k", k)?;
        if orders == 0 {
            return Err(Error::domain("orders", 0.0, "keep one order or more"));
        }
        let mut total = Contribution::NONE;
        for end in &self.ends {
            total = total.and(&end.at(k, orders));
        }
        let mut best = [Choice::NONE; MAX_GROUPS];
        for (index, node) in self.nodes.iter().enumerate() {
            let parts =
                node.parts.filter(|&(a, b)| decided(&self.nodes, a) && decided(&self.nodes, b));
            let parts = parts.map(|(a, b)| best[a].and(&best[b]));
            let whole = node.series.as_ref().map(|series| {
                if !series.contributes() {
                    return Choice::NONE;
                }
                Choice {
                    part: series.at(k, orders),
                    clusters: 1,
                    largest: series.saddles(),
                    as_whole: true,
                }
            });
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
        total.error = total.error + Scaled::exp(Complex64::new(k * (self.top - DROP), 0.0));
        let form = if clusters > 0 { Form::Saddles { clusters, largest } } else { Form::EndPoints };
        finish(total, form, k)
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
        for (other, &(lower, weight)) in self.saddles.iter().enumerate() {
            if node.members >> other & 1 == 1 {
                continue;
            }
            let near = self.saddles.iter().enumerate().any(|(own, &(upper, _))| {
                let f = (upper - lower) * k;
                node.members >> own & 1 == 1
                    && (1.0..45.0).contains(&f.re)
                    && f.im.abs() < 3.0 * (2.0 * f.re).sqrt()
            });
            if near {
                let size = Scaled::exp(Complex64::new(k * lower.re, 0.0)) * (weight / k.sqrt());
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
fn below(a: Scaled, b: Scaled) -> bool {
    a.ln_norm() < b.ln_norm()
}

fn finish(total: Contribution, form: Form, k: f64) -> Result<Estimate, Error> {
    if !total.value.is_finite() || !total.error.is_finite() {
        return Err(Error::NoDigits {
            what: "the expansion",
            value: Complex64::new(k, 0.0),
            digits: 0.0,
            remedy: "use `quadrature` at this wavenumber",
        });
    }
    Ok(Estimate::new(total.value, total.error, total.orders, form))
}

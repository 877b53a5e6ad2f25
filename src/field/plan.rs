//! A plan: every decision about an integral that does not depend on the wavenumber.

use crate::estimate::Form;
use crate::expansion::{Contribution, LARGEST_CLUSTER, Series};
use crate::integral::{Amplitude, Integral, Phase, Termination};
use crate::saddles::{DROP, Group, Region, Saddle, Topology, Tree, locate};
use crate::{Error, Estimate, Scaled};
use num_complex::Complex64;

/// The largest number of groups of saddles in a plan.
const MAX_GROUPS: usize = 64;

/// How wide round the contour saddles are looked for, in units of its size: wider if the
/// certificate says that a contributing saddle is missing.
const MARGINS: [f64; 3] = [0.3, 1.0, 3.0];
/// Quarterings before a count of no saddle is believed: a pole of the phase counts against one.
const FINEST: u32 = 2;

/// A group of saddles with its series, if it has one that could be followed.
struct Node {
    series: Option<Series>,
    parts: Option<(usize, usize)>,
}

/// Everything about an integral that does not depend on the wavenumber; see
/// [`Integral::plan`].
pub struct Plan {
    /// Parts before wholes.
    nodes: Vec<Node>,
    roots: Vec<usize>,
    ends: Vec<Series>,
    /// `i f` at every saddle that may matter at a Stokes line, and the size of its leading term
    /// without the power of `k`.
    saddles: Vec<(Complex64, f64)>,
    /// The greatest `Re(i f)` that contributes; nothing below `top - DROP` was looked at.
    top: f64,
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// Finds the saddles, groups them, decides which contribute, and computes their series.
    ///
    /// # Errors
    /// If the contour is malformed, the phase is not finite on it, or it could not be decided
    /// which saddles contribute.
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

    let tree = Tree::new(&saddles, LARGEST_CLUSTER);
    if tree.groups.len() > MAX_GROUPS {
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
        if weight.is_finite() && h.re < top + 0.1 * DROP {
            plan.saddles.push((h, weight));
        }
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
    let mut nodes: Vec<Node> =
        tree.groups.iter().map(|g| Node { series: None, parts: g.parts }).collect();
    let mut order: Vec<usize> = (0..tree.groups.len()).collect();
    order.sort_by(|&a, &b| highest(&tree.groups[b]).total_cmp(&highest(&tree.groups[a])));
    let mut passed = vec![false; nodes.len()];
    for index in order {
        let group = &tree.groups[index];
        if topology.above(lowest(group)) || highest(group) < reach.top - DROP {
            passed[index] = true;
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
        let Some(m) = topology.multiplicities(series.form()) else { continue };
        let series = series.with_multiplicities(m);
        if series.contributes() {
            reach.include(highest(group), lowest(group));
        }
        nodes[index].series = Some(series);
        passed[index] = true;
    }
    // Every root must be decided, as a whole or by its parts.
    fn decided(index: usize, nodes: &[Node], passed: &[bool]) -> bool {
        passed[index]
            || nodes[index]
                .parts
                .is_some_and(|(a, b)| decided(a, nodes, passed) && decided(b, nodes, passed))
    }
    for &root in &tree.roots {
        if !decided(root, &nodes, &passed) {
            return Err(undecided(format!(
                "no normal form or no clear ridge for the saddles near {:.4}",
                tree.groups[root].centre
            )));
        }
    }
    Ok(nodes)
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
            Some((a, b)) if plan.known(a) && plan.known(b) => stack.extend([a, b]),
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
    /// Whether a group or its parts have been decided (those far above or below count as such).
    fn known(&self, index: usize) -> bool {
        let node = &self.nodes[index];
        node.series.is_some() || node.parts.is_none_or(|(a, b)| self.known(a) && self.known(b))
    }

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
        let mut total = Total::default();
        for end in &self.ends {
            total.add(end.at(k, orders), 0);
        }
        let mut chosen = [(Contribution::NONE, 0usize, 0usize); MAX_GROUPS];
        for (index, node) in self.nodes.iter().enumerate() {
            let whole = match &node.series {
                Some(series) if series.contributes() => {
                    Some((series.at(k, orders), 1, series.saddles()))
                }
                Some(_) => Some((Contribution::NONE, 0, 0)),
                None => None,
            };
            let parts =
                node.parts.filter(|&(a, b)| self.known(a) && self.known(b)).map(|(a, b)| {
                    let ((x, n, large), (y, m, larger)) = (chosen[a], chosen[b]);
                    let sum = Contribution {
                        value: x.value + y.value,
                        error: x.error + y.error,
                        orders: x.orders.max(y.orders),
                    };
                    (sum, n + m, large.max(larger))
                });
            chosen[index] = match (whole, parts) {
                (Some(a), Some(b)) if smaller(b.0.error, a.0.error) => b,
                (Some(a), _) => a,
                (None, Some(b)) => b,
                (None, None) => (Contribution::NONE, 0, 0),
            };
        }
        for &root in &self.roots {
            let (contribution, clusters, largest) = chosen[root];
            total.add(contribution, clusters);
            total.largest = total.largest.max(largest);
        }
        total.finish(self.neglected(k), k)
    }

    /// What lies below the floor, and the lower term at a Stokes line.
    fn neglected(&self, k: f64) -> Scaled {
        let mut sum = Scaled::exp(Complex64::new(k * (self.top - DROP), 0.0));
        for &(lower, weight) in &self.saddles {
            let near = self.saddles.iter().any(|&(upper, _)| {
                let f = (upper - lower) * k;
                f.re > 2.0 && f.im.abs() < 3.0 * (2.0 * f.re).sqrt()
            });
            if near && k * (self.top - lower.re) < 40.0 {
                sum = sum + Scaled::exp(Complex64::new(k * lower.re, 0.0)) * (weight / k.sqrt());
            }
        }
        sum
    }
}

fn smaller(a: Scaled, b: Scaled) -> bool {
    a.ln_norm() < b.ln_norm()
}

/// The sum of all contributions.
struct Total {
    value: Scaled,
    error: Scaled,
    orders: usize,
    clusters: usize,
    largest: usize,
}

impl Default for Total {
    fn default() -> Self {
        Total { value: Scaled::ZERO, error: Scaled::ZERO, orders: 0, clusters: 0, largest: 0 }
    }
}

impl Total {
    fn add(&mut self, part: Contribution, clusters: usize) {
        self.value = self.value + part.value;
        self.error = self.error + part.error;
        self.orders = self.orders.max(part.orders);
        self.clusters += clusters;
    }

    fn finish(self, neglected: Scaled, k: f64) -> Result<Estimate, Error> {
        let form = if self.clusters > 0 {
            Form::Saddles { clusters: self.clusters, largest: self.largest }
        } else {
            Form::EndPoints
        };
        let error = self.error + neglected;
        let estimate = Estimate::new(self.value, error, self.orders, form);
        if !self.value.is_finite() || !error.is_finite() {
            return Err(Error::NoDigits {
                what: "the expansion",
                value: Complex64::new(k, 0.0),
                digits: 0.0,
                remedy: "use `quadrature` at this wavenumber",
            });
        }
        Ok(estimate)
    }
}

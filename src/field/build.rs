//! How a plan is made: location, grouping, expansions, topology, certificate.

use super::algebraic::{algebraic_ends, branches, on_sheets};
use super::plan::{End, LowEnd, MAX_GROUPS, Node, Place, Plan, decided};
use crate::Error;
use crate::expansion::{Given, NearEnd, Pole, Powered, Series};
use crate::integral::{Amplitude, Contour, Phase, Termination};
use crate::ring::MAX_SADDLES;
use crate::saddles::{Certificate, Group, Region, Saddle, Sheeting, Topology, Tree, locate_few};
use num_complex::Complex64;
use std::collections::HashMap;

pub(super) fn undecided(reason: impl Into<String>) -> Error {
    Error::Undecided {
        reason: reason.into(),
        remedy: "use `quadrature` for this integral, `plan_for` a narrower range of wavenumbers, or give a \
                 contour closer to the saddles",
    }
}

/// The neighbourhood of the contour, in units of its size.
const HOME: f64 = 0.3;

/// The saddle that an end point needs may lie beyond it, at about Newton's distance: so many times that are
/// searched, for an end too low to matter once.
const BEYOND_AN_END: f64 = 2.5;
const BEYOND_A_LOW_END: f64 = 1.5;

/// An integral without its types.
pub(super) struct Problem<'a> {
    pub phase: &'a dyn Phase,
    pub amplitude: &'a dyn Amplitude,
    pub contour: &'a Contour,
    pub poles: &'a [Complex64],
    /// Exponents `lambda` at the two ends.
    pub powers: [f64; 2],
    /// How far below the highest contribution something may lie and still matter.
    pub drop: f64,
    /// The least and the greatest wavenumber.
    pub wavenumbers: (f64, f64),
}

/// One attempt: saddles are looked for within `margin` of the contour.
pub(super) fn attempt(problem: &Problem, margin: f64) -> Result<Plan, Error> {
    let Problem { phase, contour, powers, drop, .. } = *problem;
    let topology = Topology::new(phase, contour, drop);
    let points = contour.points();
    let ends = [points[0], points[points.len() - 1]];
    let finite = [contour.start(), contour.end()].map(|end| end == Termination::Finite);
    let mut reached = points.to_vec();
    let mut matters = finite;
    for (end, &z) in ends.iter().enumerate().filter(|&(end, _)| finite[end]) {
        // An end far below the contour is likely too low to matter, like one in a valley.
        matters[end] = powers[end] != 1.0 || !topology.is_low(z);
        let beyond = if matters[end] { BEYOND_AN_END } else { BEYOND_A_LOW_END };
        let [_, slope, bend] = phase.jet(z);
        let longest = points.iter().map(|p| (p - z).norm()).fold(0.0, f64::max);
        let far = (beyond * slope.norm() / bend.norm()).min(4.0 * longest);
        if far.is_finite() {
            let corner = Complex64::new(far, far);
            reached.extend([z - corner, z + corner]);
        }
    }
    let region = Region::around(&reached, margin);
    let saddles = locate_few(phase, region, MAX_GROUPS)?;
    let topology = topology.with_saddles(&saddles);
    let mut known = Known::new();
    loop {
        let place =
            Located { topology: &topology, saddles: &saddles, size: region.size(), matters };
        match assemble(problem, &place, &mut known)? {
            Found::Plan(plan) => return Ok(*plan),
            Found::EndMatters(end) => matters[end] = true,
        }
    }
}

/// The saddles, the descents from the ends of the contour, and which ends may contribute.
struct Located<'a> {
    topology: &'a Topology<'a>,
    saddles: &'a [Saddle],
    /// Of the region that was searched.
    size: f64,
    matters: [bool; 2],
}

/// What is made of them.
enum Found {
    Plan(Box<Plan>),
    /// An end of the contour is not as low as it was thought to be.
    EndMatters(usize),
}

/// The series of groups that have been looked at, by their saddles: none for some.
type Known = HashMap<u64, Option<Series>>;

fn assemble(problem: &Problem, place: &Located, known: &mut Known) -> Result<Found, Error> {
    let Problem { phase, amplitude, contour, drop, .. } = *problem;
    let Located { topology, saddles, size, matters } = *place;
    let least = problem.wavenumbers.0;
    let points = contour.points();
    let tails = topology.tails();
    let branches = branches(problem)?;
    let bases: Vec<Complex64> = branches.iter().map(|branch| branch.base).collect();
    let mut sheeting = topology.sheeting(&branches, [points[0], points[points.len() - 1]]);

    let mut ends: Vec<End> = Vec::new();
    let mut reach = Reach { top: f64::NEG_INFINITY, lowest: f64::INFINITY };
    for (at, sign, matters) in
        [(points[0], 1.0, matters[0]), (points[points.len() - 1], -1.0, matters[1])]
    {
        if matters {
            let f = phase.value(at);
            reach.include(height(f), topology.turned_height(f));
            if branches.iter().any(|branch| branch.base == at) {
                continue;
            }
            let near = saddles.iter().map(|s| (s.z - at).norm()).fold(size, f64::min);
            let near = branches.iter().map(|b| (b.base - at).norm()).fold(near, f64::min);
            let end = usize::from(sign < 0.0);
            let lifts = (0..).map(|slot| sheeting.at_end(slot, end));
            let powered = Powered::new(amplitude, at, branches.iter().copied().zip(lifts));
            let given =
                Given { least, phase, amplitude: powered.simplest(), poles: &[], outside: &bases };
            let own = Series::new(&given, &[], at, (0.3 * near, 1e-6 * size));
            let own = own.map(|own| own.with_sign(sign).with_powers(&powered.powers));
            ends.push(End { at, sign, own, near: Vec::new() });
        }
    }

    let poles = measure(problem, topology, size)?;
    for (pole, _) in &poles {
        if pole.crossings != 0 {
            reach.include(height(pole.value), topology.turned_height(pole.value));
        }
    }
    let given = Given { least, phase, amplitude, poles: &poles, outside: &bases };

    let tree = Tree::new(phase, saddles, MAX_SADDLES, problem.wavenumbers);
    if tree.groups.len() > MAX_GROUPS {
        return Err(undecided(format!("{} saddles near the contour are too many", saddles.len())));
    }
    let algebraic = algebraic_ends(problem, &mut sheeting, &tree, saddles, size)?;
    for (node, series) in algebraic.iter().flat_map(|end| &end.near) {
        if !series.is_plain() {
            for &member in &tree.groups[*node].members {
                let f = saddles[member].value;
                reach.include(height(f), topology.turned_height(f));
            }
        }
    }
    let beside = |node: usize| {
        let mut near = algebraic.iter().flat_map(|end| &end.near);
        near.find(|n| n.0 == node).map(|(_, series)| !series.is_plain())
    };
    let scene = Scene {
        sheeting: &sheeting,
        topology,
        tree: &tree,
        saddles,
        ends: &ends,
        beside: &beside,
        home: Region::around(points, HOME),
        size,
        drop,
    };
    let nodes = resolve(&given, &scene, &mut reach, known)?;
    for end in &mut ends {
        let tail = tails[usize::from(end.sign < 0.0)];
        for (index, node) in nodes.iter().enumerate() {
            if let Some(series) = &node.series
                && sheeting.same_sheet(
                    usize::from(end.sign < 0.0),
                    end.at,
                    tree.groups[index].centre,
                )
            {
                end.near.extend(NearEnd::new(
                    phase,
                    series,
                    index,
                    (end.at, end.sign),
                    tail,
                    &poles,
                ));
            }
        }
        if end.own.is_none() && end.near.is_empty() {
            return Err(undecided(format!(
                "the end point {} is too close to a singularity or to several saddles",
                end.at
            )));
        }
    }
    let top = reach.top;
    let mut low_ends = Vec::new();
    for (end, z) in [points[0], points[points.len() - 1]].into_iter().enumerate() {
        let finite = [contour.start(), contour.end()][end] == Termination::Finite;
        if !finite || matters[end] {
            continue;
        }
        let [f, slope, bend] = phase.jet(z);
        if height(f) >= top - drop {
            known
                .extend(nodes.into_iter().map(|n| (n.members, n.series)).filter(|n| n.1.is_some()));
            return Ok(Found::EndMatters(end));
        }
        let weight = amplitude.value(z).norm();
        let (slope, bend) = (slope.norm(), bend.norm());
        low_ends.push(LowEnd { z, height: height(f), weight, slope, bend });
    }
    if top == f64::NEG_INFINITY {
        return Err(undecided(
            "no saddle and no pole that was named contributes: the integral vanishes, both ends of the \
             contour running into one valley or it being closed, or a singularity was not named",
        ));
    }
    let poles = poles.into_iter().map(|(pole, _)| pole).collect();
    let mut plan = Plan {
        nodes,
        roots: tree.roots,
        ends,
        low_ends,
        algebraic,
        poles,
        saddles: Vec::new(),
        floor: top - drop,
    };
    let lowest = if reach.lowest.is_finite() { reach.lowest } else { topology.bottom() };
    certify(&mut plan, topology, lowest - drop)?;
    let ends = !(plan.ends.is_empty() && plan.algebraic.is_empty());
    let kept = plan.nodes.iter().filter_map(|node| node.series.as_ref());
    if !ends
        && plan.poles.iter().all(|p| p.crossings == 0)
        && !kept.into_iter().any(Series::contributes)
    {
        return Err(undecided("what contributes could not be told from what is too low to matter"));
    }
    for (index, saddle) in saddles.iter().enumerate() {
        let [_, _, second] = phase.jet(saddle.z);
        let power: f64 =
            branches.iter().map(|b| (saddle.z - b.base).norm().powf(b.lambda - 1.0)).product();
        let spread = power * (2.0 * std::f64::consts::PI / second.norm()).sqrt();
        let mut together = [f64::INFINITY; MAX_SADDLES - 1];
        let holding = plan.nodes.iter().filter(|node| node.members >> index & 1 == 1);
        for form in holding.filter_map(|node| Some(node.series.as_ref()?.form())) {
            if form.saddles() > 1 {
                // Canonical integrals are of order one where u ~ k^(-1/D).
                let stretch = form.map()[1].norm() / form.radius();
                together[form.saddles() - 2] = 3.0 * power * stretch;
            }
        }
        let exponent = Complex64::new(0.0, 1.0) * saddle.value;
        let weight = amplitude.value(saddle.z).norm();
        plan.saddles.push(Place { z: saddle.z, exponent, weight, spread, together });
    }
    Ok(Found::Plan(Box::new(plan)))
}

/// The poles with their steepest ascents and the contour's crossings of those.
fn measure(
    problem: &Problem,
    topology: &Topology,
    size: f64,
) -> Result<Vec<(Pole, Vec<Complex64>)>, Error> {
    let mut list = Vec::new();
    for &z in problem.poles {
        let others = problem.poles.iter().map(|other| (other - z).norm());
        let near = others.filter(|&distance| distance > 0.0).fold(0.3 * size, f64::min);
        let mut pole = Pole::measure(problem.phase, problem.amplitude, z, 0.5 * near)?;
        let Some((ascent, crossings)) = topology.ascent(z) else {
            return Err(undecided(format!(
                "the steepest ascent from the pole {z} can't be followed"
            )));
        };
        pole.crossings = crossings;
        list.push((pole, ascent));
    }
    Ok(list)
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

/// What is known before the groups are looked at.
struct Scene<'a> {
    sheeting: &'a Sheeting<'a, 'a>,
    topology: &'a Topology<'a>,
    tree: &'a Tree,
    saddles: &'a [Saddle],
    ends: &'a [End],
    /// For a node treated together with an algebraic end: whether it contributes there.
    beside: &'a dyn Fn(usize) -> Option<bool>,
    /// The neighbourhood of the contour.
    home: Region,
    size: f64,
    drop: f64,
}

impl Scene<'_> {
    /// The series of a group with its multiplicities.
    fn series(&self, given: &Given, index: usize) -> Option<Series> {
        let Scene { sheeting, topology, tree, saddles, beside, size, .. } = *self;
        let group = &tree.groups[index];
        // No ring may hold an algebraic end.
        let branches = sheeting.branches();
        let gap = if group.gap.is_finite() { group.gap } else { size };
        let gap = branches.iter().map(|b| (b.base - group.centre).norm()).fold(gap, f64::min);
        let lifts = branches.iter().map(|b| (*b, b.angle(group.centre)));
        let powered = Powered::new(given.amplitude, group.centre, lifts);
        let given = &Given { amplitude: powered.simplest(), ..*given };
        let places: Vec<Complex64> = group.members.iter().map(|&m| saddles[m].z).collect();
        let reach = ((1.5 * group.radius).max(0.3 * gap), 1.2 * group.radius);
        let series = Series::new(given, &places, group.centre, reach)?;
        let series = if branches.is_empty() {
            let m = topology.multiplicities(series.form())?;
            series.with_multiplicities(m)
        } else {
            let sheets = sheeting.multiplicities(series.form(), group.centre)?;
            on_sheets(series, branches, &sheets)
        };
        // Close to an algebraic end the ring about the end sees more than a small one beside it.
        let agrees = beside(index).is_none_or(|t| t == series.contributes());
        agrees.then(|| series.with_powers(&powered.powers))
    }
}

/// Series and multiplicities of all groups, from the highest downwards.
fn resolve(
    given: &Given,
    scene: &Scene,
    reach: &mut Reach,
    known: &mut Known,
) -> Result<Vec<Node>, Error> {
    let Scene { topology, tree, saddles, ends, beside, home, size, drop, .. } = *scene;
    let highest = |g: &Group| {
        g.members.iter().map(|&m| height(saddles[m].value)).fold(f64::NEG_INFINITY, f64::max)
    };
    let lowest = |g: &Group| {
        let heights = g.members.iter().map(|&m| topology.turned_height(saddles[m].value));
        heights.fold(f64::INFINITY, f64::min)
    };
    let mut nodes: Vec<Node> = tree.groups.iter().map(Node::new).collect();
    let mut order: Vec<usize> = (0..tree.groups.len()).collect();
    // Of the same height close groups come before their parts, others after them.
    let rank = |index: usize| {
        let close = tree.groups[index].close;
        (!close, if close { usize::MAX - index } else { index })
    };
    order.sort_by(|&a, &b| {
        let heights = highest(&tree.groups[b]).total_cmp(&highest(&tree.groups[a]));
        heights.then(rank(a).cmp(&rank(b)))
    });
    // Parts of close groups with an expansion.
    let mut spared: Vec<u64> = Vec::new();
    for index in order {
        let group = &tree.groups[index];
        let members = nodes[index].members;
        if spared.iter().any(|whole| whole & members == members) {
            continue;
        }
        let gap = if group.gap.is_finite() { group.gap } else { size };
        // An end point near a saddle needs its series, whether the saddle contributes or not.
        let near = |end: &&End| (end.at - group.centre).norm() < group.radius + gap;
        let ended = ends.iter().any(|end| near(&end) && !end.is_sharp(given.least, reach.top));
        nodes[index].settled = beside(index).is_some();
        if !ended && (topology.above(lowest(group)) || highest(group) < reach.top - drop) {
            nodes[index].settled = true;
            continue;
        }
        let Some(series) = known.remove(&members).unwrap_or_else(|| scene.series(given, index))
        else {
            known.insert(members, None);
            continue;
        };
        if series.contributes() {
            // Perhaps by its lowest saddle alone.
            let heights = group.members.iter().map(|&m| height(saddles[m].value));
            reach.include(heights.fold(f64::INFINITY, f64::min), lowest(group));
        }
        if group.close {
            spared.push(members);
            nodes[index].parts = None;
        }
        nodes[index].series = Some(series);
        nodes[index].settled = true;
    }
    // Saddles without an expansion, alone or with others, are refused near the contour. Far from it they
    // are left out, and the certificate decides whether they matter.
    let mut stack: Vec<usize> = tree.roots.clone();
    while let Some(index) = stack.pop() {
        if decided(&nodes, index) {
            continue;
        }
        if let Some((a, b)) = nodes[index].parts {
            stack.extend([a, b]);
            continue;
        }
        let group = &tree.groups[index];
        if group.members.iter().any(|&m| home.holds(saddles[m].z, 0.0)) {
            return Err(undecided(format!(
                "no normal form or no clear ridge for the saddles near {:.4}",
                group.centre
            )));
        }
        nodes[index].settled = true;
    }
    Ok(nodes)
}

/// The certificate. The finest partition into groups that is known is tried first, then coarser
/// ones; what is finer than the one that passes is dropped. Then each coarser group must pass in the
/// place of its parts, or is dropped too.
fn certify(plan: &mut Plan, topology: &Topology, floor: f64) -> Result<(), Error> {
    let beside = |index: usize| {
        let mut near = plan.algebraic.iter().flat_map(|end| &end.near);
        near.find(|(node, _)| *node == index).map(|(_, series)| &series.valleys)
    };
    let valleys: Vec<Option<Valleys>> = plan
        .nodes
        .iter()
        .enumerate()
        .map(|(index, node)| match &node.series {
            Some(series) if series.contributes() => {
                topology.valleys(series.form(), series.multiplicities(), floor)
            }
            // Settled without a series: too high or too low to matter.
            Some(_) => Some(Vec::new()),
            None => match beside(index) {
                Some(list) => topology.sunk(list.clone(), floor),
                None => node.settled.then(Vec::new),
            },
        })
        .collect();
    let mut certificate = Certificate::new(topology, floor, plan.floor);
    let mut closes = |partition: &[usize]| {
        let mut all = Vec::new();
        for &index in partition {
            match &valleys[index] {
                Some(list) => all.extend(list),
                None => return false,
            }
        }
        certificate.closes(&all)
    };
    // With one group taken as a whole, everything else as fine as it is known.
    let with = |whole: Option<usize>| {
        let mut partition = Vec::new();
        let mut stack = plan.roots.clone();
        while let Some(index) = stack.pop() {
            let node = &plan.nodes[index];
            match node.parts.filter(|_| whole != Some(index)) {
                Some((a, b)) if decided(&plan.nodes, a) && decided(&plan.nodes, b) => {
                    stack.extend([a, b]);
                }
                _ => partition.push(index),
            }
        }
        partition
    };
    let wholes = (0..plan.nodes.len()).filter(|&n| plan.nodes[n].parts.is_some());
    let wholes: Vec<usize> = wholes.filter(|&n| plan.nodes[n].series.is_some()).collect();
    let mut tries = std::iter::once(None).chain(wholes.iter().copied().map(Some));
    let Some(passed) = tries.find(|&whole| closes(&with(whole))) else {
        return Err(match topology.stuck_end(floor) {
            Some((z, height)) => Error::Undecided {
                reason: format!(
                    "the steepest descent from an end of the contour stops near z = {z:.4} at \
                     Re(i f) = {height:.4}: the phase tends to a bounded value there, or has a \
                     singularity or a cut in the way"
                ),
                remedy: "end the contour in a valley where Im f grows without bound; if f is bounded at \
                         infinity, map infinity to a finite point first (`Integral::mapped`; z = p + 1/t \
                         for a rational f with a pole p, t = tanh z for one that saturates) and give that \
                         as a finite end, with `power_at_start` or `power_at_end` for an algebraic amplitude",
            },
            None => undecided("the contributions found do not join the two ends of the contour"),
        });
    };
    let mut dropped = Vec::new();
    if let Some(whole) = passed {
        let mut stack: Vec<usize> =
            plan.nodes[whole].parts.into_iter().flat_map(|(a, b)| [a, b]).collect();
        while let Some(index) = stack.pop() {
            dropped.push(index);
            stack.extend(plan.nodes[index].parts.into_iter().flat_map(|(a, b)| [a, b]));
        }
    }
    for &whole in &wholes {
        // One that holds the group that passed replaces it; one elsewhere stands beside it.
        let holds = passed.is_none_or(|p| {
            plan.nodes[whole].members & plan.nodes[p].members == plan.nodes[p].members
        });
        if passed != Some(whole)
            && !dropped.contains(&whole)
            && holds
            && !closes(&with(Some(whole)))
        {
            dropped.push(whole);
        }
    }
    for index in dropped {
        plan.nodes[index].series = None;
        plan.nodes[index].settled = false;
    }
    Ok(())
}

/// Weights and points far down of the valleys that a group's contribution runs between.
type Valleys = Vec<(i32, Complex64)>;

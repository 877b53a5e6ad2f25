//! Integrals between valleys: descents from the saddles, Gauss-Legendre panels on them.
//!
//! Every saddle is a hub: on a circle around it, small enough for one panel from its centre, the minima of the
//! height are the starts of arms, which descend until a valley lies straight ahead and the integrand
//! has vanished. Saddles that merge need no care: the circle then sees the minima of both. Hubs are taken
//! from the lowest upwards (each with its copies at distances `2 pi i`) until the two valleys hang
//! together. The plane of q has no singularity, so any path between the valleys gives the same integral; that it
//! stays low keeps the digits.

use super::landscape::{Landscape, Site, Valley};
use super::panel::{self, Moments};
use num_complex::Complex64;

/// Drop at which the integrand has vanished.
const DEPTH: f64 = 42.0;
/// Change of H along the first panel of an arm, later ones growing with the drop; the smaller ones
/// are for descents that fail with the larger.
const SPREADS: [f64; 3] = [6.5, 5.0, 3.7];
const STEPS: usize = 80;
const ARMS: usize = 6;
/// Directions looked at on a circle.
const DIRECTIONS: usize = 32;
/// Nodes of the forest: outer valleys -6 .. 6, inner ones -2 .. 2.
const VALLEYS: usize = 18;
/// Shifts by `2 pi i` that are looked at.
const SHIFTS: [i32; 3] = [0, -1, 1];
const HUBS: usize = 4 * SHIFTS.len();

#[derive(Clone, Copy)]
struct Arm {
    vertices: [Complex64; STEPS],
    /// Drop of the highest wanted integrand at each vertex.
    drops: [f64; STEPS],
    count: usize,
    valley: Valley,
}

/// An edge of the forest.
#[derive(Clone, Copy)]
struct Edge {
    hub: usize,
    arm: usize,
    valley: usize,
}

impl Valley {
    /// The number of its node, shifted by so many times `2 pi i`.
    fn node(self, land: &Landscape, shift: i32) -> Option<usize> {
        let (number, range, first) = match self {
            Valley::Outer(n) => (n + 3 * shift, 6, 0),
            Valley::Inner(_) if land.inner == 0.0 => (0, 2, 13),
            Valley::Inner(m) => (m + shift, 2, 13),
        };
        (number.abs() <= range).then(|| (first + number + range) as usize)
    }
}

/// Directions of the minima of the height on a circle, lowest first; returns their number.
fn minima(land: &Landscape, site: &Site, radius: f64, out: &mut [Complex64; ARMS]) -> usize {
    let direction =
        |k: usize| Complex64::from_polar(1.0, std::f64::consts::TAU * k as f64 / DIRECTIONS as f64);
    let heights: [f64; DIRECTIONS] =
        std::array::from_fn(|k| land.site(site.q + direction(k) * radius).height() - site.height());
    let mut found = [(0.0, 0); ARMS];
    let mut count = 0;
    for k in 0..DIRECTIONS {
        let [before, after] = [k + DIRECTIONS - 1, k + 1].map(|k| heights[k % DIRECTIONS]);
        if heights[k] < -0.02 && heights[k] < before && heights[k] <= after && count < ARMS {
            found[count] = (heights[k], k);
            count += 1;
        }
    }
    let found = &mut found[..count];
    found.sort_unstable_by(|a, b| a.0.total_cmp(&b.0));
    for (out, (_, k)) in out.iter_mut().zip(found) {
        *out = direction(*k);
    }
    count
}

/// Descends from a hub in a direction.
fn descend(
    land: &Landscape,
    hub: &Site,
    radius: f64,
    direction: Complex64,
    spread: f64,
) -> Option<Arm> {
    let mut arm = Arm {
        vertices: [Complex64::ZERO; STEPS],
        drops: [0.0; STEPS],
        count: 1,
        valley: Valley::Inner(0),
    };
    arm.vertices[0] = hub.q;
    let mut site = land.site(hub.q + direction * radius);
    while arm.count < STEPS {
        let drop = hub.height() - site.crest();
        arm.vertices[arm.count] = site.q;
        arm.drops[arm.count] = drop;
        arm.count += 1;
        if drop > DEPTH
            && let Some(valley) = land.valley(&site)
        {
            arm.valley = valley;
            return Some(arm);
        }
        site = step(land, &site, spread + 0.6 * (hub.height() - site.height()).max(0.0))?;
    }
    None
}

/// One step down: along the slope at its middle, or wherever it goes down.
fn step(land: &Landscape, site: &Site, spread: f64) -> Option<Site> {
    let mut radius = site.reach(spread);
    let slope = site.slope();
    let down = |slope: Complex64| -slope.conj() / slope.norm_sqr().sqrt();
    for _ in 0..8 {
        let middle = land.site(site.q + down(slope) * (0.5 * radius));
        let next = land.site(site.q + down(middle.slope()) * radius);
        // A quarter of the way that the slope promises, or of the step's own size.
        if next.height() < site.height() - 0.2 * (radius * slope.norm()).min(spread) {
            return Some(next);
        }
        let mut directions = [Complex64::ZERO; ARMS];
        if minima(land, site, radius, &mut directions) > 0 {
            let next = land.site(site.q + directions[0] * radius);
            if next.height() < site.height() - 0.4 {
                return Some(next);
            }
        }
        radius *= 0.5;
    }
    None
}

/// The sum over an arm, in units of `e^reference`, to the given drop.
fn integrate(land: &Landscape, arm: &Arm, reference: Complex64, depth: f64) -> Moments {
    let mut total = [Complex64::ZERO; 4];
    for k in 1..arm.count {
        let more = panel::moments(land, arm.vertices[k - 1], arm.vertices[k], reference);
        for (total, more) in total.iter_mut().zip(more) {
            *total += more;
        }
        if arm.drops[k] > depth {
            break;
        }
    }
    total
}

/// The moments between two outer valleys, in units of `e^reference`, and the reference.
pub(super) fn between(land: &Landscape, from: i32, to: i32) -> Option<(Moments, Complex64)> {
    SPREADS.iter().find_map(|spread| descents(land, from, to, *spread))
}

fn descents(land: &Landscape, from: i32, to: i32, spread: f64) -> Option<(Moments, Complex64)> {
    let (saddles, count) = land.saddles();
    let mut hubs: [Site; 4] = std::array::from_fn(|k| land.site(saddles[k]));
    let hubs = &mut hubs[..count];
    hubs.sort_unstable_by(|a, b| a.height().total_cmp(&b.height()));
    let [from, to] = [from, to].map(|n| (n + 6) as usize);
    let mut component: [usize; VALLEYS] = std::array::from_fn(|v| v);
    let mut arms: [[Option<Arm>; ARMS]; 4] = [[None; ARMS]; 4];
    let mut edges = [Edge { hub: 0, arm: 0, valley: 0 }; HUBS * ARMS];
    let mut edge_count = 0;
    for (index, hub) in hubs.iter().enumerate() {
        if component[from] == component[to] {
            break;
        }
        let radius = hub.reach(spread);
        let mut directions = [Complex64::ZERO; ARMS];
        let found = minima(land, hub, radius, &mut directions);
        for (arm, direction) in arms[index].iter_mut().zip(&directions[..found]) {
            *arm = descend(land, hub, radius, *direction, spread);
        }
        for (copy, shift) in SHIFTS.iter().enumerate() {
            let mut first: Option<usize> = None;
            for (k, arm) in arms[index].iter().enumerate() {
                let Some(valley) = arm.as_ref().and_then(|a| a.valley.node(land, *shift)) else {
                    continue;
                };
                let old = component[valley];
                if first == Some(old) {
                    continue;
                }
                let new = *first.get_or_insert(old);
                for c in &mut component {
                    if *c == old {
                        *c = new;
                    }
                }
                edges[edge_count] = Edge { hub: index + 4 * copy, arm: k, valley };
                edge_count += 1;
            }
        }
    }
    let (path, length) = path(&edges[..edge_count], from, to)?;
    let top = path[..length]
        .iter()
        .map(|(e, _)| &hubs[e.hub % 4])
        .max_by(|a, b| a.height().total_cmp(&b.height()))?;
    let mut total = [Complex64::ZERO; 4];
    for (edge, sign) in &path[..length] {
        let hub = &hubs[edge.hub % 4];
        let depth = DEPTH - (top.height() - hub.height());
        if let Some(arm) = &arms[edge.hub % 4][edge.arm]
            && depth > 0.0
        {
            // e^(pi i) for every 2 pi i.
            let sign = if SHIFTS[edge.hub / 4] == 0 { *sign } else { -sign };
            let along = integrate(land, arm, top.h, depth);
            for (total, along) in total.iter_mut().zip(along) {
                *total += along * sign;
            }
        }
    }
    Some((total, top.h))
}

/// The edges from one valley to another, with +1 down into a valley and -1 out of one.
fn path(edges: &[Edge], from: usize, to: usize) -> Option<([(Edge, f64); HUBS * 2], usize)> {
    // Distances from the goal, over hubs and valleys.
    const FAR: usize = usize::MAX;
    let (mut valleys, mut hubs) = ([FAR; VALLEYS], [FAR; HUBS]);
    valleys[to] = 0;
    for length in 1..=2 * HUBS {
        for e in edges {
            if valleys[e.valley] == length - 1 && hubs[e.hub] == FAR {
                hubs[e.hub] = length;
            }
            if hubs[e.hub] == length - 1 && valleys[e.valley] == FAR {
                valleys[e.valley] = length;
            }
        }
    }
    let total = valleys[from];
    if total == FAR || total > 2 * HUBS {
        return None;
    }
    let mut out = [(Edge { hub: 0, arm: 0, valley: 0 }, 0.0); HUBS * 2];
    let (mut valley, mut left) = (from, total);
    while left > 0 {
        let up = edges.iter().find(|e| e.valley == valley && hubs[e.hub] == left - 1)?;
        out[total - left] = (*up, -1.0);
        let down = edges.iter().find(|e| e.hub == up.hub && valleys[e.valley] + 2 == left)?;
        out[total - left + 1] = (*down, 1.0);
        valley = down.valley;
        left -= 2;
    }
    Some((out, total))
}

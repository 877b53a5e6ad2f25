//! Integrals between valleys: descents from the saddles, Gauss-Legendre panels on them.
//!
//! Every saddle is a hub. A lone one is crossed on one line (file `lone`); its arms are only followed to see
//! where they lead. Else the minima of the height on a circle round it, small enough for one panel from
//! its centre, are the starts of arms, which descend until a valley lies straight ahead and the integrand
//! has vanished. Saddles that merge need no care: the circle then sees the minima of both. Hubs are taken
//! from the lowest upwards (each with its copies at distances `2 pi i`) until the two valleys hang
//! together. The plane of q has no singularity, so any path between the valleys gives the same integral; that it
//! stays low keeps the digits.
//!
//! Where all saddles are lone and those off the real axis far above or below it, as for most large parameters, no
//! path is needed: the path of the definition is the real axis of r, which passes every saddle on it from left to right.

use super::landscape::{DIRECTIONS, Hub, Landscape, Site, Valley, direction};
use super::panel::{self, Moments};
use super::{Sum, lone};
use num_complex::Complex64;

/// Drop at which the integrand has vanished.
const DEPTH: f64 = 42.0;
/// A minimum on a circle counts from this drop on: a saddle nearby may be hardly lower.
const FLAT: f64 = 1e-7;
/// A ridge this far down may be crossed without notice.
const RIDGE: f64 = 37.0;
/// Change of H along the first panel of an arm, later ones growing with the drop; the smaller ones
/// are for descents that fail with the larger.
const SPREADS: [f64; 3] = [6.5, 5.0, 3.7];
/// Steps of a descent, and vertices before the integrand has vanished.
pub(super) const STEPS: usize = 120;
const VERTICES: usize = 40;
const ARMS: usize = 6;
/// Nodes of the forest: outer valleys -6 .. 6, inner ones -2 .. 2.
const VALLEYS: usize = 18;
/// Shifts by `2 pi i` that are looked at.
const SHIFTS: [i32; 3] = [0, -1, 1];
const HUBS: usize = 4 * SHIFTS.len();

/// Vertices as distances from the hub, the first one 0.
#[derive(Clone, Copy)]
struct Arm {
    vertices: [Complex64; VERTICES],
    /// Drop of the highest wanted integrand at each vertex.
    drops: [f64; VERTICES],
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
            Valley::Inner(_) if land.inner.hi == 0.0 => (0, 2, 13),
            Valley::Inner(m) => (m + shift, 2, 13),
        };
        (number.abs() <= range).then(|| (first + number + range) as usize)
    }
}

/// Directions of the minima of the height on a circle round a point, lowest first, given the drops
/// there; returns their number.
fn minima(drops: &[f64; DIRECTIONS], out: &mut [Complex64; ARMS]) -> usize {
    let mut found = [(0.0, 0); ARMS];
    let mut count = 0;
    for k in 0..DIRECTIONS {
        let [before, after] = [k + DIRECTIONS - 1, k + 1].map(|k| drops[k % DIRECTIONS]);
        if drops[k] > FLAT && drops[k] > before && drops[k] >= after && count < ARMS {
            found[count] = (drops[k], k);
            count += 1;
        }
    }
    let found = &mut found[..count];
    found.sort_unstable_by(|a, b| b.0.total_cmp(&a.0));
    for (out, (_, k)) in out.iter_mut().zip(found) {
        *out = direction(*k);
    }
    count
}

/// Where the arms of a hub begin.
fn starts(hub: &Hub, lone: bool, spread: f64, out: &mut [Complex64; ARMS]) -> usize {
    let centre = hub.centre();
    if lone {
        // Two ways down, as the quadratic term alone tells, and straight on as long as it leads.
        let along = (-centre.bend()).sqrt().inv();
        let along = along * (centre.quadratic() / along.norm());
        out[..2].copy_from_slice(&[along, -along]);
        return 2;
    }
    let radius = centre.reach(spread);
    let count = minima(&hub.circle(radius), out);
    for start in &mut out[..count] {
        *start *= radius;
    }
    count
}

/// Descends from a hub to a point and on.
fn descend(hub: &Hub, start: Complex64, spread: f64) -> Option<Arm> {
    let mut arm = Arm {
        vertices: [Complex64::ZERO; VERTICES],
        drops: [0.0; VERTICES],
        count: 1,
        valley: Valley::Inner(0),
    };
    let mut site = hub.site(start);
    for _ in 0..STEPS {
        if arm.drops[arm.count - 1] <= DEPTH {
            if arm.count == VERTICES {
                return None;
            }
            arm.vertices[arm.count] = site.offset;
            arm.drops[arm.count] = site.crest_drop;
            arm.count += 1;
        }
        if site.crest_drop > DEPTH
            && let Some(valley) = hub.valley(&site)
        {
            arm.valley = valley;
            return Some(arm);
        }
        // Where nothing is left to integrate a step must not cross a ridge that counts.
        let change = if site.crest_drop > DEPTH {
            site.crest_drop - RIDGE
        } else {
            spread + 0.6 * site.drop.max(0.0)
        };
        site = step(hub, &site, change)?;
    }
    None
}

/// One step down: along the slope at its middle, or wherever it goes down.
fn step(hub: &Hub, site: &Site, spread: f64) -> Option<Site> {
    let mut radius = site.reach(spread);
    let slope = site.slope();
    let down = |slope: Complex64| -slope.conj() / slope.norm_sqr().sqrt();
    for _ in 0..8 {
        let middle = hub.site(site.offset + down(slope) * (0.5 * radius));
        let next = hub.site(site.offset + down(middle.slope()) * radius);
        // A quarter of the way that the slope promises, or of the step's own size.
        if next.drop > site.drop + 0.2 * (radius * slope.norm()).min(spread) {
            return Some(next);
        }
        let drops: [f64; DIRECTIONS] =
            std::array::from_fn(|k| hub.site(site.offset + direction(k) * radius).drop - site.drop);
        let mut directions = [Complex64::ZERO; ARMS];
        if minima(&drops, &mut directions) > 0 {
            let next = hub.site(site.offset + directions[0] * radius);
            if next.drop > site.drop + 0.4 {
                return Some(next);
            }
        }
        radius *= 0.5;
    }
    None
}

/// The sum over an arm to the given drop.
fn integrate(hub: &Hub, arm: &Arm, depth: f64) -> Moments {
    let mut total = [Complex64::ZERO; 4];
    for k in 1..arm.count {
        let more = panel::moments(hub, arm.vertices[k - 1], arm.vertices[k]);
        for (total, more) in total.iter_mut().zip(more) {
            *total += more;
        }
        if arm.drops[k] > depth {
            break;
        }
    }
    total
}

/// Adds the integral between two outer valleys; false if no path is found.
pub(super) fn between(land: &Landscape, from: i32, to: i32, sum: &mut Sum) -> bool {
    across(land, from, sum) || SPREADS.iter().any(|spread| descents(land, from, to, *spread, sum))
}

/// Height above or below a real saddle from which a complex one does not count.
const NEVER_SEEN: f64 = 45.0;

/// All saddles on the real axis of r, one by one, if that is all there is; `from` tells on which side of
/// `r = 0` the path passes.
fn across(land: &Landscape, from: i32, sum: &mut Sum) -> bool {
    if land.inner.hi == 0.0 {
        return false;
    }
    let mut hubs = [None; 4];
    let (roots, count) = land.saddles(0.0);
    for (hub, r) in hubs.iter_mut().zip(&roots[..count]) {
        if r.im.abs() > 1e-5 * r.re.abs() {
            let phase = land.phase(*r);
            if phase.im.abs() < NEVER_SEEN + 1e-13 * phase.re.abs() {
                return false;
            }
            continue;
        }
        let r = Complex64::new(land.polished(r.re), 0f64.copysign(f64::from(from)));
        let place = land.hub(r);
        if !lone::is_lone(&place) {
            return false;
        }
        *hub = Some(place);
    }
    let mut found = false;
    for hub in hubs.iter().flatten() {
        let along = Complex64::new(hub.r.re.signum(), 0.0);
        sum.add(hub, &lone::moments(hub, along), 1.0);
        found = true;
    }
    found
}

fn descents(land: &Landscape, from: i32, to: i32, spread: f64, sum: &mut Sum) -> bool {
    let (saddles, count) = land.saddles(0.5);
    let mut hubs: [Hub; 4] = std::array::from_fn(|k| land.hub(saddles[k.min(count - 1)]));
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
        let mut places = [Complex64::ZERO; ARMS];
        let found = starts(hub, lone::is_lone(hub), spread, &mut places);
        for (arm, start) in arms[index].iter_mut().zip(&places[..found]) {
            *arm = descend(hub, *start, spread);
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
    let Some((path, length)) = path(&edges[..edge_count], from, to) else {
        return false;
    };
    let path = &path[..length];
    let top = path.iter().fold(f64::NEG_INFINITY, |top, (e, _)| top.max(hubs[e.hub % 4].height()));
    // How often each arm is run down; copies of a hub share their integrals but for e^(pi i).
    let mut flows = [[0.0; ARMS]; 4];
    for (edge, sign) in path {
        let turned = if SHIFTS[edge.hub / 4] == 0 { *sign } else { -sign };
        flows[edge.hub % 4][edge.arm] += turned;
    }
    for ((hub, arms), flows) in hubs.iter().zip(&arms).zip(&flows) {
        let depth = DEPTH - (top - hub.height());
        if depth <= 0.0 {
            continue;
        }
        // The rule across a saddle serves both arms.
        let lone = lone::is_lone(hub);
        for (arm, &flow) in arms.iter().zip(flows) {
            let Some(arm) = arm.as_ref().filter(|_| flow != 0.0) else {
                continue;
            };
            if !lone {
                sum.add(hub, &integrate(hub, arm, depth), flow);
            } else if flow > 0.0 {
                sum.add(hub, &lone::moments(hub, arm.vertices[1]), flow);
            }
        }
    }
    true
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

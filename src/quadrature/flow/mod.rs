//! The contour flowed downhill on `Re(k h)`, `h = i f`, within its homotopy class.
//!
//! Method. Every vertex of the contour has an orbit: the path of steepest descent from it, traced
//! as far as it is needed. Every edge joins two neighbouring orbits by a chord, and is lowered by
//! letting its chord slide down the two orbits, one step of one orbit at a time. The triangle that
//! the chord sweeps in such a step must be free of singularities: its sides must be resolved
//! (`terrain`) and the loop integral of the amplitude must vanish. An edge that can be lowered no
//! further gets a new vertex at the top of its chord, from which a new orbit starts; it is settled
//! when its top lies within a fraction of 1/k of a saddle's height (or of a singularity that it
//! hangs on). The highest edge is always served first, so the first settled edge sets the level
//! below which nothing needs an evaluation.
//!
//! The flowed contour then consists of the settled chords, joined by pieces of orbits, which are
//! steepest descents: no oscillation along them. Only its cost depends on how well the descent
//! went; its value does not, since every chord is in the class of the caller's contour.

mod image;
mod shortcut;

use super::residue::{Flux, Watch};
use super::terrain::{Profile, Sampler, Site};
use crate::Error;
use crate::integral::{Amplitude, Contour, Phase, Termination};
use num_complex::Complex64;
use std::cmp::Ordering;
use std::collections::BinaryHeap;

/// Evaluations of the phase after which the descent is given up. Some thousand are the rule; a
/// contour that has to lean on a branch cut takes some hundred per unit of k.
const EVALUATIONS: usize = 1_000_000;
/// Steps of edges, most of which cost no evaluation.
const MOVES: usize = 4_000_000;
/// Shortcuts across detours.
const SHORTCUTS: usize = 32;
/// A chord is settled if its top is this near a saddle's height, in units of 1/k.
const SETTLED: f64 = 0.25;

struct Node {
    orbit: Vec<Site>,
    /// The amplitude along the steps of the orbit, as far as it was asked for.
    flux: Vec<Option<Flux>>,
    /// The longest next step.
    cap: f64,
    /// The orbit cannot be continued.
    stalled: bool,
    left: Option<usize>,
    right: Option<usize>,
}

#[derive(Clone, Copy, PartialEq)]
enum State {
    Open,
    Settled,
    Sunk,
    /// No longer part of the contour.
    Gone,
}

struct Edge {
    nodes: [usize; 2],
    /// How far the chord's ends have slid down the two orbits.
    at: [usize; 2],
    /// The amplitude along the chord, if it was asked for.
    flux: Option<Flux>,
    state: State,
}

struct Rank(f64, usize);

impl PartialEq for Rank {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other) == Ordering::Equal
    }
}
impl Eq for Rank {}
impl PartialOrd for Rank {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}
impl Ord for Rank {
    fn cmp(&self, other: &Self) -> Ordering {
        self.0.total_cmp(&other.0)
    }
}

enum Slide {
    Moved,
    Refined,
    Blocked,
}

pub(super) struct Flow<'a, P, A> {
    sampler: &'a Sampler<'a, P, A>,
    watch: Watch<'a, P, A>,
    k: f64,
    nodes: Vec<Node>,
    edges: Vec<Edge>,
    heap: BinaryHeap<Rank>,
    /// The highest level, `Re h`, that the contour is known to keep.
    crest: f64,
    ends: [Termination; 2],
    /// The node of the last vertex.
    last: usize,
}

const REMEDY: &str = "give a contour nearer to the saddles and away from singularities, with its \
                      ends inside their valleys";

fn exhausted() -> Error {
    Error::NoConvergence { what: "the descent of the contour", limit: EVALUATIONS, remedy: REMEDY }
}

impl<'a, P: Phase, A: Amplitude> Flow<'a, P, A> {
    /// Evaluates the vertices; nothing moves yet. A strict flow sees weak singularities of the
    /// amplitude, too.
    pub fn new(
        sampler: &'a Sampler<'a, P, A>,
        contour: &Contour,
        k: f64,
        strict: bool,
    ) -> Result<Flow<'a, P, A>, Error> {
        let points = contour.points();
        let size = points.iter().map(|z| (z - points[0]).norm()).fold(0.0, f64::max);
        // The last vertex of a closed contour is its first.
        let closed = contour.is_closed();
        let count = points.len() - usize::from(closed);
        let (last, sides) = (count - 1, points.len() - 1);
        let mut nodes = Vec::with_capacity(4 * points.len());
        let mut edges = Vec::with_capacity(4 * points.len());
        for (i, &z) in points[..count].iter().enumerate() {
            let site = sampler.site(z).ok_or(Error::NotFinite { what: "phase", at: z })?;
            nodes.push(Node {
                orbit: vec![site],
                flux: Vec::new(),
                cap: 0.5 * size,
                stalled: false,
                left: if closed { Some((i + last) % count) } else { i.checked_sub(1) },
                right: (i < sides).then_some(i),
            });
            if i < sides {
                let nodes = [i, (i + 1) % count];
                edges.push(Edge { nodes, at: [0, 0], flux: None, state: State::Open });
            }
        }
        let ends = [contour.start(), contour.end()];
        let watch = Watch::new(sampler, strict, points[0], size);
        let mut flow = Flow {
            sampler,
            watch,
            k,
            nodes,
            edges,
            heap: BinaryHeap::new(),
            crest: f64::NEG_INFINITY,
            ends,
            last,
        };
        flow.crest = flow.lowest_crest();
        for e in 0..sides {
            flow.push(e);
        }
        Ok(flow)
    }

    fn ends_of(&self, e: usize) -> (Site, Site) {
        let Edge { nodes: [a, b], at: [i, j], .. } = self.edges[e];
        (self.nodes[a].orbit[i], self.nodes[b].orbit[j])
    }

    fn push(&mut self, e: usize) {
        let (a, b) = self.ends_of(e);
        let profile = Profile::of(&a, &b, self.k);
        let rank = if profile.resolved { profile.top + profile.margin } else { f64::INFINITY };
        self.heap.push(Rank(rank, e));
    }

    /// Flows until every edge is settled or lies `depth/k` below the highest settled one, and no
    /// ridge is crossed forth and back.
    pub fn relax(&mut self, depth: f64) -> Result<(), Error> {
        for _ in 0..SHORTCUTS {
            self.sink(depth)?;
            if !self.shortcut() {
                break;
            }
        }
        Ok(())
    }

    /// Lowers every edge until it is settled or lies `depth/k` below the highest settled one.
    fn sink(&mut self, depth: f64) -> Result<(), Error> {
        for e in 0..self.edges.len() {
            if self.edges[e].state == State::Sunk {
                self.edges[e].state = State::Open;
                self.push(e);
            }
        }
        for _ in 0..MOVES {
            let Some(Rank(_, e)) = self.heap.pop() else { return Ok(()) };
            if self.sampler.count() > EVALUATIONS {
                return Err(exhausted());
            }
            self.serve(e, depth)?;
        }
        Err(exhausted())
    }

    /// One move of one edge.
    fn serve(&mut self, e: usize, depth: f64) -> Result<(), Error> {
        let (a, b) = self.ends_of(e);
        let profile = Profile::of(&a, &b, self.k);
        let length = (b.z - a.z).norm();
        if !profile.resolved {
            if length <= 1e-13 * (a.z.norm() + b.z.norm()) {
                // A jump of the closure between neighbouring numbers.
                return Err(Error::Undecided {
                    reason: format!(
                        "at z = {:.6} on the contour the phase jumps, or its derivative is not \
                         that of its value",
                        a.z
                    ),
                    remedy: "lead the contour clear of branch cuts and check the derivative",
                });
            }
            return self.split(e, 0.5);
        }
        if self.k * (profile.top + profile.margin - self.crest) < -depth {
            self.edges[e].state = State::Sunk;
            return Ok(());
        }
        let highest = a.h.re.max(b.h.re);
        let interior = self.k * (profile.top - highest) > 0.2 * SETTLED
            || (profile.at > 0.05 && profile.at < 0.95);
        let higher = usize::from(b.h.re > a.h.re);
        if !interior {
            // A saddle's height is reached, or the chord is too long to tell.
            let gain = self.k * [a, b][higher].gain(&[b, a][higher]);
            if self.k * profile.margin > SETTLED.max(4.0 * gain) {
                return self.split(e, 0.5);
            }
            if gain < SETTLED {
                // A chord with more turns than decay costs panels: its lower end may go on.
                let turns = self.k * (b.h.im - a.h.im).abs();
                if turns <= 5.0 + 2.0 * self.k * (b.h.re - a.h.re).abs() {
                    return self.settle(e, profile.top);
                }
                return match self.slide(e, 1 - higher, &profile, SETTLED / self.k, -0.01)? {
                    Slide::Blocked => self.split(e, 0.5),
                    _ => {
                        self.push(e);
                        Ok(())
                    }
                };
            }
        }
        for side in [higher, 1 - higher] {
            if !interior && side != higher {
                break;
            }
            let least = if interior { 0.1 } else { -0.01 };
            match self.slide(e, side, &profile, f64::INFINITY, least)? {
                Slide::Moved | Slide::Refined => {
                    self.push(e);
                    return Ok(());
                }
                Slide::Blocked => {}
            }
        }
        // Nothing moves: settled, or to be divided at its top.
        let variation = self.k * length * a.slope.norm().max(b.slope.norm());
        if variation < 2.0 * SETTLED {
            return self.settle(e, profile.top);
        }
        self.split(e, if interior { profile.at } else { 0.5 })
    }

    fn settle(&mut self, e: usize, top: f64) -> Result<(), Error> {
        self.edges[e].state = State::Settled;
        self.crest = self.crest.max(top);
        Ok(())
    }

    /// Puts a new vertex on the chord.
    fn split(&mut self, e: usize, t: f64) -> Result<(), Error> {
        let (a, b) = self.ends_of(e);
        let z = a.z + (b.z - a.z) * t;
        let site = self.sampler.site(z).ok_or(Error::NotFinite { what: "phase", at: z })?;
        let (node, edge) = (self.nodes.len(), self.edges.len());
        let Edge { nodes: [left, right], at: [i, j], .. } = self.edges[e];
        let cap = self.nodes[left].cap.max(self.nodes[right].cap);
        self.nodes.push(Node {
            orbit: vec![site],
            flux: Vec::new(),
            cap,
            stalled: false,
            left: Some(e),
            right: Some(edge),
        });
        self.edges[e] = Edge { nodes: [left, node], at: [i, 0], flux: None, state: State::Open };
        self.edges.push(Edge { nodes: [node, right], at: [0, j], flux: None, state: State::Open });
        self.nodes[right].left = Some(edge);
        self.push(e);
        self.push(edge);
        Ok(())
    }

    /// Slides one end of a chord one step down its orbit if that lowers its top by `least` times
    /// 1/k, leaves its margin below the one given and sweeps no singularity.
    fn slide(
        &mut self,
        e: usize,
        side: usize,
        before: &Profile,
        margin: f64,
        least: f64,
    ) -> Result<Slide, Error> {
        let (node, at) = (self.edges[e].nodes[side], self.edges[e].at[side]);
        if at + 1 == self.nodes[node].orbit.len() && !self.descend(node) {
            return Ok(Slide::Blocked);
        }
        let (old, new) = (self.nodes[node].orbit[at], self.nodes[node].orbit[at + 1]);
        let (a, b) = self.ends_of(e);
        let (a, b, other) = if side == 0 { (new, b, b) } else { (a, new, a) };
        let after = Profile::of(&a, &b, self.k);
        let gained = self.k * (before.top - after.top);
        let unsure = self.k * (after.margin - before.margin).abs();
        let lowers =
            after.margin <= margin && gained > if least > 0.0 { least + unsure } else { least };
        if after.resolved
            && lowers
            && let Some(flux) = self.clear(e, node, at, other.z)
        {
            self.edges[e].at[side] += 1;
            self.edges[e].flux = Some(flux);
            return Ok(Slide::Moved);
        }
        let step = (new.z - old.z).norm();
        if step > (other.z - old.z).norm() && self.k * step * old.slope.norm() > SETTLED {
            return self.refine(node, at);
        }
        Ok(Slide::Blocked)
    }

    /// Whether the amplitude is analytic in the triangle between a step of an orbit and the far
    /// end of a chord, judged by its loop integral; if so, its integral along the new chord.
    fn clear(&mut self, e: usize, node: usize, at: usize, far: Complex64) -> Option<Flux> {
        let (old, new) = (self.nodes[node].orbit[at].z, self.nodes[node].orbit[at + 1].z);
        // Chords run from the left orbit to the right one.
        let left = self.edges[e].nodes[0] == node;
        let chord = |from, to| {
            if left { self.watch.flux(from, to) } else { self.watch.flux(to, from) }
        };
        let before = match self.edges[e].flux {
            Some(flux) => flux,
            None => chord(old, far)?,
        };
        let after = chord(new, far)?;
        self.edges[e].flux = Some(before);
        let steps = &mut self.nodes[node].flux;
        if steps.len() <= at {
            steps.resize(at + 1, None);
        }
        let step = match steps[at] {
            Some(flux) => flux,
            None => self.watch.flux(old, new)?,
        };
        steps[at] = Some(step);
        let turned = after.sum - before.sum;
        let sum = if left { step.sum + turned } else { step.sum - turned };
        let sides = [(new - old).norm(), (far - old).norm(), (far - new).norm()];
        self.watch.vanishes(sum, sides, [step, before, after]).then_some(after)
    }

    /// Halves a step of an orbit.
    fn refine(&mut self, node: usize, at: usize) -> Result<Slide, Error> {
        let orbit = &self.nodes[node].orbit;
        let z = (orbit[at].z + orbit[at + 1].z) * 0.5;
        let Some(site) = self.sampler.site(z) else { return Ok(Slide::Blocked) };
        self.nodes[node].orbit.insert(at + 1, site);
        self.nodes[node].flux.truncate(at);
        let Node { left, right, .. } = self.nodes[node];
        for (edge, side) in [(left, 1), (right, 0)] {
            if let Some(e) = edge
                && self.edges[e].at[side] > at
            {
                self.edges[e].at[side] += 1;
            }
        }
        Ok(Slide::Refined)
    }

    /// One more step of steepest descent on an orbit; false if there is no way down.
    fn descend(&mut self, node: usize) -> bool {
        let Node { orbit, cap, stalled, .. } = &mut self.nodes[node];
        let site = orbit[orbit.len() - 1];
        let slope = site.slope.norm();
        if *stalled || slope == 0.0 {
            *stalled = true;
            return false;
        }
        let down = -site.slope.conj() / slope;
        let mut length = (0.5 * slope / site.bend.norm()).min(*cap);
        for _ in 0..60 {
            if length <= 1e-15 * site.z.norm() || self.k * length * slope < 1e-9 {
                break;
            }
            let w = down * length;
            let z = site.z + w - site.bend / (site.slope * 2.0) * w * w;
            if let Some(next) = self.sampler.site(z)
                && next.h.re < site.h.re - 0.5 * length * slope
                && Profile::of(&site, &next, self.k).resolved
            {
                *cap = 2.0 * length;
                orbit.push(next);
                return true;
            }
            length *= 0.5;
        }
        *stalled = true;
        false
    }
}

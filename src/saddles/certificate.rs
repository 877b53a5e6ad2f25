//! The certificate: what contributes must join the two ends of the contour.
//!
//! Method. The valleys that the contributions run between, followed down below the floor, must cancel
//! against each other and against the two ends of the contour. Two points lie in one valley if the chord
//! between them stays below the floor, if not at once then after both have gone further down. Points
//! that cancel at one depth do so at every other, so one goes down only as far as is needed; how far each
//! point has been followed and which chords were looked at is kept, for one certificate asks about many
//! choices of groups. Valleys that a saddle too low to matter joins are one; this is asked only where they
//! do not cancel otherwise.

use super::topology::{SLACK, Topology};
use super::trace::trace;
use num_complex::Complex64;
use std::f64::consts::PI;

/// Depths at which points are compared.
const ROUNDS: usize = 5;

/// Pieces of a chord next to its points, over the length `|h'/h''|` on which the landscape changes there.
const FINE: f64 = 0.5;
/// How often those pieces are halved at most.
const GRADES: i32 = 10;

/// The valleys met so far, for one floor.
pub(crate) struct Certificate<'t, 'p> {
    topology: &'t Topology<'p>,
    floor: f64,
    /// Saddles with `Re(i f)` below this contribute nothing that matters.
    seen: f64,
    /// Points on the two sides of each of those.
    passes: Option<Vec<[Complex64; 2]>>,
    wells: Vec<Well>,
    /// For each pair of wells `i < j`, at `j (j - 1)/2 + i`.
    chords: Vec<Chord>,
}

/// A point below the floor and the points further down that it leads to.
struct Well {
    depths: [Complex64; ROUNDS],
    known: usize,
}

/// What is known of two wells.
#[derive(Clone, Copy, PartialEq)]
enum Chord {
    /// Not joined at so many depths.
    Apart(usize),
    /// Joined at this depth.
    Joined(usize),
}

impl<'t, 'p> Certificate<'t, 'p> {
    /// Saddles with `Re(i f)` below `seen` contribute nothing that matters.
    pub fn new(topology: &'t Topology<'p>, floor: f64, seen: f64) -> Certificate<'t, 'p> {
        Certificate { topology, floor, seen, passes: None, wells: Vec::new(), chords: Vec::new() }
    }

    /// Do the valleys (weight and a point far down in each) and the ends of the contour cancel?
    pub fn closes(&mut self, valleys: &[(i32, Complex64)]) -> bool {
        let topology = self.topology;
        let mut ends = valleys.to_vec();
        if !topology.closed {
            for (weight, tail) in [1, -1].into_iter().zip(&topology.tails) {
                ends.push((weight, tail[tail.len() - 1]));
            }
        }
        // An end at infinity must really be down there; a finite end that contributes has been
        // followed down like the others.
        let level = self.level();
        if !ends.iter().all(|(_, z)| topology.h.height(*z) <= level) {
            return false;
        }
        if self.cancel(&ends, ends.len()) {
            return true;
        }
        let plain = ends.len();
        ends.extend(self.passes().iter().flatten().map(|&z| (0, z)));
        ends.len() > plain && self.cancel(&ends, plain)
    }

    /// Whether the weights cancel in each valley. From `passes` on points are joined two by two.
    fn cancel(&mut self, ends: &[(i32, Complex64)], passes: usize) -> bool {
        let wells: Vec<usize> = ends.iter().map(|(_, z)| self.well(*z)).collect();
        // Each end's pool is that of its first member.
        let first = |n: usize| if n < passes { n } else { n - (n - passes) % 2 };
        let mut pools: Vec<usize> = (0..ends.len()).map(first).collect();
        for round in 0..ROUNDS {
            for j in 1..ends.len() {
                for i in 0..j {
                    if pools[i] != pools[j] && self.joined(wells[i], wells[j], round) {
                        let (kept, gone) = (pools[i].min(pools[j]), pools[i].max(pools[j]));
                        for pool in pools.iter_mut().filter(|pool| **pool == gone) {
                            *pool = kept;
                        }
                    }
                }
            }
            let sum = |pool: usize| -> i32 {
                ends.iter().zip(&pools).filter(|(_, p)| **p == pool).map(|(end, _)| end.0).sum()
            };
            if (0..ends.len()).all(|pool| sum(pool) == 0) {
                return true;
            }
        }
        false
    }

    /// The two sides of each saddle too low to matter, below the floor.
    fn passes(&mut self) -> Vec<[Complex64; 2]> {
        let (topology, floor, seen) = (self.topology, self.floor, self.seen);
        let sides = || {
            let low = topology.saddles.iter().filter(|saddle| -saddle.value.im < seen);
            let pair = low.filter_map(|saddle| {
                let [h, _, bend] = topology.h.jet(saddle.z);
                // A little way down: h = h_s + h'' dz^2/2.
                let step = (2.0 * SLACK * topology.drop / bend.norm()).sqrt();
                let step = step.min(0.01 * topology.longest);
                let direction = Complex64::from_polar(step, 0.5 * (PI - bend.arg()));
                if !(h.re.is_finite() && direction.re.is_finite() && direction.im.is_finite()) {
                    return None;
                }
                let sides = vec![(0, saddle.z + direction), (0, saddle.z - direction)];
                let sunk = topology.sunk(sides, floor)?;
                Some([sunk[0].1, sunk[1].1])
            });
            pair.collect()
        };
        self.passes.get_or_insert_with(sides).clone()
    }

    /// What counts as below the floor.
    fn level(&self) -> f64 {
        self.floor + SLACK * self.topology.drop
    }

    fn well(&mut self, z: Complex64) -> usize {
        if let Some(known) = self.wells.iter().position(|well| well.depths[0] == z) {
            return known;
        }
        self.chords.extend(std::iter::repeat_n(Chord::Apart(0), self.wells.len()));
        self.wells.push(Well { depths: [z; ROUNDS], known: 1 });
        self.wells.len() - 1
    }

    /// Whether two wells are joined at a depth or above it.
    fn joined(&mut self, a: usize, b: usize, round: usize) -> bool {
        if a == b {
            return true;
        }
        let (low, high) = (a.min(b), a.max(b));
        let index = high * (high - 1) / 2 + low;
        let next = match self.chords[index] {
            Chord::Joined(at) => return at <= round,
            Chord::Apart(looked_at) => looked_at,
        };
        for depth in next..=round {
            if self.below(low, high, depth) {
                self.chords[index] = Chord::Joined(depth);
                return depth <= round;
            }
            self.chords[index] = Chord::Apart(depth + 1);
        }
        false
    }

    /// Whether the chord between two wells stays below the floor.
    fn below(&mut self, a: usize, b: usize, depth: usize) -> bool {
        /// The middle first, where the hill is if there is one.
        const ORDER: [usize; 23] =
            [12, 6, 18, 9, 15, 3, 21, 1, 2, 4, 5, 7, 8, 10, 11, 13, 14, 16, 17, 19, 20, 22, 23];
        let (a, b) = (self.deep(a, depth), self.deep(b, depth));
        let level = self.level();
        let height = |z: Complex64| self.topology.h.height(z);
        let under =
            |from: Complex64, to: Complex64, part: f64| height(from + (to - from) * part) < level;
        if !ORDER.iter().all(|&piece| under(a, b, piece as f64 / 24.0)) {
            return false;
        }
        // Where the points are far apart (an end of the contour may lie far out) a hill next to one of
        // them is narrower than a piece: finer pieces there, down to its own scale.
        [(a, b), (b, a)].into_iter().all(|(near, far)| {
            let [_, slope, bend] = self.topology.h.jet(near);
            let scale = FINE * slope.norm() / bend.norm();
            let length = (far - near).norm();
            let parts = (1..=GRADES).map(|n| 0.5f64.powi(n) / 12.0);
            parts
                .take_while(|part| part * length > scale)
                .all(|part| under(near, far, 0.5 * part) && under(near, far, 0.75 * part))
        })
    }

    /// A well's point at a depth.
    fn deep(&mut self, well: usize, depth: usize) -> Complex64 {
        let topology = self.topology;
        let well = &mut self.wells[well];
        for round in well.known..=depth {
            // At last the contour's own range of heights says where valleys open.
            let deeper = self.floor
                - if round < ROUNDS - 1 {
                    topology.drop * 4f64.powi(round as i32 - 1)
                } else {
                    topology.top - topology.bottom
                };
            let mut line = vec![well.depths[round - 1]];
            if topology.h.height(line[0]) > deeper {
                trace(&topology.h, line[0], deeper, topology.longest, &mut line);
            }
            well.depths[round] = line[line.len() - 1];
            well.known = round + 1;
        }
        well.depths[depth]
    }
}

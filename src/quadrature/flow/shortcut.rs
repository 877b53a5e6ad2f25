//! Detours: a contour that crosses a ridge into a valley and comes back over the same ridge.
//!
//! Its two crossings cancel, but no descent undoes them. Where two settled crossings lie at one
//! saddle with only sunk edges between them, a chord between their outer flanks replaces the whole
//! detour and descends on the near side, provided that the loop holds no singularity of the phase
//! or the amplitude.

use super::{Edge, Flow, State};
use crate::integral::{Amplitude, Phase, Termination};
use crate::quadrature::terrain::{Profile, Site};
use num_complex::Complex64;

/// Loop integrals round a detour count as zero below this fraction.
const FRACTION: f64 = 1e-10;

impl<P: Phase, A: Amplitude> Flow<'_, P, A> {
    /// Cuts off one detour, if there is one.
    pub(super) fn shortcut(&mut self) -> bool {
        let mut chain = Vec::with_capacity(self.edges.len());
        let mut node = 0;
        while let Some(e) = self.nodes[node].right.filter(|_| chain.len() <= self.edges.len()) {
            chain.push(e);
            node = self.edges[e].nodes[1];
            if node == 0 {
                // Once round a closed contour.
                break;
            }
        }
        // Crossings: runs of settled edges.
        let runs: Vec<&[usize]> = chain
            .split(|&e| self.edges[e].state != State::Settled)
            .filter(|run| !run.is_empty())
            .collect();
        // One run may turn back by itself, two may cancel each other.
        let singles = runs.iter().map(|run| (*run, *run));
        let pairs = runs.windows(2).map(|pair| (pair[0], pair[1]));
        let found = singles.chain(pairs).find_map(|(out, back)| {
            let at = self.detour(out, back)?;
            Some((out[0], back[back.len() - 1], at))
        });
        if let Some((first, last, at)) = found {
            self.cut_off(first, last, at);
        }
        found.is_some()
    }

    /// If the way over two crossings may be replaced by a chord between its flanks, with gain:
    /// where on the two outer orbits that chord begins and ends.
    fn detour(&self, out: &[usize], back: &[usize]) -> Option<[usize; 2]> {
        let (one, two) = (self.summit(out)?, self.summit(back)?);
        let across = Profile::of(&one, &two, self.k);
        let same_saddle = across.resolved
            && self.k * (one.h.re - two.h.re).abs() < 1.0
            && self.k * (one.h.im - two.h.im).abs() < 2.0;
        let (first, last) = (&self.edges[out[0]], &self.edges[back[back.len() - 1]]);
        let (start, end) = (first.nodes[0], last.nodes[1]);
        if !same_saddle || start == end {
            return None;
        }
        let low = one.h.re.min(two.h.re);
        let before = self.nodes[start].left.map(|e| self.edges[e].at[1]);
        let after = self.nodes[end].right.map(|e| self.edges[e].at[0]);
        let at =
            [self.flank(start, first.at[0], before, low), self.flank(end, last.at[1], after, low)];
        let (from, to) = (self.nodes[start].orbit[at[0]], self.nodes[end].orbit[at[1]]);
        let direct = Profile::of(&from, &to, self.k);
        let gain = self.k * (low - direct.top - direct.margin);
        let way = || self.way(start, at[0], end, at[1]);
        (direct.resolved && gain > 1.0 && self.watch.free(&way(), &[from.z, to.z], FRACTION))
            .then_some(at)
    }

    /// How far down its orbit a node's flank may be used: to some units of 1/k below a level, as
    /// long as the contour runs there.
    fn flank(&self, node: usize, from: usize, to: Option<usize>, level: f64) -> usize {
        let orbit = &self.nodes[node].orbit;
        let limit = to.unwrap_or(orbit.len() - 1).max(from);
        (from..limit).find(|&i| self.k * (level - orbit[i].h.re) > 4.0).unwrap_or(limit)
    }

    /// The highest end of a run of edges.
    fn summit(&self, run: &[usize]) -> Option<Site> {
        let ends = run.iter().map(|&e| self.ends_of(e)).flat_map(|(a, b)| [a, b]);
        ends.max_by(|a, b| a.h.re.total_cmp(&b.h.re))
    }

    fn cut_off(&mut self, first: usize, last: usize, at: [usize; 2]) {
        let (start, end) = (self.edges[first].nodes[0], self.edges[last].nodes[1]);
        let mut node = start;
        while let Some(e) = self.nodes[node].right.filter(|_| node != end) {
            self.edges[e].state = State::Gone;
            node = self.edges[e].nodes[1];
        }
        let new = self.edges.len();
        self.edges.push(Edge { nodes: [start, end], at, flux: None, state: State::Open });
        self.nodes[start].right = Some(new);
        self.nodes[end].left = Some(new);
        self.push(new);
        // What the detour kept high is no floor any more.
        self.crest = self.lowest_crest();
    }

    /// The level that finite ends and settled edges keep.
    pub(super) fn lowest_crest(&self) -> f64 {
        let settled =
            self.edges.iter().enumerate().filter(|(_, edge)| edge.state == State::Settled);
        let tops = settled.map(|(e, _)| {
            let (a, b) = self.ends_of(e);
            Profile::of(&a, &b, self.k).top
        });
        let fixed = [(self.ends[0], 0), (self.ends[1], self.last)];
        let ends = fixed
            .iter()
            .filter(|(end, _)| *end == Termination::Finite)
            .map(|&(_, node)| self.nodes[node].orbit[0].h.re);
        tops.chain(ends).fold(f64::NEG_INFINITY, f64::max)
    }

    /// The way along the flowed contour between two points of orbits.
    pub(super) fn way(&self, start: usize, from: usize, end: usize, to: usize) -> Vec<Complex64> {
        let mut way = Vec::new();
        let (mut node, mut from) = (start, from);
        for _ in 0..=self.edges.len() {
            let edge = self.nodes[node].right.filter(|_| node != end).map(|e| &self.edges[e]);
            let leave = edge.map_or(to, |e| e.at[0]);
            let orbit = &self.nodes[node].orbit;
            if from <= leave {
                way.extend(orbit[from..=leave].iter().map(|s| s.z));
            } else {
                way.extend(orbit[leave..=from].iter().rev().map(|s| s.z));
            }
            let Some(edge) = edge else { break };
            (node, from) = (edge.nodes[1], edge.at[1]);
        }
        way
    }
}

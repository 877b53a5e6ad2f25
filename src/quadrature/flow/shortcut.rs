//! Detours: a contour that crosses a ridge into a valley and comes back over the same ridge.
//!
//! Its two crossings cancel, but no descent undoes them. Where two settled crossings lie at one
//! saddle with only sunk edges between them, the chord between their outer ends replaces the whole
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
        }
        // Crossings: runs of settled edges.
        let runs: Vec<&[usize]> = chain
            .split(|&e| self.edges[e].state != State::Settled)
            .filter(|run| !run.is_empty())
            .collect();
        for pair in runs.windows(2) {
            let (first, last) = (pair[0][0], pair[1][pair[1].len() - 1]);
            if self.detour(pair[0], pair[1]) {
                self.cut_off(first, last);
                return true;
            }
        }
        false
    }

    /// Whether the way over two crossings may be replaced by the chord between its ends, with gain.
    fn detour(&self, out: &[usize], back: &[usize]) -> bool {
        let (Some(one), Some(two)) = (self.summit(out), self.summit(back)) else { return false };
        let (from, to) = (self.ends_of(out[0]).0, self.ends_of(back[back.len() - 1]).1);
        let (across, direct) = (Profile::of(&one, &two, self.k), Profile::of(&from, &to, self.k));
        let same_saddle = across.resolved
            && self.k * (one.h.re - two.h.re).abs() < 1.0
            && self.k * (one.h.im - two.h.im).abs() < 2.0;
        let gain = self.k * (one.h.re.min(two.h.re) - direct.top - direct.margin);
        if !same_saddle || !direct.resolved || gain < 1.0 {
            return false;
        }
        let (start, end) = (self.edges[out[0]].nodes[0], self.edges[back[back.len() - 1]].nodes[1]);
        let way =
            self.way(start, self.edges[out[0]].at[0], end, self.edges[back[back.len() - 1]].at[1]);
        start != end && self.watch.free(&way, &[from.z, to.z], FRACTION)
    }

    /// The highest end of a run of edges.
    fn summit(&self, run: &[usize]) -> Option<Site> {
        let ends = run.iter().map(|&e| self.ends_of(e)).flat_map(|(a, b)| [a, b]);
        ends.max_by(|a, b| a.h.re.total_cmp(&b.h.re))
    }

    fn cut_off(&mut self, first: usize, last: usize) {
        let (start, end) = (self.edges[first].nodes[0], self.edges[last].nodes[1]);
        let at = [self.edges[first].at[0], self.edges[last].at[1]];
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

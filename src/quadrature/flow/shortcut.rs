//! Detours: a contour that crosses a ridge into a valley and comes back over the same ridge.
//!
//! Its two crossings cancel, but no descent undoes them; a contour led through a saddle of several
//! valleys may cross more ridges in turn. Where a chord between the outer flanks of two settled crossings
//! lies below both, it replaces the whole detour and descends on the near side, provided that the loop
//! holds no singularity of the phase or the amplitude.

use super::{Edge, Flow, State};
use crate::integral::{Amplitude, Phase, Termination};
use crate::quadrature::terrain::{Profile, Site};
use num_complex::Complex64;

/// Pairs of crossings that are looked at.
const PAIRS: usize = 60;
/// How far down the contour runs between two crossings, in units of 1/k.
const VALLEY: f64 = 3.0;
/// Pieces of a chord that is not resolved.
const PIECES: usize = 12;
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
        // Crossings: runs of settled edges with no valley between.
        let runs: Vec<&[usize]> = chain
            .chunk_by(|&e, &f| !self.valley_between(e, f))
            .filter(|run| self.edges[run[0]].state == State::Settled)
            .collect();
        // One run may turn back by itself, two may cancel each other, or several lead round a saddle.
        let pairs = (0..runs.len()).flat_map(|apart| {
            let last = runs.len() - apart;
            (0..last).map(move |first| (first, first + apart))
        });
        let found = pairs.take(PAIRS).find_map(|(first, last)| {
            let (out, back) = (runs[first], runs[last]);
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
        let (first, last) = (&self.edges[out[0]], &self.edges[back[back.len() - 1]]);
        let (start, end) = (first.nodes[0], last.nodes[1]);
        if start == end {
            return None;
        }
        let low = one.h.re.min(two.h.re);
        let before = self.nodes[start].left.map(|e| self.edges[e].at[1]);
        let after = self.nodes[end].right.map(|e| self.edges[e].at[0]);
        let at =
            [self.flank(start, first.at[0], before, low), self.flank(end, last.at[1], after, low)];
        let (from, to) = (self.nodes[start].orbit[at[0]], self.nodes[end].orbit[at[1]]);
        let gain = self.k * (low - self.direct(&from, &to)?);
        let way = || self.way(start, at[0], end, at[1]);
        (gain > 1.0 && self.watch.free(&way(), &[from.z, to.z], FRACTION)).then_some(at)
    }

    /// Whether two neighbouring edges are parts of different crossings: one of them is not settled, or
    /// the contour runs down into a valley between them.
    fn valley_between(&self, e: usize, f: usize) -> bool {
        let (left, right) = (&self.edges[e], &self.edges[f]);
        if left.state != State::Settled || right.state != State::Settled {
            return true;
        }
        let lowest = left.at[1].max(right.at[0]);
        let floor = self.nodes[left.nodes[1]].orbit[lowest].h.re;
        let top = |edge: usize| {
            let (a, b) = self.ends_of(edge);
            a.h.re.max(b.h.re)
        };
        self.k * (top(e).min(top(f)) - floor) > VALLEY
    }

    /// The height of a chord, cut in pieces if it is not resolved at once; None if it can't be told.
    fn direct(&self, from: &Site, to: &Site) -> Option<f64> {
        let whole = Profile::of(from, to, self.k);
        if whole.resolved {
            return Some(whole.top + whole.margin);
        }
        let mut top = f64::NEG_INFINITY;
        let mut last = *from;
        for piece in 1..=PIECES {
            let next =
                self.sampler.site(from.z + (to.z - from.z) * (piece as f64 / PIECES as f64))?;
            let part = Profile::of(&last, &next, self.k);
            if !part.resolved {
                return None;
            }
            top = top.max(part.top + part.margin);
            last = next;
        }
        Some(top)
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

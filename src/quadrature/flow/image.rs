//! The flowed contour, read off from the orbits and chords.

use super::super::terrain::Site;
use super::{Edge, Flow, State};
use crate::Error;
use crate::integral::{Amplitude, Contour, Phase, Termination};
use num_complex::Complex64;

/// Steps of the tail that runs to infinity.
const TAIL: usize = 2_000;

/// The flowed contour: straight pieces above the floor, and what was left out.
pub(in super::super) struct Flowed {
    /// Pieces in their order and direction.
    pub pieces: Vec<(Site, Site)>,
    /// Pieces below the floor, left out.
    pub sunk: Vec<(Site, Site)>,
    /// Points from which the contour runs on to infinity, left out, each with a point farther out.
    pub tails: Vec<(Site, Site)>,
    /// The floor, in units of `Re h`.
    pub floor: f64,
}

impl<P: Phase, A: Amplitude> Flow<'_, P, A> {
    /// Runs the orbit of an end at infinity down below a level; returns the index there.
    fn tail(&mut self, node: usize, from: usize, level: f64) -> Result<usize, Error> {
        for at in from..from + TAIL {
            if self.nodes[node].orbit[at].h.re <= level {
                return Ok(at);
            }
            if at + 1 == self.nodes[node].orbit.len() && !self.descend(node) {
                break;
            }
        }
        let orbit = &self.nodes[node].orbit;
        Err(Error::Undecided {
            reason: format!(
                "the end of the contour at z = {:.6} finds no way down to infinity: its descent \
                 ends near z = {:.6}",
                orbit[0].z,
                orbit[orbit.len() - 1].z
            ),
            remedy: "let the contour end inside a valley of |exp(i k f)| clear of branch cuts, or at \
                     a finite point",
        })
    }

    /// The flowed contour with the way of its ends down from the vertices of the given one.
    pub fn image(&self) -> Vec<Complex64> {
        if !matches!(self.ends[0], Termination::Closed) {
            // The first and the last orbit are followed back up to their own vertices.
            return self.way(0, 0, self.last, 0);
        }
        let first = self.first_index();
        let Some(e) = self.nodes[0].right else { return Vec::new() };
        let Edge { nodes: [_, next], at: [leave, arrive], .. } = self.edges[e];
        let orbit = &self.nodes[0].orbit;
        let mut image: Vec<_> =
            orbit[first.min(leave)..=first.max(leave)].iter().map(|s| s.z).collect();
        if first > leave {
            image.reverse();
        }
        image.extend(self.way(next, arrive, 0, first));
        image
    }

    /// Whether the flowed contour is in the class of the given one, as far as residues of the
    /// amplitude down to a fraction of its size can tell.
    pub fn keeps_class(&self, contour: &Contour, image: &[Complex64], fraction: f64) -> bool {
        self.watch.same_class(contour.points(), image, fraction)
    }

    /// Where on the first vertex's orbit the contour begins: its vertex, or the end of the last edge
    /// of a closed contour.
    fn first_index(&self) -> usize {
        self.nodes[0].left.map_or(0, |e| self.edges[e].at[1])
    }

    /// The flowed contour down to `depth/k` under its highest level.
    pub fn contour(&mut self, depth: f64) -> Result<Flowed, Error> {
        let floor = self.crest - depth / self.k;
        let mut out = Flowed { pieces: Vec::new(), sunk: Vec::new(), tails: Vec::new(), floor };
        let mut node = 0;
        let mut from = match self.ends[0] {
            Termination::Finite | Termination::Closed => self.first_index(),
            Termination::Downhill => {
                let at = self.nodes[0].right.map_or(0, |e| self.edges[e].at[0]);
                self.end_at_infinity(0, at, depth, &mut out)?
            }
        };
        // A path through all nodes, from edge to edge.
        for _ in 0..=self.edges.len() {
            let Some(e) = self.nodes[node].right else { break };
            let Edge { nodes: [_, next], at: [leave, arrive], state, .. } = self.edges[e];
            along(&self.nodes[node].orbit, from, leave, &mut out.pieces);
            let chord = self.ends_of(e);
            if state == State::Sunk {
                out.sunk.push(chord)
            } else {
                out.pieces.push(chord)
            }
            (node, from) = (next, arrive);
            if node == 0 {
                break;
            }
        }
        let to = match self.ends[1] {
            Termination::Finite => 0,
            Termination::Closed => from,
            Termination::Downhill => self.end_at_infinity(node, from, depth, &mut out)?,
        };
        along(&self.nodes[node].orbit, from, to, &mut out.pieces);
        Ok(out)
    }

    /// Where the contour is cut off towards infinity; it is followed as deep again to see how it
    /// runs down.
    fn end_at_infinity(
        &mut self,
        node: usize,
        from: usize,
        depth: f64,
        out: &mut Flowed,
    ) -> Result<usize, Error> {
        let at = self.tail(node, from, self.crest - depth / self.k)?;
        let level = self.nodes[node].orbit[at].h.re - depth / self.k;
        let far = self.tail(node, at, level)?;
        let orbit = &self.nodes[node].orbit;
        out.tails.push((orbit[at], orbit[far]));
        Ok(at)
    }
}

/// The pieces of an orbit from one index to another, in either direction.
fn along(orbit: &[Site], from: usize, to: usize, pieces: &mut Vec<(Site, Site)>) {
    if from <= to {
        pieces.extend(orbit[from..=to].windows(2).map(|w| (w[0], w[1])));
    } else {
        pieces.extend(orbit[to..=from].windows(2).rev().map(|w| (w[1], w[0])));
    }
}

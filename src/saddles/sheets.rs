//! Which clusters a contour needs, and on which sheet, where an end of it is algebraic.
//!
//! Method. The power `(z - b)^(lambda - 1)` of an algebraic end is continued along the contour `C`
//! and, from the middle of a cluster's ring, along the cluster's ridges. Where `C` crosses a ridge the
//! two differ by `n` turns: that crossing counts for the sheet `n` of the cluster, whose contribution
//! carries `e^(2 pi i lambda n)`.
//!
//! About the end itself rings are taken with the end at their hub. There the valleys are numbered on
//! without end, `V`, one turn being `D` of them; `C` begins between two ridges, which gives the first
//! `V`, and each crossing of a ridge leads on to the next. The contour is then the sum of the paths
//! from the end to the valleys `V`, each with a weight.
//!
//! Source: worked out for this crate; the ridges as in `topology`.

use super::crossings::each_crossing;
use super::topology::{DELTA, Multiplicities, Topology};
use super::trace::{Ended, trace};
use crate::ring::{BasedForm, MAX_DEGREE, MAX_SADDLES, NormalForm, preimage, unit_points};
use num_complex::Complex64;
use std::f64::consts::PI;

/// An algebraic end of a contour.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Branch {
    pub base: Complex64,
    pub lambda: f64,
    /// The direction of the contour as seen from the end: angles are counted from it.
    pub unit: Complex64,
    /// The power's phase in that direction.
    pub constant: Complex64,
    /// 0 for the start of the contour, 1 for its finish.
    pub end: usize,
}

impl Branch {
    /// The angle of a point seen from the end, within half a turn of the contour's direction.
    pub fn angle(&self, z: Complex64) -> f64 {
        ((z - self.base) / self.unit).arg()
    }
}

/// Turns about each of the (at most two) branches.
pub(crate) type Turns = [i32; 2];

/// A cluster's multiplicities on one sheet.
pub(crate) type Sheets = Vec<(Turns, Multiplicities)>;

/// A polyline with its lifted angles about each branch.
struct Line {
    points: Vec<Complex64>,
    lifts: [Vec<f64>; 2],
}

impl Line {
    /// Angles from those of the first vertex on; where that is the branch itself, `None`: from the
    /// second vertex on, at the angle nearest the contour's direction.
    fn new(points: Vec<Complex64>, branches: &[Branch], first: [Option<f64>; 2]) -> Line {
        let mut lifts = [Vec::new(), Vec::new()];
        for ((list, branch), first) in lifts.iter_mut().zip(branches).zip(first) {
            list.push(first.unwrap_or(0.0));
            for (i, pair) in points.windows(2).enumerate() {
                let angle = match first {
                    None if i == 0 => branch.angle(pair[1]),
                    _ => list[i] + turn(branch.base, pair[0], pair[1]),
                };
                list.push(angle);
            }
        }
        Line { points, lifts }
    }

    fn reversed(mut self) -> Line {
        self.points.reverse();
        for list in &mut self.lifts {
            list.reverse();
        }
        self
    }

    /// The angle about a branch at a point of piece `i`: from the vertex that is farther away.
    fn lift(&self, branch: &Branch, slot: usize, i: usize, z: Complex64) -> f64 {
        let far = |j: usize| (self.points[j] - branch.base).norm();
        let j = if far(i) >= far(i + 1) { i } else { i + 1 };
        self.lifts[slot][j] + turn(branch.base, self.points[j], z)
    }

    /// Signed crossings of this ridge by a path, with the turns that the path is ahead.
    fn crossed_by(&self, path: &Line, branches: &[Branch], mut take: impl FnMut(i32, Turns)) {
        each_crossing(&self.points, &path.points, |sign, i, j| {
            let z =
                meet([self.points[i], self.points[i + 1]], [path.points[j], path.points[j + 1]]);
            let mut turns = [0; 2];
            for (slot, branch) in branches.iter().enumerate() {
                let ahead = path.lift(branch, slot, j, z) - self.lift(branch, slot, i, z);
                turns[slot] = (ahead / (2.0 * PI)).round() as i32;
            }
            take(sign, turns);
        });
    }
}

/// The angle by which a straight piece turns about a point.
fn turn(base: Complex64, from: Complex64, to: Complex64) -> f64 {
    let angle = ((to - base) / (from - base)).arg();
    if angle.is_finite() { angle } else { 0.0 }
}

/// Where two pieces cross.
fn meet(r: [Complex64; 2], p: [Complex64; 2]) -> Complex64 {
    let cross = |a: Complex64, b: Complex64| a.re * b.im - a.im * b.re;
    let (along, step) = (r[1] - r[0], p[1] - p[0]);
    let t = cross(p[0] - r[0], step) / cross(along, step);
    if t.is_finite() { r[0] + along * t } else { r[0] }
}

/// The paths from an algebraic end to the valleys of a ring about it.
#[derive(Clone, Debug)]
pub(crate) struct Unrolled {
    /// The valley that the end's own descent leads to.
    pub own: i32,
    /// Valley, turns about the other branch, weight: the whole contour.
    pub weights: Vec<(i32, i32, i32)>,
    /// A point of the ring in each valley, by number modulo `D`.
    pub points: [Option<Complex64>; MAX_DEGREE],
}

/// A contour with algebraic ends.
pub(crate) struct Sheeting<'t, 'p> {
    topology: &'t Topology<'p>,
    branches: &'t [Branch],
    path: Line,
    tails: [Line; 2],
    /// The exact ends of the contour.
    ends: [Complex64; 2],
    /// The descents that an algebraic end contributes: turns about either branch against the tail,
    /// and weight. One without turns, unless the contour winds round its end.
    copies: [Vec<(Turns, i32)>; 2],
}

impl<'p> Topology<'p> {
    /// The contour's angles about its algebraic ends.
    pub fn sheeting<'t>(
        &'t self,
        branches: &'t [Branch],
        ends: [Complex64; 2],
    ) -> Sheeting<'t, 'p> {
        // The path's vertices are moved by a hair: not those that are a hub of ridges.
        let mut vertices = self.path.clone();
        let last = vertices.len() - 1;
        for branch in branches {
            vertices[branch.end * last] = branch.base;
        }
        // Branch by branch, from the end where it begins.
        let mut lifts = [Vec::new(), Vec::new()];
        for (slot, branch) in branches.iter().enumerate() {
            let mut points = vertices.clone();
            if branch.end == 1 {
                points.reverse();
            }
            let mut first = [Some(0.0); 2];
            first[slot] = None;
            let mut line = Line::new(points, branches, first);
            if branch.end == 1 {
                line = line.reversed();
            }
            lifts[slot] = std::mem::take(&mut line.lifts[slot]);
        }
        let path = Line { points: vertices, lifts };
        let tails = [0, 1].map(|end| {
            let mut first = [Some(0.0); 2];
            for (slot, branch) in branches.iter().enumerate() {
                let list = &path.lifts[slot];
                let there = if end == 0 { list[0] } else { list[list.len() - 1] };
                first[slot] = (branch.end != end).then_some(there);
            }
            Line::new(self.tails[end].clone(), branches, first)
        });
        let copies = [vec![([0; 2], 1)], vec![([0; 2], 1)]];
        Sheeting { topology: self, branches, path, tails, ends, copies }
    }
}

impl Sheeting<'_, '_> {
    /// The lifted angle of the contour's start (0) or finish (1) about a branch.
    pub fn at_end(&self, slot: usize, end: usize) -> f64 {
        let list = &self.path.lifts[slot];
        let lift = if end == 0 { list[0] } else { list[list.len() - 1] };
        if self.branches[slot].end == end {
            return lift;
        }
        // The path's own vertices are moved by a hair.
        near(self.branches[slot].angle(self.ends[end]), lift)
    }

    /// The contour's algebraic ends.
    pub fn branches(&self) -> &[Branch] {
        self.branches
    }

    /// Whether an end of the contour lies on the sheet on which powers are continued from a centre.
    pub fn same_sheet(&self, end: usize, z: Complex64, centre: Complex64) -> bool {
        self.branches.iter().enumerate().all(|(slot, branch)| {
            let there = branch.angle(centre) + turn(branch.base, centre, z);
            (self.at_end(slot, end) - there).abs() < PI
        })
    }

    /// Takes note of how often an algebraic end's descent is needed, and on which sheets.
    pub fn set_copies(&mut self, slot: usize, unrolled: &Unrolled) {
        let list = unrolled.weights.iter().map(|&(valley, sheet, weight)| {
            let mut turns = [sheet; 2];
            turns[slot] = valley - unrolled.own;
            (turns, weight)
        });
        self.copies[self.branches[slot].end] = list.collect();
    }

    /// The same as turns about the end, about the other branch, weight.
    pub fn copies(&self, slot: usize) -> impl Iterator<Item = (i32, i32, i32)> + '_ {
        let list = &self.copies[self.branches[slot].end];
        list.iter().map(move |&(turns, weight)| (turns[slot], turns[1 - slot], weight))
    }

    /// Multiplicities of a cluster sheet by sheet, the power on its ring being continued from its
    /// value at the centre, within half a turn of the contour's direction at the branch. None if a
    /// ridge could not be followed.
    pub fn multiplicities(&self, form: &NormalForm, centre: Complex64) -> Option<Sheets> {
        let hub = Complex64::from_polar(0.043, 1.234);
        let first = |z: Complex64| {
            let mut first = [Some(0.0); 2];
            for (slot, branch) in self.branches.iter().enumerate() {
                first[slot] = Some(branch.angle(centre) + turn(branch.base, centre, z));
            }
            first
        };
        let mut sheets: Sheets = vec![([0; 2], [0; MAX_SADDLES + 1])];
        for (j, v) in self.topology.ridges(form).into_iter().enumerate().take(form.degree()) {
            let v = v?;
            const PIECES: usize = 6;
            let mut points: Vec<Complex64> = (0..=PIECES)
                .map(|piece| form.point(hub + (v - hub) * (piece as f64 / PIECES as f64)))
                .collect();
            let spoke = Line::new(points.clone(), self.branches, first(points[0]));
            self.climb(&mut points)?;
            let ridge = Line::new(
                points,
                self.branches,
                spoke.lifts.each_ref().map(|l| l.first().copied()),
            );
            let mut add = |sign: i32, turns: Turns| {
                let index = sheets.iter().position(|sheet| sheet.0 == turns).unwrap_or_else(|| {
                    sheets.push((turns, [0; MAX_SADDLES + 1]));
                    sheets.len() - 1
                });
                sheets[index].1[j] += sign;
            };
            ridge.crossed_by(&self.path, self.branches, &mut add);
            for (end, direction) in [(0, -1), (1, 1)] {
                spoke.crossed_by(&self.tails[end], self.branches, |sign, turns| {
                    for (shift, weight) in &self.copies[end] {
                        let turns = [turns[0] + shift[0], turns[1] + shift[1]];
                        add(direction * sign * weight, turns);
                    }
                });
            }
        }
        Some(sheets)
    }

    /// Continues a spoke uphill until it is above the contour.
    fn climb(&self, points: &mut Vec<Complex64>) -> Option<()> {
        let t = self.topology;
        let start = *points.last()?;
        let low = t.h.height(start) < t.top;
        (!low || trace(&t.h, start, t.top, t.longest, points) != Ended::Stalled).then_some(())
    }

    /// The contour as paths from the algebraic end in the given slot to the valleys of a ring about
    /// it; a contour that finishes there is looked at backwards. `start` is the angle of `dz/du` at the
    /// end. None if it cannot be followed.
    pub fn unrolled(&self, form: &BasedForm, slot: usize, start: f64) -> Option<Unrolled> {
        let branch = &self.branches[slot];
        let degree = form.degree() as i32;
        let arcs = BasedArcs::new(form);
        let other = 1 - slot;
        // The contour from the end on.
        let backwards = branch.end == 1;
        let orient = if backwards { -1 } else { 1 };
        let far_tail = &self.tails[1 - branch.end];
        let mut weights: Vec<(i32, i32, i32)> = Vec::new();
        let mut first: Option<(f64, i32)> = None;
        let mut crossed: Vec<(i32, Turns, i32)> = Vec::new();
        for j in 0..degree {
            let v = arcs.ridges[j as usize]?;
            // The number of a ridge belongs to an angle of its own.
            let nominal = (2.0 * PI * f64::from(j + 1) - 0.5 * PI) / f64::from(degree);
            let angle = near(v.arg(), nominal);
            const PIECES: usize = 12;
            let mut points: Vec<Complex64> =
                (1..=PIECES).map(|piece| form.point(v * (piece as f64 / PIECES as f64))).collect();
            let begin = near(branch.angle(points[0]), start + angle);
            // Close to the end, but not in it: the contour begins there.
            points.insert(0, branch.base + (points[0] - branch.base) * 1e-9);
            let mut firsts = [Some(0.0); 2];
            firsts[slot] = Some(begin);
            if other < self.branches.len() {
                firsts[other] = Some(self.at_end(other, branch.end));
            }
            let spoke = Line::new(points.clone(), self.branches, firsts);
            self.climb(&mut points)?;
            let ridge = Line::new(points, self.branches, firsts);
            ridge.crossed_by(&self.path, self.branches, |sign, turns| {
                crossed.push((j, turns, orient * sign));
            });
            // Looked at from the end the far tail leads away from the contour either way.
            spoke.crossed_by(far_tail, self.branches, |sign, turns| crossed.push((j, turns, sign)));
            // The ridge next after the contour's own direction.
            for turns in -3..=3 {
                let at = begin + 2.0 * PI * f64::from(turns);
                if at > 0.0 && first.is_none_or(|f| at < f.0) {
                    first = Some((at, j + degree * turns));
                }
            }
        }
        let mut add = |valley: i32, sheet: i32, weight: i32| match weights
            .iter_mut()
            .find(|w| w.0 == valley && w.1 == sheet)
        {
            Some(found) => found.2 += weight,
            None => weights.push((valley, sheet, weight)),
        };
        add(first?.1, 0, 1);
        for (j, turns, sign) in crossed {
            let ridge = j + degree * turns[slot];
            let sheet = if other < self.branches.len() { turns[other] } else { 0 };
            add(ridge + 1, sheet, sign);
            add(ridge, sheet, -sign);
        }
        weights.retain(|w| w.2 != 0);
        let own = self.descent(form, slot, start)?;
        let points = arcs.valleys.map(|v| v.map(|v| form.point(v)));
        Some(Unrolled { own, weights, points })
    }

    /// The valley by which the end's own descent leaves a ring; `start`: the angle of `dz/du`.
    fn descent(&self, form: &BasedForm, slot: usize, start: f64) -> Option<i32> {
        let line = &self.tails[self.branches[slot].end];
        let mut v = Complex64::new(0.0, 0.0);
        let mut angle = 0.0;
        'line: for (i, pair) in line.points.windows(2).enumerate() {
            // The first piece may be far longer than the ring.
            let finest = if i == 0 { -12 } else { -2 };
            for power in finest..=0 {
                let z = pair[0] + (pair[1] - pair[0]) * 2f64.powi(power);
                let Some(ahead) = preimage(form.map(), z, v) else { break 'line };
                let first = i == 0 && power == finest;
                let before = if first { line.lifts[slot][1] - start } else { angle };
                angle = near(ahead.arg(), before);
                v = ahead;
                if v.norm() > 1.0 {
                    break 'line;
                }
            }
        }
        if v.norm() <= 1.1 * form.filling() {
            return None;
        }
        let lift = lift(form, v, angle);
        Some(((lift - PI) / (2.0 * PI)).round() as i32)
    }
}

/// The angle nearest to another, up to whole turns.
fn near(angle: f64, other: f64) -> f64 {
    angle + 2.0 * PI * ((other - angle) / (2.0 * PI)).round()
}

/// `arg(i u Phi')` at `u = R v` beyond the saddles, with the given angle of `v`.
fn lift(form: &BasedForm, v: Complex64, angle: f64) -> f64 {
    let turns: f64 = form.saddles().map(|s| (1.0 - s / v).arg()).sum();
    0.5 * PI + form.degree() as f64 * angle + turns
}

/// Ridges and valleys of a ring about an end point.
struct BasedArcs {
    ridges: [Option<Complex64>; MAX_DEGREE],
    valleys: [Option<Complex64>; MAX_DEGREE],
}

impl BasedArcs {
    fn new(form: &BasedForm) -> BasedArcs {
        let degree = form.degree() as i64;
        let i = Complex64::new(0.0, 1.0) * Complex64::from_polar(1.0, DELTA);
        let mut arcs = BasedArcs { ridges: [None; MAX_DEGREE], valleys: [None; MAX_DEGREE] };
        let mut best = [f64::NEG_INFINITY; MAX_DEGREE];
        let mut least = [f64::INFINITY; MAX_DEGREE];
        for &v in unit_points() {
            let lift = lift(form, v, v.arg()) + DELTA;
            let (phi, slope) = form.unfolding(v);
            let (height, slope) = ((phi * i).re, (slope * i).re);
            if slope > 0.0 {
                let j = ((lift / (2.0 * PI)).round() as i64 - 1).rem_euclid(degree) as usize;
                if height > best[j] {
                    best[j] = height;
                    arcs.ridges[j] = Some(v);
                }
            } else {
                let valley = ((lift - PI) / (2.0 * PI)).round() as i64;
                let j = valley.rem_euclid(degree) as usize;
                if height < least[j] {
                    least[j] = height;
                    arcs.valleys[j] = Some(v);
                }
            }
        }
        arcs
    }
}

//! Which clusters a contour needs, between which of their valleys, with sign.
//!
//! Method. On the ring of a cluster's normal form `Re(i Phi)` has K+2 ridges between K+2 valleys.
//! Ridge `j` lies between valleys `j` and `j + 1`. From each ridge the steepest ascent is followed
//! until it is above the whole contour; `m_j` is the number of signed crossings of that line with
//! the contour. The cluster contributes `sum_j m_j E_j`, `E_j` the canonical integral from valley
//! `j` to valley `j + 1`. No saddle inside the ring needs a label.
//!
//! The phase is turned by a small angle first, which takes real problems off their Stokes lines.
//! Work goes from the highest cluster downwards; the first that contributes sets a floor, below
//! which nothing needs an evaluation.
//!
//! A contributing saddle that was not found leaves a valley over: see `certificate`.
//!
//! Source: steepest descent and Picard-Lefschetz theory, e.g. M. V. Berry, C. J. Howls, Proc. R.
//! Soc. Lond. A 434 (1991) 657, from memory; ridge counting on a ring was worked out for
//! this crate.

use super::Saddle;
use super::crossings::crossings;
use super::trace::{Ended, Exponent, trace};
use crate::integral::{Contour, Phase};
use crate::ring::{MAX_SADDLES, NormalForm, unit_points};
use num_complex::Complex64;
use std::f64::consts::PI;

/// `m_j` for each ridge of a cluster; all equal means no contribution.
pub(crate) type Multiplicities = [i32; MAX_SADDLES + 1];

/// How exactly a traced point keeps the height it was sent to, in units of the drop.
pub(super) const SLACK: f64 = 0.05;
/// The angle that the exponent is turned by.
pub(super) const DELTA: f64 = 0.03;

/// The contour as the topology sees it.
#[derive(Clone)]
pub(crate) struct Topology<'a> {
    pub(super) h: Exponent<'a>,
    /// The given path, its points moved by a hair so that none lies on a ridge.
    pub(super) path: Vec<Complex64>,
    /// The descents from both ends and the path, in one line: counted inside rings only.
    whole: Vec<Complex64>,
    pub(super) tails: [Vec<Complex64>; 2],
    /// The contour has no ends.
    pub(super) closed: bool,
    pub(super) saddles: Vec<Saddle>,
    pub(super) top: f64,
    pub(super) bottom: f64,
    pub(super) drop: f64,
    pub(super) longest: f64,
}

impl<'a> Topology<'a> {
    /// The heights of the contour alone. `drop`: how far below the highest contribution a cluster may lie
    /// and still matter.
    pub fn new(phase: &'a dyn Phase, contour: &Contour, drop: f64) -> Topology<'a> {
        let h = Exponent::new(phase, DELTA);
        let points = contour.points();
        let size = points.windows(2).map(|p| (p[1] - p[0]).norm()).fold(0.0, f64::max);
        let mut path: Vec<Complex64> = points
            .iter()
            .enumerate()
            .map(|(n, z)| z + Complex64::from_polar(1e-9 * size, 1.0 + 2.4 * n as f64))
            .collect();
        let closed = contour.is_closed();
        if closed {
            let last = path.len() - 1;
            path[last] = path[0];
        }
        let mut top = f64::NEG_INFINITY;
        let mut bottom = f64::INFINITY;
        for side in path.windows(2) {
            const PIECES: usize = 24;
            for piece in 0..=PIECES {
                let height =
                    h.height(side[0] + (side[1] - side[0]) * (piece as f64 / PIECES as f64));
                top = top.max(height);
                bottom = bottom.min(height);
            }
        }
        Topology {
            h,
            tails: [path[0], path[path.len() - 1]].map(|end| vec![end]),
            whole: path.clone(),
            path,
            closed,
            saddles: Vec::new(),
            top: top + 0.02 * (top - bottom) + 1e-12 * top.abs(),
            bottom,
            drop,
            longest: size,
        }
    }

    /// With the saddles near, and the descents from the contour's ends.
    pub fn with_saddles(mut self, saddles: &[Saddle]) -> Self {
        self.saddles = saddles.to_vec();
        let heights = saddles.iter().map(|s| self.h.of(s.value).re);
        let deep = heights.fold(self.bottom, f64::min) - self.drop;
        if !self.closed {
            for tail in &mut self.tails {
                trace(&self.h, tail[0], deep, self.longest, tail);
            }
        }
        let [first, last] = &self.tails;
        self.whole = first.iter().rev().chain(&self.path[1..]).chain(&last[1..]).copied().collect();
        self
    }

    /// Whether a point lies so far below the highest point of the contour that it may not matter.
    pub fn is_low(&self, z: Complex64) -> bool {
        self.h.height(z) < self.top - self.drop
    }

    /// `Re h` of a phase value, in the turned exponent.
    pub fn turned_height(&self, value: Complex64) -> f64 {
        self.h.of(value).re
    }

    /// The least height on the given path.
    pub fn bottom(&self) -> f64 {
        self.bottom
    }

    /// True if a saddle of this height lies above the whole contour and so can't contribute.
    pub fn above(&self, height: f64) -> bool {
        height > self.top
    }

    /// The multiplicities of one cluster; None if a ridge could not be followed.
    pub fn multiplicities(&self, form: &NormalForm) -> Option<Multiplicities> {
        let arcs = self.arcs(form);
        let mut m = [0; MAX_SADDLES + 1];
        // Any hub inside the ring will do; a generic one does not lie on the contour.
        let hub = Complex64::from_polar(0.043, 1.234);
        for (m, arc) in m.iter_mut().zip(&arcs.ridges).take(form.degree()) {
            let v = (*arc)?;
            const PIECES: usize = 6;
            let spoke: Vec<Complex64> = (0..=PIECES)
                .map(|piece| form.point(hub + (v - hub) * (piece as f64 / PIECES as f64)))
                .collect();
            let start = spoke[PIECES];
            let mut ridge = vec![start];
            if self.h.height(start) < self.top
                && trace(&self.h, start, self.top, self.longest, &mut ridge) == Ended::Stalled
            {
                return None;
            }
            *m = crossings(&spoke, &self.whole) + crossings(&ridge, &self.path);
        }
        Some(m)
    }

    /// The valleys that a contribution runs between: weight and a point far down in each.
    /// None if one can't be followed below `floor`.
    pub fn valleys(
        &self,
        form: &NormalForm,
        m: &Multiplicities,
        floor: f64,
    ) -> Option<Vec<(i32, Complex64)>> {
        let arcs = self.arcs(form);
        let degree = form.degree();
        let mut list = Vec::new();
        for v in 0..degree {
            let weight = m[(v + degree - 1) % degree] - m[v];
            if weight == 0 {
                continue;
            }
            let mut point = form.point(arcs.valleys[v]?);
            if self.h.height(point) > floor {
                let mut line = vec![point];
                if trace(&self.h, point, floor, self.longest, &mut line) == Ended::Stalled {
                    return None;
                }
                point = line[line.len() - 1];
            }
            list.push((weight, point));
        }
        Some(list)
    }

    /// An end of the contour whose descent stops above a level: where, and how far down it came.
    pub fn stuck_end(&self, floor: f64) -> Option<(Complex64, f64)> {
        if self.closed {
            return None;
        }
        let lowest = self.tails.iter().map(|tail| tail[tail.len() - 1]);
        let heights = lowest.map(|z| (z, self.h.height(z)));
        heights.into_iter().find(|(_, height)| *height > floor + SLACK * self.drop)
    }

    /// The descents from the start and from the end of the contour, each from its end point on.
    pub fn tails(&self) -> [&[Complex64]; 2] {
        [&self.tails[0], &self.tails[1]]
    }

    /// The valley through which a path, given from a point inside the ring (at `v`) on, leaves it.
    /// A path that ends inside is continued in the normal form.
    pub fn leaves_by_valley(form: &NormalForm, v: Complex64, path: &[Complex64]) -> Option<usize> {
        let turns = (leaves(form, v, path, -1.0)? - PI) / (2.0 * PI);
        Some((turns.round() as i64).rem_euclid(form.degree() as i64) as usize)
    }

    /// The same for a path that leaves by a ridge.
    pub fn leaves_by_ridge(form: &NormalForm, v: Complex64, path: &[Complex64]) -> Option<usize> {
        let turns = leaves(form, v, path, 1.0)? / (2.0 * PI) - 1.0;
        Some((turns.round() as i64).rem_euclid(form.degree() as i64) as usize)
    }

    /// The ridge that the steepest ascent of `Re(i Phi)` from `v`, outside the ring, climbs.
    pub fn climbs_to(form: &NormalForm, v: Complex64) -> Option<usize> {
        let goal = 1.5 * v.norm().max(1.0);
        let turn = Complex64::from_polar(1.0, DELTA);
        let mut v = v;
        for _ in 0..1000 {
            if v.norm() > goal {
                let turns = lift(form, &form.saddles_on_disc(), v) / (2.0 * PI) - 1.0;
                return Some((turns.round() as i64).rem_euclid(form.degree() as i64) as usize);
            }
            let gradient = (form.radial_slope(v) / v * turn).conj();
            if !(gradient.norm() > 0.0 && gradient.norm().is_finite()) {
                return None;
            }
            v += gradient * (0.02 / gradient.norm());
        }
        None
    }

    /// The steepest ascent from a point until it is above the contour, and how often the contour
    /// crosses it from right to left. None if it can't be followed.
    pub fn ascent(&self, z: Complex64) -> Option<(Vec<Complex64>, i32)> {
        let mut path = vec![z];
        if self.h.height(z) < self.top
            && trace(&self.h, z, self.top, self.longest, &mut path) == Ended::Stalled
        {
            return None;
        }
        let count = crossings(&path, &self.path);
        Some((path, count))
    }

    /// The highest point of each ridge's arc, in the plane of `v`.
    pub fn ridges(&self, form: &NormalForm) -> [Option<Complex64>; MAX_SADDLES + 1] {
        self.arcs(form).ridges
    }

    /// Points followed down below a level; None if one stalls.
    pub fn sunk(&self, points: Vec<(i32, Complex64)>, floor: f64) -> Option<Vec<(i32, Complex64)>> {
        let mut list = Vec::with_capacity(points.len());
        for (weight, z) in points {
            let mut line = vec![z];
            if self.h.height(z) > floor
                && trace(&self.h, z, floor, self.longest, &mut line) == Ended::Stalled
            {
                return None;
            }
            list.push((weight, line[line.len() - 1]));
        }
        Some(list)
    }

    /// The highest point of each ridge's arc on the ring, the lowest of each valley's.
    fn arcs(&self, form: &NormalForm) -> Arcs {
        let degree = form.degree() as i64;
        let saddles = form.saddles_on_disc();
        let turn = Complex64::from_polar(1.0, DELTA);
        let mut arcs = Arcs { ridges: [None; MAX_SADDLES + 1], valleys: [None; MAX_SADDLES + 1] };
        let mut best = [f64::NEG_INFINITY; MAX_SADDLES + 1];
        let mut least = [f64::INFINITY; MAX_SADDLES + 1];
        // The number of an arc, by its lift, is the same on all of it: asked for at its extreme only.
        let mut close = |climbs: bool, height: f64, v: Complex64| {
            let turns = (lift(form, &saddles, v) + DELTA) / (2.0 * PI);
            if climbs {
                let j = (turns.round() as i64 - 1).rem_euclid(degree) as usize;
                if height > best[j] {
                    (best[j], arcs.ridges[j]) = (height, Some(v));
                }
            } else {
                let j = ((turns - 0.5).round() as i64).rem_euclid(degree) as usize;
                if height < least[j] {
                    (least[j], arcs.valleys[j]) = (height, Some(v));
                }
            }
        };
        let mut arc: Option<(bool, f64, Complex64)> = None;
        // Every second point: ten or more on each arc.
        for &v in unit_points().iter().step_by(2) {
            let climbs = (form.radial_slope(v) * turn).re > 0.0;
            let height = -(form.unfolding_at(v) * turn).im;
            arc = match arc {
                Some((up, extreme, at)) if up == climbs => {
                    let further = if up { height > extreme } else { height < extreme };
                    Some(if further { (up, height, v) } else { (up, extreme, at) })
                }
                other => {
                    if let Some((up, extreme, at)) = other {
                        close(up, extreme, at);
                    }
                    Some((climbs, height, v))
                }
            };
        }
        if let Some((up, extreme, at)) = arc {
            close(up, extreme, at);
        }
        // To where i u Phi' is real: for a single saddle the steepest paths through it, whose sides of other
        // saddles matter.
        for (list, sign) in [(&mut arcs.ridges, 1.0), (&mut arcs.valleys, -1.0)] {
            for v in list.iter_mut().flatten() {
                for _ in 0..4 {
                    let off = (form.radial_slope(*v) * turn * sign).arg().clamp(-0.5, 0.5);
                    *v *= Complex64::from_polar(1.0, -off / degree as f64);
                }
            }
        }
        arcs
    }
}

/// `arg(i u Phi')` at `u = R v`, lifted from infinity: `pi/2 + D arg u + sum arg(1 - u_s/u)`, every
/// term of the sum within a quarter turn where all zeros of `Phi'` lie nearer the origin. Ridge `j` is
/// where it is near `2 pi (j + 1)`, valley `j` where it is near `2 pi j + pi`.
fn lift(form: &NormalForm, saddles: &[Complex64; MAX_SADDLES], v: Complex64) -> f64 {
    let turns: f64 = saddles[..form.saddles()].iter().map(|s| (1.0 - s / v).arg()).sum();
    0.5 * PI + form.degree() as f64 * v.arg() + turns
}

/// The lift where a path from `v` inside the ring leaves it (some way out, for a path that starts
/// close to the ring).
fn leaves(form: &NormalForm, v: Complex64, path: &[Complex64], direction: f64) -> Option<f64> {
    let saddles = form.saddles_on_disc();
    let mut v = v;
    let mut last = *path.first()?;
    let mut seen = v.norm();
    'path: for &next in &path[1..] {
        const PIECES: usize = 4;
        for piece in 1..=PIECES {
            let z = last + (next - last) * (piece as f64 / PIECES as f64);
            match form.preimage(z, v) {
                Some(ahead) => v = ahead,
                None => break 'path,
            }
            // Going out, and far enough out.
            if v.norm() > 1.0 && v.norm() > seen + 0.1 {
                break 'path;
            }
            seen = seen.min(v.norm());
        }
        last = next;
    }
    // On by small steps along the gradient of Re(i e^(i delta) Phi), up (+1) or down (-1).
    let turn = Complex64::from_polar(direction, DELTA);
    for _ in 0..400 {
        if v.norm() > 1.0 {
            break;
        }
        let gradient = (form.radial_slope(v) / v * turn).conj();
        if !(gradient.norm() > 0.0 && gradient.norm().is_finite()) {
            return None;
        }
        v += gradient * (0.02 / gradient.norm());
    }
    (v.norm() > 1.0).then(|| lift(form, &saddles, v))
}

struct Arcs {
    ridges: [Option<Complex64>; MAX_SADDLES + 1],
    valleys: [Option<Complex64>; MAX_SADDLES + 1],
}

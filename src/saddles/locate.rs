//! All saddles of a phase in a rectangle, from closures alone.
//!
//! Method. The change of `arg f'` round a rectangle counts the zeros of `f'` inside (argument
//! principle). A rectangle with one to five of them is tried by simultaneous iteration
//! (Ehrlich and Aberth's correction to Newton's method), which is accepted when just that many
//! points settle inside; otherwise it is quartered and counted again.
//!
//! Regions. Merged saddles come out as several points within about the root of the rounding error
//! of their centre: good enough as a start for the ring, which never uses their differences.
//! Poles of `f'` count against its zeros; a count is believed where the mean of `f'` over the circle
//! round the rectangle is its value at the centre. Rectangles that cannot be counted (a branch cut
//! or a pole of `f`) are quartered a few times and then only searched by Newton's method from their
//! centre.
//!
//! Source: argument principle, textbook; O. Aberth, Math. Comp. 27 (1973) 339.

use crate::Error;
use crate::integral::Phase;
use crate::ring::MAX_SADDLES;
use num_complex::Complex64;
use std::cell::Cell;

/// A rectangle in the complex plane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Region {
    /// Lower left corner.
    pub low: Complex64,
    /// Upper right corner.
    pub high: Complex64,
}

impl Region {
    /// The smallest rectangle round some points, widened on each side by `margin` times its
    /// larger side.
    pub fn around(points: &[Complex64], margin: f64) -> Region {
        let infinity = Complex64::new(f64::INFINITY, f64::INFINITY);
        let (mut low, mut high) = (infinity, -infinity);
        for z in points {
            low = Complex64::new(low.re.min(z.re), low.im.min(z.im));
            high = Complex64::new(high.re.max(z.re), high.im.max(z.im));
        }
        let side = (high.re - low.re).max(high.im - low.im);
        let pad = Complex64::new(side, side) * margin;
        Region { low: low - pad, high: high + pad }
    }

    /// The longer side.
    pub fn size(&self) -> f64 {
        (self.high.re - self.low.re).max(self.high.im - self.low.im)
    }

    /// Larger by this part on each side.
    fn widened(&self, margin: f64) -> Region {
        let pad = (self.high - self.low) * margin;
        Region { low: self.low - pad, high: self.high + pad }
    }

    fn centre(&self) -> Complex64 {
        (self.low + self.high) * 0.5
    }

    pub(crate) fn holds(&self, z: Complex64, slack: f64) -> bool {
        let slack = slack * self.size();
        z.re >= self.low.re - slack
            && z.re <= self.high.re + slack
            && z.im >= self.low.im - slack
            && z.im <= self.high.im + slack
    }

    /// Four parts, cut off-centre so that symmetric phases put no zero on an edge.
    fn quarters(&self) -> [Region; 4] {
        let extent = self.high - self.low;
        let cut = self.low + Complex64::new(extent.re * 0.483_7, extent.im * 0.518_1);
        let (l, h) = (self.low, self.high);
        [
            Region { low: l, high: cut },
            Region { low: Complex64::new(cut.re, l.im), high: Complex64::new(h.re, cut.im) },
            Region { low: Complex64::new(l.re, cut.im), high: Complex64::new(cut.re, h.im) },
            Region { low: cut, high: h },
        ]
    }
}

/// A zero of `f'`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Saddle {
    /// Its place.
    pub z: Complex64,
    /// `f` there.
    pub value: Complex64,
}

/// A phase that answers so many times only, then with NaN.
struct Metered<'a> {
    phase: &'a dyn Phase,
    left: Cell<usize>,
}

impl Metered<'_> {
    fn is_spent(&self) -> bool {
        let left = self.left.get();
        self.left.set(left.saturating_sub(1));
        left == 0
    }
}

impl Phase for Metered<'_> {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        if self.is_spent() { (NAN, NAN) } else { self.phase.value_and_derivative(z) }
    }

    fn derivative(&self, z: Complex64) -> Complex64 {
        if self.is_spent() { NAN } else { self.phase.derivative(z) }
    }

    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        if self.is_spent() { [NAN; 3] } else { self.phase.jet(z) }
    }
}

const NAN: Complex64 = Complex64::new(f64::NAN, f64::NAN);

/// Rectangles that are looked at in one search.
const RECTANGLES: usize = 3000;
/// Saddles found twice are this close, in units of a part.
const SAME: f64 = 1e-3;
/// Values of `f'` that a search may take for each saddle that it may find: some 300 are used where many
/// are found, 15,000 for a few beside poles and cuts.
const EVALUATIONS: usize = 1000;
/// The same in all.
const MOST_EVALUATIONS: usize = 1_000_000;
/// Depth of quartering where the count is clean.
const DEPTH: u32 = 18;
/// Depth from which on a count that its quarters do not bear out is that of merged saddles.
const DEEP: u32 = 12;
/// Depth of quartering where it is not, or where `f'` may have a pole.
const POLE_DEPTH: u32 = 5;

/// All zeros of `f'` in the region, multiple ones repeated.
///
/// # Errors
/// If the saddles can't be told apart within a bounded number of rectangles.
///
/// ```
/// use merging_saddles::{Complex64, saddles::{Region, locate}};
/// // f = z^3/3 - z has its saddles at +-1 (elementary).
/// let f = |z: Complex64| (z.powi(3) / 3.0 - z, z * z - 1.0);
/// let region = Region { low: Complex64::new(-2.1, -1.0), high: Complex64::new(2.0, 1.2) };
/// let found = locate(&f, region)?;
/// assert_eq!(found.len(), 2);
/// assert!(found.iter().all(|s| (s.z * s.z - 1.0).norm() < 1e-12));
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn locate(phase: &dyn Phase, region: Region) -> Result<Vec<Saddle>, Error> {
    locate_few(phase, region, usize::MAX)
}

/// The same for `most` saddles at most.
///
/// # Errors
/// If there are more, too.
pub(crate) fn locate_few(
    phase: &dyn Phase,
    region: Region,
    most: usize,
) -> Result<Vec<Saddle>, Error> {
    let budget = most.saturating_mul(EVALUATIONS).min(MOST_EVALUATIONS);
    let given = phase;
    let phase = &Metered { phase, left: Cell::new(budget) };
    let mut found: Vec<Complex64> = Vec::new();
    let mut stack = vec![(region, 0u32)];
    let mut seen = 0;
    let total = region.size();
    loop {
        let reason = if found.len() > most {
            format!("more than {most} saddles near the contour are too many")
        } else if seen > RECTANGLES {
            format!("more than {RECTANGLES} rectangles were needed to count the saddles")
        } else if phase.left.get() == 0 {
            format!("more than {budget} values of f' were needed to count the saddles")
        } else {
            String::new()
        };
        if !reason.is_empty() {
            let remedy = "give a contour that stays closer to where the saddles are";
            return Err(Error::Undecided { reason, remedy });
        }
        let Some((part, depth)) = stack.pop() else { break };
        seen += 1;
        // Poles of f' count against its zeros: believe a count where there is none.
        let count = winding(phase, &part).filter(|_| depth >= POLE_DEPTH || regular(phase, &part));
        match count {
            Some(0) => continue,
            Some(n) if n > 0 && n as usize <= MAX_SADDLES => {
                if let Some(roots) = simultaneous(phase, &part, n as usize) {
                    add(&mut found, &part, &roots[..n as usize]);
                    continue;
                }
                // Merged saddles may be lost in the rounding of f' before they are told apart.
                let uncountable = |quarter: &Region| winding(phase, quarter).is_none();
                if depth == DEPTH || (depth >= DEEP && part.quarters().iter().any(uncountable)) {
                    found.extend(std::iter::repeat_n(part.centre(), n as usize));
                    continue;
                }
            }
            None if depth >= POLE_DEPTH => {
                // An edge may run close to a saddle.
                let wide = part.widened(0.07);
                if let Some(n) = winding(phase, &wide)
                    && (1..=MAX_SADDLES as i64).contains(&n)
                    && let Some(roots) = simultaneous(phase, &wide, n as usize)
                {
                    add(&mut found, &wide, &roots[..n as usize]);
                    continue;
                }
                if let Some(roots) = simultaneous(phase, &part, 1) {
                    let new = |z: &Complex64| (z - roots[0]).norm() > 1e-7 * total;
                    if found.iter().all(new) {
                        found.push(roots[0]);
                    }
                }
                continue;
            }
            _ if depth == DEPTH => continue,
            _ => {}
        }
        stack.extend(part.quarters().map(|quarter| (quarter, depth + 1)));
    }
    Ok(found.into_iter().map(|z| Saddle { z, value: given.value(z) }).collect())
}

/// All saddles in a part, of which some may be known already: merged ones by their number, since the
/// places are not exact.
fn add(found: &mut Vec<Complex64>, part: &Region, roots: &[Complex64]) {
    let mut new = [Complex64::new(0.0, 0.0); MAX_SADDLES];
    let mut count = roots.len();
    new[..count].copy_from_slice(roots);
    for known in found.iter().filter(|z| part.holds(**z, 1e-6)) {
        let distance = |n: &usize| (new[*n] - known).norm();
        let nearest = (0..count).min_by(|a, b| distance(a).total_cmp(&distance(b)));
        if let Some(nearest) = nearest.filter(|n| distance(n) < SAME * part.size()) {
            count -= 1;
            new.swap(nearest, count);
        }
    }
    found.extend(&new[..count]);
}

/// Zeros minus poles of `f'` inside, or None where `arg f'` could not be followed.
fn winding(phase: &dyn Phase, region: &Region) -> Option<i64> {
    let (l, h) = (region.low, region.high);
    let corners = [l, Complex64::new(h.re, l.im), h, Complex64::new(l.re, h.im), l];
    let mut turn = 0.0;
    for side in corners.windows(2) {
        const PIECES: usize = 6;
        let mut z = side[0];
        let mut d = slope(phase, z)?;
        for piece in 1..=PIECES {
            let next = side[0] + (side[1] - side[0]) * (piece as f64 / PIECES as f64);
            let d_next = slope(phase, next)?;
            turn += turning(phase, (z, d), (next, d_next), 12)?;
            (z, d) = (next, d_next);
        }
    }
    let count = turn / (2.0 * std::f64::consts::PI);
    ((count - count.round()).abs() < 0.05).then(|| count.round() as i64)
}

/// Whether `f'` looks analytic in the circle round a rectangle: its mean there is the value at the
/// centre (a pole inside spoils that, one close outside may).
fn regular(phase: &dyn Phase, region: &Region) -> bool {
    const POINTS: usize = 64;
    let centre = region.centre();
    let radius = 0.51 * (region.high - region.low).norm();
    let (mut mean, mut size) = (Complex64::new(0.0, 0.0), 0.0f64);
    for n in 0..POINTS {
        let turn = Complex64::from_polar(radius, std::f64::consts::TAU * n as f64 / POINTS as f64);
        let Some(d) = slope(phase, centre + turn) else { return false };
        mean += d / POINTS as f64;
        size = size.max(d.norm());
    }
    slope(phase, centre).is_some_and(|d| (mean - d).norm() < 1e-9 * size)
}

fn slope(phase: &dyn Phase, z: Complex64) -> Option<Complex64> {
    let d = phase.derivative(z);
    (d.re.is_finite() && d.im.is_finite() && d.norm() > 0.0).then_some(d)
}

/// The change of `arg f'` along a chord, halved until the midpoint agrees with both ends.
fn turning(
    phase: &dyn Phase,
    from: (Complex64, Complex64),
    to: (Complex64, Complex64),
    depth: u32,
) -> Option<f64> {
    let middle = (from.0 + to.0) * 0.5;
    let d = slope(phase, middle)?;
    let (first, second) = ((d / from.1).ln(), (to.1 / d).ln());
    // The size may not change too much either: exp turns by whole turns over one chord.
    let calm = first.re.abs() < 3.0 && second.re.abs() < 3.0;
    let (first, second) = (first.im, second.im);
    // Beside two saddles close to the chord a whole turn would be missed: there f' is far from its mean.
    let straight = ((from.1 + to.1) * 0.5 - d).norm_sqr() < d.norm_sqr();
    if first.abs() < 0.8 && second.abs() < 0.8 && straight && (calm || depth < 8) {
        return Some(first + second);
    }
    if depth == 0 {
        return None;
    }
    Some(
        turning(phase, from, (middle, d), depth - 1)? + turning(phase, (middle, d), to, depth - 1)?,
    )
}

/// `count` zeros of `f'` inside the region at once; None unless just that many settle there.
fn simultaneous(
    phase: &dyn Phase,
    region: &Region,
    count: usize,
) -> Option<[Complex64; MAX_SADDLES]> {
    let centre = region.centre();
    let half = (region.high - region.low) * 0.5;
    let mut z = [centre; MAX_SADDLES];
    for (j, z) in z.iter_mut().enumerate().take(count) {
        let turn =
            Complex64::from_polar(0.45, 0.7 + std::f64::consts::TAU * j as f64 / count as f64);
        *z += Complex64::new(turn.re * half.re, turn.im * half.im);
    }
    let size = region.size();
    let mut largest = f64::INFINITY;
    for _ in 0..40 {
        let mut step = 0.0f64;
        for j in 0..count {
            let [_, d, dd] = phase.jet(z[j]);
            if d.norm() == 0.0 {
                continue;
            }
            let newton = d / dd;
            let mut repulsion = Complex64::new(0.0, 0.0);
            for other in (0..count).filter(|&other| other != j && z[other] != z[j]) {
                repulsion += (z[j] - z[other]).inv();
            }
            let mut change = newton / (1.0 - newton * repulsion);
            if !(change.re.is_finite() && change.im.is_finite()) {
                return None;
            }
            // A long step is a guess; do not let it leave the neighbourhood at once.
            if change.norm() > size {
                change *= size / change.norm();
            }
            z[j] -= change;
            step = step.max(change.norm());
        }
        let settled = step < 1e-13 * size || (step < 1e-6 * size && step > 0.5 * largest);
        largest = step;
        if settled {
            break;
        }
    }
    let inside = z[..count].iter().all(|&z| region.holds(z, 1e-6));
    (largest < 1e-5 * size && inside).then_some(z)
}

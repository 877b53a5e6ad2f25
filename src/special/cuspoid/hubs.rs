//! Where the descents begin: saddles of the phase, alone or in groups.
//!
//! Saddles: zeros of `h'`, all at once (Aberth's iteration), in the unit of the outermost.
//! Groups: about a group of `m` saddles the Taylor term of degree `m + 1` leads. If there is a
//! circle on which it exceeds all others together and is not itself negligible, `m + 1` arms leave
//! the group downhill; else the group takes in its nearest neighbour. All saddles in one group
//! always have such a circle.

use super::polynomial::{Polynomial, ZERO, shifted};
use num_complex::Complex64;

/// Saddles at most.
pub(super) const SADDLES: usize = 5;

/// A group of saddles.
#[derive(Clone, Copy, Debug)]
pub(super) struct Hub {
    /// A point in its middle; the saddle itself if it is alone.
    pub at: Complex64,
    /// The exponent about that point.
    pub local: Polynomial,
    /// Number of arms.
    pub arms: usize,
    /// Where the arms begin.
    pub radius: f64,
}

/// The hubs of one phase.
pub(super) struct Hubs {
    pub list: [Hub; SADDLES],
    pub count: usize,
}

/// One hub serves all saddles while its arms begin at most this far down.
const SMALL: f64 = 10.0;

/// The largest power of two below the size of the outermost saddle, roughly:
/// `max |c_m|^(1/(D-m))` up to a factor two.
fn unit<const D: usize>(h: &Polynomial) -> f64 {
    let mut top = i64::MIN;
    for (m, c) in h.iter().enumerate().take(D - 1).skip(1) {
        let size = c.re.abs().max(c.im.abs());
        if size > 0.0 {
            let exponent = (size.to_bits() >> 52) as i64 - 1023;
            top = top.max(exponent.div_euclid((D - m) as i64));
        }
    }
    crate::scaled::pow2(top.clamp(-300, 300))
}

/// Zeros of `h'`.
fn saddles<const D: usize>(h: &Polynomial) -> [Complex64; SADDLES] {
    const STEPS: usize = 40;
    let unit = unit::<D>(h);
    // Monic, in the variable t/unit.
    let mut p = [ZERO; 7];
    p[D - 1] = Complex64::new(1.0, 0.0);
    let mut power = unit;
    for m in (1..D - 1).rev() {
        power *= unit;
        p[m - 1] = h[m] / h[D] * (m as f64 / (D as f64 * power));
    }
    let n = D - 1;
    let mut roots = [ZERO; SADDLES];
    for (j, root) in roots.iter_mut().enumerate().take(n) {
        let angle = 0.4 + std::f64::consts::TAU * j as f64 / n as f64;
        *root = Complex64::from_polar(0.8, angle);
    }
    for _ in 0..STEPS {
        let mut moved = 0.0f64;
        for j in 0..n {
            let r = roots[j];
            let (mut f, mut g) = (p[n], ZERO);
            for m in (0..n).rev() {
                g = g * r + f;
                f = f * r + p[m];
            }
            if f.norm_sqr() < 1e-60 {
                continue;
            }
            let mut repulsion = ZERO;
            for (i, other) in roots.iter().enumerate().take(n) {
                let gap = r - other;
                if i != j && gap.norm_sqr() > 1e-30 {
                    repulsion += gap.inv();
                }
            }
            let mut step = f / (g - f * repulsion);
            let size = step.norm_sqr();
            if size > 1.0 {
                step /= size.sqrt();
            }
            roots[j] -= step;
            moved = moved.max(step.norm_sqr());
        }
        if moved < 1e-8 {
            break;
        }
    }
    roots.map(|r| r * unit)
}

/// A group of `count` saddles round `at`, if arms can leave it.
fn hub<const D: usize>(h: &Polynomial, at: Complex64, count: usize, ahead: f64) -> Option<Hub> {
    let local = shifted::<D>(h, at);
    let arms = count + 1;
    let size = |m: usize| local[m].re.abs().max(local[m].im.abs());
    // From the circle on which the leading term is HIGH, or its neighbours take over, inwards.
    const HIGH: f64 = 5.0;
    const LOW: f64 = 0.05;
    let lead = size(arms);
    if lead == 0.0 {
        return None;
    }
    let root = |x: f64| if arms == 2 { x.sqrt() } else { x.powf(1.0 / arms as f64) };
    let mut radius = root(HIGH / lead);
    let last = arms == D;
    let shrink = if last { 1.2 } else { 0.8 };
    for _ in 0..60 {
        let (mut others, mut power) = (0.0, 1.0);
        let mut leading = 0.0;
        for m in 1..=D {
            power *= radius;
            if m == arms {
                leading = size(m) * power;
            } else {
                others += size(m) * power;
            }
        }
        if leading > ahead * others {
            return Some(Hub { at, local, arms, radius });
        }
        if !last && leading < LOW {
            return None;
        }
        radius *= shrink;
    }
    None
}

/// All hubs, the leading term of each `ahead` times the others together where its arms begin; None
/// if no grouping works.
pub(super) fn hubs<const D: usize>(h: &Polynomial, ahead: f64) -> Option<Hubs> {
    let n = D - 1;
    let blank = Hub { at: ZERO, local: [ZERO; 7], arms: 0, radius: 0.0 };
    // Small parameters: one group without looking for saddles.
    if let Some(hub) = hub::<D>(h, ZERO, n, ahead)
        && hub.radius.powi(D as i32) < SMALL
    {
        let mut list = [blank; SADDLES];
        list[0] = hub;
        return Some(Hubs { list, count: 1 });
    }
    let roots = saddles::<D>(h);
    let mut centre = roots;
    let mut members = [1usize; SADDLES];
    let mut list = [blank; SADDLES];
    let mut ready = [false; SADDLES];
    let mut count = n;
    // Each round either finishes a group or makes two into one.
    for _ in 0..2 * n {
        let Some(j) = (0..count).find(|&j| !ready[j]) else {
            return Some(Hubs { list, count });
        };
        let at = if members[j] == n { ZERO } else { polished::<D>(h, centre[j], members[j]) };
        if let Some(hub) = hub::<D>(h, at, members[j], ahead) {
            list[j] = hub;
            ready[j] = true;
            continue;
        }
        let nearest = (0..count).filter(|&i| i != j).min_by(|&a, &b| {
            let gap = |i: usize| (centre[i] - centre[j]).norm_sqr();
            gap(a).total_cmp(&gap(b))
        })?;
        let (a, b) = (j.min(nearest), j.max(nearest));
        let total = members[a] + members[b];
        centre[a] = (centre[a] * members[a] as f64 + centre[b] * members[b] as f64) / total as f64;
        members[a] = total;
        ready[a] = false;
        count -= 1;
        centre[b] = centre[count];
        members[b] = members[count];
        ready[b] = ready[count];
        list[b] = list[count];
    }
    None
}

/// Newton steps towards the zero of the derivative of order `count`, which is simple where
/// `count` saddles meet.
fn polished<const D: usize>(h: &Polynomial, start: Complex64, count: usize) -> Complex64 {
    let mut t = start;
    for _ in 0..2 {
        let local = shifted::<D>(h, t);
        let step = local[count] / (local[count + 1] * (count + 1) as f64);
        if step.norm_sqr() < 1e-2 * t.norm_sqr() {
            t -= step;
        } else {
            return start;
        }
    }
    t
}

impl Hub {
    /// Directions of the arms: `(i c s^(m+1))` falls steepest there.
    pub fn directions(&self) -> [Complex64; SADDLES + 1] {
        let lead = self.local[self.arms];
        // lead * d^arms = -|lead|
        let angle = (std::f64::consts::PI - lead.arg()) / self.arms as f64;
        let turn = std::f64::consts::TAU / self.arms as f64;
        let mut out = [ZERO; SADDLES + 1];
        for (j, d) in out.iter_mut().enumerate().take(self.arms) {
            *d = Complex64::from_polar(1.0, angle + turn * j as f64);
        }
        out
    }

    /// Height above the plain.
    pub fn height(&self) -> f64 {
        self.local[0].re
    }
}

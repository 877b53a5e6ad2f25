//! Watching the amplitude: no singularity of it may lie between a contour and its flowed image.
//!
//! While the contour moves, the loop integral of the amplitude round every swept triangle is
//! formed; it must vanish (Cauchy's theorem, DLMF 1.9(iii)), else the contour stays where it is. In
//! a first run three-point rules see the singularities that matter locally. At the end one loop
//! integral over the contour and its image, to nearly all digits, tells whether a weak one was
//! passed; then a second run watches with 16-point rules. All integrals carry a polynomial weight,
//! so that poles of any order have a residue.

use super::rule;
use super::terrain::Sampler;
use crate::integral::{Amplitude, Phase};
use num_complex::Complex64;
use std::cell::Cell;

/// How far a value of the amplitude may be from the cubic through its neighbours on a chord.
const SMOOTH: f64 = 0.05;
/// Panels of the loop integral over the whole contour.
const PANELS: usize = 40_000;

/// Relative errors of a panel that are put up with: near a pole, at a distance of about the panel's
/// length, the rounding of `z` makes noise.
fn noise(from: Complex64, to: Complex64) -> f64 {
    (64.0 * f64::EPSILON * from.norm().max(to.norm()) / (to - from).norm()).max(1e-11)
}

/// The integral of the amplitude along a chord, and its largest modulus there.
#[derive(Clone, Copy, Debug)]
pub(super) struct Flux {
    pub sum: Complex64,
    pub peak: f64,
    /// Error of the sum, where it is known.
    pub error: f64,
}

pub(super) struct Watch<'a, P, A> {
    sampler: &'a Sampler<'a, P, A>,
    /// Watch with all digits.
    strict: bool,
    /// Origin and scale of the weight.
    origin: Complex64,
    size: f64,
    /// The first value met, and whether others differed.
    first: Cell<Option<Complex64>>,
    varies: Cell<bool>,
}

impl<'a, P: Phase, A: Amplitude> Watch<'a, P, A> {
    pub fn new(sampler: &'a Sampler<'a, P, A>, strict: bool, origin: Complex64, size: f64) -> Self {
        Watch { sampler, strict, origin, size, first: Cell::new(None), varies: Cell::new(false) }
    }

    /// The amplitude times `1 + s + s^2/2 + s^3/6`, `s` the distance from the origin: nearly
    /// everywhere a pole of any order has a residue then.
    fn weighted(&self, z: Complex64) -> Option<Complex64> {
        let g = self.sampler.amplitude(z)?;
        match self.first.get() {
            None => self.first.set(Some(g)),
            Some(first) if first != g => self.varies.set(true),
            _ => {}
        }
        let weighted = g * self.weight(z);
        (weighted.re.is_finite() && weighted.im.is_finite()).then_some(weighted)
    }

    fn weight(&self, z: Complex64) -> Complex64 {
        let s = (z - self.origin) / self.size;
        ((s / 3.0 + 1.0) * s * 0.5 + 1.0) * s + 1.0
    }

    /// The integral along a chord; `None` where the values on it do not describe the amplitude:
    /// near a singularity, or across a jump.
    pub fn flux(&self, from: Complex64, to: Complex64) -> Option<Flux> {
        if self.strict {
            let zero = Complex64::new(0.0, 0.0);
            let panel =
                rule::panel(from, to, |z| self.weighted(z).map(|g| [g, zero]).ok_or(())).ok()?;
            let good = panel.defect <= noise(from, to) * panel.size;
            return good.then_some(Flux {
                sum: panel.value,
                peak: panel.peak,
                error: panel.defect,
            });
        }
        // Nodes +-sqrt(3/5) and 0, weights 5/9 and 8/9 (Gauss-Legendre, n = 3; DLMF 3.5.19).
        const NODE: f64 = 0.774_596_669_241_483_4;
        let (mid, half) = ((from + to) * 0.5, (to - from) * 0.5);
        let ends = (self.weighted(from)?, self.weighted(to)?);
        let inner = (self.weighted(mid - half * NODE)?, self.weighted(mid + half * NODE)?);
        let centre = self.weighted(mid)?;
        let all = [ends.0, ends.1, inner.0, inner.1, centre];
        let peak = all.iter().fold(0.0, |p, g| g.norm().max(p));
        // The centre by the cubic through the other four.
        let cubic = (inner.0 + inner.1) * 1.25 - (ends.0 + ends.1) * 0.75;
        let sum = half * ((inner.0 + inner.1) * (5.0 / 9.0) + centre * (8.0 / 9.0));
        ((cubic - centre).norm() <= SMOOTH * peak).then_some(Flux { sum, peak, error: 0.0 })
    }

    /// Whether a loop integral round a triangle counts as zero. The measure is its shortest side,
    /// so that a thin triangle across a branch cut shows, too.
    pub fn vanishes(&self, sum: Complex64, sides: [f64; 3], fluxes: [Flux; 3]) -> bool {
        let peak = fluxes.iter().fold(0.0, |p, f| f.peak.max(p));
        let error = fluxes.iter().map(|f| f.error).sum::<f64>();
        let shortest = sides.iter().fold(f64::INFINITY, |s, &x| x.min(s));
        let rounding = 8.0 * f64::EPSILON * sides.iter().sum::<f64>();
        let share = if self.strict { 1e-12 } else { 3e-5 };
        sum.norm() <= (share * shortest + rounding) * peak + error
    }

    /// Whether the loop over a contour and back over its image is free of residues, to the given
    /// fraction of the integral of the modulus.
    pub fn same_class(&self, there: &[Complex64], back: &[Complex64], fraction: f64) -> bool {
        if !self.varies.get() {
            return true;
        }
        self.equal(there, back, fraction, &|z| self.weighted(z))
    }

    /// The same for amplitude and phase, for a loop that no triangles have filled. The weight is
    /// that of the loop, however small.
    pub fn free(&self, there: &[Complex64], back: &[Complex64], fraction: f64) -> bool {
        let size = there.iter().map(|z| (z - there[0]).norm()).fold(0.0, f64::max);
        let local = Watch::new(self.sampler, self.strict, there[0], size);
        let slope = |z| self.sampler.site(z).map(|s| s.slope * local.weight(z));
        local.equal(there, back, fraction, &|z| local.weighted(z))
            && local.equal(there, back, fraction, &slope)
    }

    fn equal(
        &self,
        there: &[Complex64],
        back: &[Complex64],
        fraction: f64,
        value: &dyn Fn(Complex64) -> Option<Complex64>,
    ) -> bool {
        match (along(there, fraction, value), along(back, fraction, value)) {
            (Some(out), Some(home)) => {
                let allowed = fraction * out.size.max(home.size) + 3.0 * (out.error + home.error);
                (out.sum - home.sum).norm() <= allowed
            }
            _ => false,
        }
    }
}

/// An integral along a path, of the modulus, and its error.
struct Total {
    sum: Complex64,
    size: f64,
    error: f64,
}

/// The integral along a path.
fn along(
    path: &[Complex64],
    fraction: f64,
    value: &dyn Fn(Complex64) -> Option<Complex64>,
) -> Option<Total> {
    let zero = Complex64::new(0.0, 0.0);
    let panel = |from, to| rule::panel(from, to, |z| value(z).map(|g| [g, zero]).ok_or(())).ok();
    let mut stack = Vec::with_capacity(path.len());
    let mut rough = 0.0;
    for leg in path.windows(2) {
        let whole = panel(leg[0], leg[1])?;
        rough += whole.size;
        stack.push((leg[0], leg[1], whole));
    }
    let mut total = Total { sum: zero, size: 0.0, error: 0.0 };
    for _ in 0..PANELS {
        let Some((from, to, part)) = stack.pop() else { return Some(total) };
        if part.defect <= (0.01 * fraction * rough).max(noise(from, to) * part.size) {
            total.sum += part.value;
            total.size += part.size;
            total.error += part.defect;
        } else {
            let mid = (from + to) * 0.5;
            stack.push((mid, to, panel(mid, to)?));
            stack.push((from, mid, panel(from, mid)?));
        }
    }
    None
}

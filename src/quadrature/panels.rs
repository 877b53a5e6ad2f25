//! Adaptive quadrature on straight pieces, by 16-point Gauss-Legendre panels.
//!
//! Each panel carries some Legendre coefficients of its integrand (`rule`). The rule is exact to
//! degree 31, and its error is extrapolated from the decay between degrees 6 and 13; the worst
//! panels are halved until the sum is small enough. The last coefficients of the exponent, which
//! varies little on a panel, measure the rounding noise of the caller's phase.

use super::rule;
use super::terrain::{Profile, Sampler, Site};
use crate::Error;
use crate::integral::{Amplitude, Phase};
use num_complex::Complex64;

/// Panels after which the quadrature is given up.
const PANELS: usize = 40_000;
/// Estimated errors of the rule below this multiple of the rounding noise may be noise themselves.
const NOISE: f64 = 4.0;
/// Halvings of a piece beside a named pole at most.
const NEAREST: u32 = 24;
/// The greatest change of `k h` over a new panel.
const VARIATION: f64 = 10.0;

const ZERO: Complex64 = Complex64::new(0.0, 0.0);

struct Panel {
    from: Complex64,
    to: Complex64,
    value: Complex64,
    /// Integral of the modulus.
    size: f64,
    /// Estimated error of the rule.
    defect: f64,
    /// Estimated effect of rounding.
    noise: f64,
}

impl Panel {
    /// Whether halving may help.
    fn reducible(&self) -> bool {
        self.defect > NOISE * self.noise
    }
}

/// Integral times `exp(-k h0)`, with what is known of its errors.
pub(super) struct Sum {
    pub value: Complex64,
    pub size: f64,
    pub defect: f64,
    pub noise: f64,
    /// A bound on what lies under the floor.
    pub left_out: f64,
}

/// The integrand `g exp(k (h - h0))` on pieces.
pub(super) struct Quadrature<'a, P, A> {
    pub sampler: &'a Sampler<'a, P, A>,
    pub k: f64,
    /// The reference exponent.
    pub h0: Complex64,
    /// Nothing below this height counts.
    pub floor: f64,
}

impl<P: Phase, A: Amplitude> Quadrature<'_, P, A> {
    /// Integrates over the pieces, to the given tolerance of the total.
    pub fn over(&self, pieces: &[(Site, Site)], tolerance: f64) -> Result<Sum, Error> {
        let mut panels = Vec::with_capacity(2 * pieces.len());
        let mut left_out = 0.0;
        for piece in pieces {
            left_out += self.slice(*piece, &mut panels)?;
        }
        loop {
            let sum = total(&panels, left_out);
            let goal = (tolerance * sum.value.norm()).max(f64::EPSILON * sum.size);
            // Only what is not noise already can be reduced.
            let (mut left, mut worst) = (0.0, 0.0_f64);
            for panel in panels.iter().filter(|p| p.reducible()) {
                left += panel.defect;
                worst = worst.max(panel.defect);
            }
            if left <= 0.25 * goal {
                return Ok(sum);
            }
            if panels.len() > PANELS {
                return Err(Error::NoConvergence {
                    what: "the quadrature",
                    limit: PANELS,
                    remedy: "the integrand is not smooth on the flowed contour: lead the contour \
                             clear of singularities and branch cuts, or ask for fewer digits",
                });
            }
            // Halve every panel that is nearly as bad, so that totals are formed rarely.
            for j in 0..panels.len() {
                let Panel { from, to, defect, .. } = panels[j];
                if defect >= 0.1 * worst && panels[j].reducible() {
                    let mid = (from + to) * 0.5;
                    panels[j] = self.panel(from, mid)?;
                    panels.push(self.panel(mid, to)?);
                }
            }
        }
    }

    /// Cuts a piece into panels on which `k h` varies little, leaving out what is under the floor;
    /// returns a bound on that.
    fn slice(&self, piece: (Site, Site), panels: &mut Vec<Panel>) -> Result<f64, Error> {
        let mut left_out = 0.0;
        let mut stack = vec![(piece, 0)];
        while let Some(((a, b), level)) = stack.pop() {
            let profile = Profile::of(&a, &b, self.k);
            let variation = self.k
                * (b.z - a.z).norm()
                * a.slope
                    .norm()
                    .max(b.slope.norm())
                    .max((b.h - a.h).norm() / (b.z - a.z).norm().max(f64::MIN_POSITIVE));
            if profile.resolved && profile.top + 2.0 * profile.margin < self.floor {
                left_out += self.left_out(&(a, b));
                continue;
            }
            // A weak pole shows in no sixteen values: panels are short beside one that was named.
            let clear = level >= NEAREST || self.sampler.clear_of_poles(a.z, b.z);
            if (variation <= VARIATION && profile.resolved && clear) || level >= 60 {
                panels.push(self.panel(a.z, b.z)?);
                continue;
            }
            let z = (a.z + b.z) * 0.5;
            let mid = self.sampler.site(z).ok_or(Error::NotFinite { what: "phase", at: z })?;
            stack.push(((mid, b), level + 1));
            stack.push(((a, mid), level + 1));
        }
        Ok(left_out)
    }

    fn panel(&self, from: Complex64, to: Complex64) -> Result<Panel, Error> {
        let missing = |what, at| Error::NotFinite { what, at };
        // The nodes are rounded: what the integrand varies by, from neighbour to neighbour on each half.
        let mut last: [Option<Complex64>; 2] = [None; 2];
        let (mut half, mut variation) = (0, 0.0);
        let panel = rule::panel(from, to, |z| {
            let h = self.sampler.exponent(z).ok_or_else(|| missing("phase", z))?;
            let g = self.sampler.amplitude(z).ok_or_else(|| missing("amplitude", z))?;
            let value = g * relative_exp(self.k, h, self.h0);
            if let Some(before) = last[half].replace(value) {
                variation += (value - before).norm();
            }
            half = 1 - half;
            Ok([value, h])
        })?;
        let stated = 0.7 * f64::EPSILON * self.sampler.noise_scale((from + to) * 0.5);
        let noise = 4.0 * f64::EPSILON + self.k * (2.0 * panel.grass).max(stated);
        let place = 0.5 * f64::EPSILON * from.norm().max(to.norm());
        Ok(Panel {
            from,
            to,
            value: panel.value,
            size: panel.size,
            defect: panel.defect,
            noise: noise * panel.size + place * variation,
        })
    }

    /// A bound on what was left out along a chord under the floor.
    pub fn left_out(&self, chord: &(Site, Site)) -> f64 {
        let (a, b) = chord;
        let (top, low) = if a.h.re >= b.h.re { (a, b) } else { (b, a) };
        let length = (b.z - a.z).norm().min(1.0 / (self.k * top.slope.norm()));
        // An end point may be a singularity of the amplitude.
        let g = self.sampler.amplitude(top.z).or_else(|| self.sampler.amplitude(low.z));
        2.0 * g.map_or(f64::INFINITY, |g| g.norm()) * self.decay(top) * length
    }

    /// A bound on what was left out from a point to infinity, judged by a point farther out.
    pub fn tail(&self, tail: &(Site, Site)) -> f64 {
        // The first term of the expansion at an end point falls off with the depth as exp(-rate
        // depth), the rate 1 unless the decay is algebraic.
        let term = |site: &Site| {
            let g = self.sampler.amplitude(site.z).map_or(f64::INFINITY, |g| g.norm());
            g * self.decay(site) / (self.k * site.slope.norm())
        };
        let (near, far) = (term(&tail.0), term(&tail.1));
        let rate = (near / far).ln() / (self.k * (tail.0.h.re - tail.1.h.re));
        if near == 0.0 {
            0.0
        } else if rate > 0.0 {
            2.0 * near / rate.min(1.0)
        } else {
            f64::INFINITY
        }
    }

    fn decay(&self, site: &Site) -> f64 {
        (self.k * (site.h - self.h0).re).exp()
    }
}

/// `exp(k (h - h0))` with the rounding of the difference and of the product made good: two
/// contributions may be far apart in phase.
pub(super) fn relative_exp(k: f64, h: Complex64, h0: Complex64) -> Complex64 {
    let (re, re_rest) = difference(h.re, h0.re);
    let (im, im_rest) = difference(h.im, h0.im);
    let product = Complex64::new(k * re, k * im);
    let mut rest = Complex64::new(k * re_rest, k * im_rest);
    if product.im.abs() > 1.0 {
        rest.im += k.mul_add(im, -product.im);
    }
    // The rest is below k |h| 2.2e-16.
    product.exp() * (1.0 + rest * (1.0 + rest * 0.5))
}

/// `a - b` rounded, and what rounding left (Knuth's two-sum).
fn difference(a: f64, b: f64) -> (f64, f64) {
    let d = a - b;
    let back = d - a;
    (d, (a - (d - back)) - (b + back))
}

fn total(panels: &[Panel], left_out: f64) -> Sum {
    let mut sum = Sum { value: ZERO, size: 0.0, defect: 0.0, noise: 0.0, left_out };
    for panel in panels {
        sum.value += panel.value;
        sum.size += panel.size;
        sum.defect += panel.defect;
        sum.noise += panel.noise;
    }
    sum
}

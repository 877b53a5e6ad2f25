//! Adaptive quadrature on straight pieces, by 16-point Gauss-Legendre panels.
//!
//! Each panel carries the Legendre coefficients of degree 12 to 15 of its integrand (`rule`). The
//! rule is exact to degree 31, so that its error is about the square of the relative size of that
//! tail; the worst panel is halved until the sum is small enough. The same coefficients of the
//! exponent, which varies little on a panel, measure the rounding noise of the caller's phase.

use super::rule::ROWS;
use super::terrain::{Profile, Sampler, Site};
use crate::Error;
use crate::integral::{Amplitude, Phase};
use num_complex::Complex64;
use std::f64::consts::LN_2;

/// Panels after which the quadrature is given up.
const PANELS: usize = 4_000;
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
            let worst = panels
                .iter()
                .enumerate()
                .filter(|(_, p)| p.defect > p.noise)
                .max_by(|a, b| a.1.defect.total_cmp(&b.1.defect));
            let Some((i, _)) = worst.filter(|_| sum.defect > 0.25 * goal) else {
                return Ok(sum);
            };
            if panels.len() > PANELS {
                return Err(Error::NoConvergence {
                    what: "the quadrature",
                    limit: PANELS,
                    remedy: "the integrand is not smooth on the flowed contour: lead the contour \
                             clear of singularities and branch cuts, or ask for fewer digits",
                });
            }
            // Halve every panel that is nearly as bad, so that totals are formed rarely.
            let bar = 0.1 * panels[i].defect;
            for j in 0..panels.len() {
                let Panel { from, to, defect, noise, .. } = panels[j];
                if defect >= bar && defect > noise {
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
            let profile = Profile::of(&a, &b);
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
            if (variation <= VARIATION && profile.resolved) || level >= 60 {
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
        let (mid, half) = ((from + to) * 0.5, (to - from) * 0.5);
        let (mut value, mut size, mut peak) = (ZERO, 0.0_f64, 0.0_f64);
        let (mut tail, mut grass) = ([ZERO; 4], [ZERO; 4]);
        for row in &ROWS {
            for sign in [1.0, -1.0] {
                let z = mid + half * (sign * row.node);
                let h =
                    self.sampler.exponent(z).ok_or(Error::NotFinite { what: "phase", at: z })?
                        - self.h0;
                let g = self
                    .sampler
                    .amplitude(z)
                    .ok_or(Error::NotFinite { what: "amplitude", at: z })?;
                let integrand = g * (h * self.k).exp();
                value += integrand * row.weight;
                size += integrand.norm() * row.weight;
                peak = peak.max(integrand.norm());
                for (j, &projection) in row.tail.iter().enumerate() {
                    let projection = if j % 2 == 1 { sign * projection } else { projection };
                    tail[j] += integrand * projection;
                    grass[j] += h * projection;
                }
            }
        }
        let length = half.norm();
        let tail = tail.iter().map(|c| c.norm()).fold(0.0, f64::max);
        // Degree 32 is to degree 15 as 15 is to 0, at least: both for geometric decay and faster.
        let relative = if peak > 0.0 { (tail / peak).min(1.0) } else { 0.0 };
        let defect = 2.0 * length * tail * relative;
        let grass = grass.iter().map(|c| c.norm_sqr()).sum::<f64>().sqrt() * 0.5;
        let stated = 0.5 * f64::EPSILON * self.sampler.noise_scale(mid);
        let noise = 2.0 * f64::EPSILON + self.k * grass.max(stated);
        let size = size * length;
        Ok(Panel { from, to, value: value * half, size, defect, noise: noise * size })
    }

    /// A bound on what was left out along a chord under the floor.
    pub fn left_out(&self, chord: &(Site, Site)) -> f64 {
        let (a, b) = chord;
        let top = if a.h.re >= b.h.re { a } else { b };
        let length = (b.z - a.z).norm();
        self.level(top) * length.min(2.0 / (self.k * top.slope.norm()))
    }

    /// A bound on what was left out from a point to infinity.
    pub fn tail(&self, site: &Site) -> f64 {
        self.level(site) / (self.k * site.slope.norm())
    }

    fn level(&self, site: &Site) -> f64 {
        let g = self.sampler.amplitude(site.z).map_or(0.0, |g| g.norm());
        g * (self.k * (site.h - self.h0).re).min(1000.0 * LN_2).exp()
    }
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

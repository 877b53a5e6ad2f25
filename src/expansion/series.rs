//! The asymptotic series of one cluster (or one end point) on several rings.
//!
//! Method. A first small ring is enlarged by a constant ratio while the normal form holds and the
//! Taylor tails decay. Small rings resolve better, large ones pass on less rounding noise: several
//! are kept and the one with the least error figure is taken at each wavenumber.

use super::canonical::Moments;
use super::figure::Parts;
use super::unfolding::Unfolding;
use crate::Scaled;
use crate::integral::{Amplitude, Phase};
use crate::ring::{NormalForm, Orders, Start};
use crate::saddles::Multiplicities;
use num_complex::Complex64;

/// Ratio between neighbouring rings.
const RATIO: f64 = 1.4;
/// Rings that are tried at most.
const TRIED: usize = 30;
/// Mapped saddles must lie within this part of the ring.
const FILLING: f64 = 0.9;
/// Tails beyond which a ring is of no use.
const WORST_TAIL: f64 = 1e-5;
/// No ring is enlarged once `R^(K+2)` is beyond this: for `k >= 1` nothing is gained there, and the
/// rounding error of `A` grows with it.
const LARGEST: f64 = 150.0;
/// The topology looks at the cluster on a ring with `R^(K+2)` no larger than this, if the saddles
/// allow: the contour's descents must leave it.
const LOW: f64 = 6.0;
/// The first ring is made smaller until its tails are below this.
const CLEAN: f64 = 1e-12;
/// Times that the first ring may be made smaller.
const FIRST: usize = 16;
/// The smallest ring that is kept, relative to the largest.
const SMALLEST: f64 = 0.3;

/// A ring that was tried.
struct Trial {
    form: NormalForm,
    start: Start,
    /// The largest `|u_s|/R`.
    filling: f64,
}

impl Trial {
    fn new(form: NormalForm, amplitude: &dyn Amplitude) -> Option<Trial> {
        let start = Start::new(&form, amplitude)?;
        let filling =
            form.saddles_on_disc()[..form.saddles()].iter().fold(0.0f64, |m, s| m.max(s.norm()));
        Some(Trial { form, start, filling })
    }

    fn tail(&self) -> f64 {
        self.start.tail().max(self.form.tail())
    }
}

/// A ring that is kept.
pub(super) struct Ring {
    pub form: NormalForm,
    pub start: Start,
    pub orders: Orders,
    pub filling: f64,
}

/// One cluster or end point, ready for any wavenumber.
pub(crate) struct Series {
    rings: Vec<Ring>,
    /// A small ring for the topology.
    inner: NormalForm,
    /// The ring whose normal form left the smallest residual: `A` and `x_m` are taken from it.
    reference: usize,
    m: Multiplicities,
    sign: f64,
    noise_scale: f64,
}

/// What a series adds to the integral.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Contribution {
    pub value: Scaled,
    pub error: Scaled,
    pub orders: usize,
}

impl Contribution {
    pub const NONE: Contribution =
        Contribution { value: Scaled::ZERO, error: Scaled::ZERO, orders: 0 };

    /// What could not be computed.
    pub const UNKNOWN: Contribution = Contribution {
        value: Scaled::ZERO,
        error: Scaled { mantissa: Complex64::new(f64::INFINITY, 0.0), exponent: 0 },
        orders: 0,
    };

    /// Whether the error is at the rounding level.
    pub fn is_sharp(&self) -> bool {
        self.error.ln_norm() < self.value.ln_norm() - 30.0
    }

    /// `exp(exponent)` times a value and its error.
    pub fn new(exponent: Complex64, value: Scaled, error: Scaled, orders: usize) -> Contribution {
        let factor = Scaled::exp(exponent);
        let size = Scaled::new(Complex64::new(factor.mantissa.norm(), 0.0), factor.exponent);
        Contribution { value: factor * value, error: size * error, orders }
    }

    pub fn and(&self, other: &Contribution) -> Contribution {
        Contribution {
            value: self.value + other.value,
            error: self.error + other.error,
            orders: self.orders.max(other.orders),
        }
    }
}

impl Series {
    /// The rings for `saddles` saddles (0: an end point) round `centre`, the first one at about
    /// `reach` from it but not below `least`. None if there is no normal form.
    pub fn new(
        phase: &dyn Phase,
        amplitude: &dyn Amplitude,
        saddles: usize,
        centre: Complex64,
        (reach, least): (f64, f64),
    ) -> Option<Series> {
        let first = first_ring(phase, amplitude, saddles, centre, reach, least)?;
        let degree = first.form.degree() as i32;
        let height = |form: &NormalForm| form.radius().powi(degree);
        let low =
            (LOW / height(&first.form)).powf(1.0 / f64::from(degree)).max(first.filling / 0.8);
        let inner = if low < 1.0 { first.form.resized(phase, low)? } else { first.form.clone() };
        let mut trials = vec![first];
        for _ in 0..TRIED {
            let last = &trials[trials.len() - 1];
            if height(&last.form) > LARGEST {
                break;
            }
            let Some(next) =
                last.form.resized(phase, RATIO).and_then(|form| Trial::new(form, amplitude))
            else {
                break;
            };
            let worse = next.tail() > WORST_TAIL && next.tail() > last.tail();
            if worse {
                break;
            }
            trials.push(next);
        }
        let largest = trials.last()?.form.radius();
        let kept =
            |ring: &Trial| ring.filling < FILLING && ring.form.radius() >= SMALLEST * largest;
        let rings: Vec<Ring> = trials
            .into_iter()
            .filter(kept)
            .map(|Trial { form, start, filling }| Ring {
                orders: Orders::new(&form, &start),
                form,
                start,
                filling,
            })
            .collect();
        let reference = (0..rings.len())
            .min_by(|&a, &b| rings[a].form.residual().total_cmp(&rings[b].form.residual()))?;
        Some(Series {
            rings,
            inner,
            reference,
            m: [0; 6],
            sign: 1.0,
            noise_scale: phase.noise_scale(centre),
        })
    }

    /// The normal form on a small ring.
    pub fn form(&self) -> &NormalForm {
        &self.inner
    }

    /// Sets what the contour makes of the cluster.
    pub fn with_multiplicities(mut self, m: Multiplicities) -> Self {
        self.m = m;
        self
    }

    /// For an end point: +1 at the start of the contour, -1 at its end.
    pub fn with_sign(mut self, sign: f64) -> Self {
        self.sign = sign;
        self
    }

    pub fn multiplicities(&self) -> &Multiplicities {
        &self.m
    }

    /// Whether the contour needs this cluster; always so for an end point.
    pub fn contributes(&self) -> bool {
        let degree = self.form().degree();
        degree == 1 || self.m[1..degree].iter().any(|m| *m != self.m[0])
    }

    pub fn saddles(&self) -> usize {
        self.form().saddles()
    }

    /// `A`, the phase's mean value over the cluster.
    pub fn level(&self) -> Complex64 {
        self.rings[self.reference].form.level()
    }

    /// The contribution at wavenumber `k` with at most `orders` orders.
    pub fn at(&self, k: f64, orders: usize) -> Contribution {
        let form = &self.rings[self.reference].form;
        let moments = Moments::new(&Unfolding::new(form), &self.m, k);
        let count = form.saddles().max(1);
        let sizes = moments.values.map(|c| c.norm());
        let mut best = (0, 0, f64::INFINITY);
        for (index, ring) in self.rings.iter().enumerate() {
            let (kept, figure) = Parts::of_ring(ring, &sizes[..count], k, orders).least();
            if figure < best.2 {
                best = (index, kept, figure);
            }
        }
        let (index, kept, figure) = best;
        let mut sum = Complex64::new(0.0, 0.0);
        let mut power = 1.0;
        for n in 0..kept {
            let p = self.rings[index].orders.coefficients(n);
            let order: Complex64 = p.iter().zip(&moments.values).map(|(p, c)| p * c).sum();
            sum += order * power;
            power /= k;
        }
        let noise = 4.0 * f64::EPSILON * k * self.noise_scale * sum.norm();
        Contribution::new(
            Complex64::new(0.0, k) * self.level(),
            Scaled::new(sum * self.sign, moments.exponent),
            Scaled::new(Complex64::new(figure + noise, 0.0), moments.exponent),
            kept,
        )
    }

    pub(super) fn rings(&self) -> &[Ring] {
        &self.rings
    }
}

/// The first ring: smaller while there is no form or the tails are not negligible, larger while
/// the mapped saddles do not fit.
fn first_ring(
    phase: &dyn Phase,
    amplitude: &dyn Amplitude,
    saddles: usize,
    centre: Complex64,
    reach: f64,
    least: f64,
) -> Option<Trial> {
    let mut reach = reach;
    let mut found: Option<Trial> = None;
    for _ in 0..FIRST {
        if reach < least {
            break;
        }
        if let Some(ring) = NormalForm::find(phase, saddles, centre, reach)
            .and_then(|form| Trial::new(form, amplitude))
        {
            let crowded = ring.filling * RATIO > FILLING;
            // Where the noise of the phase sets the tails a smaller ring is no better.
            let best = found.as_ref().map_or(f64::INFINITY, Trial::tail);
            let noisy = ring.tail() > 0.3 * best;
            let done = crowded || noisy || ring.tail() < CLEAN;
            if !noisy && (ring.filling < FILLING || found.is_none()) {
                found = Some(ring);
            }
            if done {
                break;
            }
        }
        reach /= RATIO;
    }
    found
}

//! A guide that is the same on both sides of its middle, in the units of its physics: what the slab and the
//! well share. Modes are counted from 0, even or odd as their index; mode 0 is trapped at any width.
//!
//! A field sent into it is taken apart by the orthogonality of the modes,
//! `a_n = integral of psi Psi_n w dx / integral of Psi_n^2 w dx`, `w = 1` inside and `m` outside (textbook
//! relation, common practice), by the double-exponential rule (H. Takahasi, M. Mori, Publ. RIMS 9 (1974) 721,
//! cited from memory) inside and as far outside as the mode reaches.

use super::along::Along;
use super::modes::{check_count, counts, passage};
use super::passage::{Media, ModeNumber, Passage};
use super::profile::Profile;
use crate::{Complex64, Error};
use std::f64::consts::FRAC_PI_2;

/// The guide; without losses.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Symmetric {
    pub media: Media,
}

impl Symmetric {
    pub(super) fn new(k: f64, q: f64, m: f64, carrier: f64) -> Self {
        let [outside, transverse, carrier] = [k, q, carrier].map(Complex64::from);
        let media = Media { k: outside, q: transverse, k_real: k, q_real: q, m, carrier };
        Symmetric { media }
    }

    pub(super) fn cutoff_half_width(&self, index: u32) -> Result<f64, Error> {
        if index == 0 {
            let remedy =
                "mode 0 of a symmetric guide is trapped at any width: take index 1 or higher";
            return Err(Error::domain("mode index", 0.0, remedy));
        }
        Ok(f64::from(index) * FRAC_PI_2 / self.media.q_real)
    }

    pub(super) fn mode_count(&self, half_width: f64) -> Result<u32, Error> {
        // Saturates for widths that no guide has.
        Ok(((half_width * self.media.q_real / FRAC_PI_2).floor() as u32).saturating_add(1))
    }

    pub(super) fn cutoffs(&self, profile: &Profile) -> Result<Vec<(u32, f64)>, Error> {
        let [last, first] = counts(profile, |width| self.mode_count(width))?;
        (last..first)
            .rev()
            .map(|index| Ok((index, profile.first_range_of_width(self.cutoff_half_width(index)?)?)))
            .collect()
    }

    pub(super) fn along(
        &self,
        index: u32,
        profile: Profile,
        reference: f64,
    ) -> Result<Passage, Error> {
        self.cutoff_half_width(index)?;
        Passage::new(self.media, number(index), profile, reference)
    }

    pub(super) fn launch(
        &self,
        profile: Profile,
        reference: f64,
        field: impl Fn(f64) -> Complex64,
    ) -> Result<LaunchedField, Error> {
        Error::require_finite("range of the launch", reference)?;
        let [from, to] = profile.ranges();
        if !(reference >= from && reference < to) {
            let remedy = "launch on the profile, before its end";
            return Err(Error::domain("range of the launch", reference, remedy));
        }
        let width = profile.width(reference);
        Error::require_positive("half width at the launch", width)?;
        let count = self.mode_count(width)?;
        check_count(count)?;
        let [kept, _] = counts(&profile, |width| self.mode_count(width))?;
        let modes = (0..count).map(|index| -> Result<_, Error> {
            let (carried, antinode, kappa, gamma) = if index == 0 {
                let lowest = Lowest { media: self.media, profile: profile.clone(), reference };
                let along = Along::new(reference, to, |range| Ok(lowest.rate(range)))?;
                let (antinode, kappa, gamma) = lowest.shape(width);
                (Carried::Lowest(lowest, along), antinode, kappa, gamma)
            } else {
                let number = number(index);
                let passage = passage(self.media, number, &profile, reference, index < kept)?;
                let shape = passage.bound_shape(reference)?;
                let carried = Carried::Passage(Box::new(passage));
                let antinode = shape.antinode * self.media.flux(shape.gamma).sqrt();
                (carried, antinode.re, shape.kappa.re, shape.gamma.re)
            };
            let Media { q_real: q, m, .. } = self.media;
            let even = index.is_multiple_of(2);
            let across = |x: f64| {
                let angle = kappa * q * x;
                if even { angle.cos() } else { angle.sin() }
            };
            let part = |x: f64| {
                let mirrored = field(-x);
                let sum = if even { field(x) + mirrored } else { field(x) - mirrored };
                if sum.norm().is_finite() {
                    Ok(0.5 * sum)
                } else {
                    let at = Complex64::from(x);
                    Err(Error::NotFinite { what: "field of the launch", at })
                }
            };
            let inside = integral(0.0, width, |x| Ok(part(x)? * across(x)))?;
            let tail = |x: f64| (-gamma * q * (x - width)).exp();
            // Beyond this the mode is below 1e-16 of what it is at the boundary.
            let reach = width + 37.0 / (gamma * q);
            let outside = integral(width, reach, |x| Ok(part(x)? * tail(x)))?;
            let amplitude = q * antinode.powi(2) * (inside + outside * (m * across(width)));
            // Twice the energy of one side.
            let energy = 2.0 * amplitude.norm_sqr() / (q * antinode.powi(2));
            Ok(Mode { index, even, amplitude, energy, carried })
        });
        Ok(LaunchedField { modes: modes.collect::<Result<_, _>>()?, from: reference })
    }
}

/// The number of a mode of a symmetric guide, counted from 0, among those of its parity.
fn number(index: u32) -> ModeNumber {
    // Odd: 1, 3, .. are n = 1, 2, ..; even: 2, 4, .. are n = 2, 3, ..
    ModeNumber { n: index / 2 + 1, even: index.is_multiple_of(2) }
}

/// A field sent into a slab ([`SlabGuide::launch`](super::SlabGuide::launch)) or a state put into a well
/// ([`QuantumWell::launch`](super::QuantumWell::launch)): the sum of its modes, each through its own cut-off.
///
/// The part of it that no mode traps where it starts is left out: it spreads away at once.
#[derive(Clone, Debug)]
pub struct LaunchedField {
    modes: Vec<Mode>,
    from: f64,
}

#[derive(Clone, Debug)]
struct Mode {
    index: u32,
    even: bool,
    amplitude: Complex64,
    energy: f64,
    carried: Carried,
}

#[derive(Clone, Debug)]
enum Carried {
    Lowest(Lowest, Along),
    Passage(Box<Passage>),
}

impl LaunchedField {
    /// The modes' indices with the energy that each carries at the start: its part of the integral of
    /// `|field|^2` over all `x`, weight 1 inside (outside 1 too, but `(n_core/n_cladding)^2` in TM).
    pub fn energies(&self) -> impl Iterator<Item = (u32, f64)> {
        self.modes.iter().map(|mode| (mode.index, mode.energy))
    }

    /// The passage of a mode that was sent in and is cut off, relative to its largest value at the start; none for
    /// mode 0, for modes that stay trapped and for those not trapped at the start.
    pub fn passage(&self, index: u32) -> Option<&Passage> {
        self.modes
            .iter()
            .find_map(|mode| match &mode.carried {
                Carried::Passage(passage) if mode.index == index => Some(passage.as_ref()),
                _ => None,
            })
            .filter(|passage| passage.cutoff_range().is_finite())
    }

    /// The field at a range and position, in the unit of the field that was sent in; positions to both sides of the
    /// middle.
    ///
    /// Errors: [`Error::Domain`] for a place off the profile or before the launch; what [`Passage::field`] refuses.
    pub fn value(&self, range: f64, x: f64) -> Result<Complex64, Error> {
        let mut sum = Complex64::new(0.0, 0.0);
        if range < self.from {
            let remedy = "ask for ranges from that of the launch on";
            return Err(Error::domain("range", range, remedy));
        }
        for mode in &self.modes {
            let side = if mode.even || x >= 0.0 { 1.0 } else { -1.0 };
            let value = match &mode.carried {
                Carried::Lowest(lowest, along) => {
                    lowest.value(range, x.abs())? * along.factor(range)
                }
                Carried::Passage(passage) => passage.value(range, x.abs())?,
            };
            sum += mode.amplitude * value * side;
        }
        Ok(sum)
    }
}

/// Mode 0, adiabatic everywhere.
#[derive(Clone, Debug)]
struct Lowest {
    media: Media,
    profile: Profile,
    reference: f64,
}

impl Lowest {
    /// Amplitude for unit energy on one side, `kappa` and `gamma` at a width: `kappa tan(kappa h) = m gamma`,
    /// `kappa^2 + gamma^2 = 1` (textbook modal relation).
    fn shape(&self, width: f64) -> (f64, f64, f64) {
        let (h, m) = (self.media.q_real * width, self.media.m);
        let (mut low, mut high) = (0.0, (FRAC_PI_2 / h).min(1.0));
        for _ in 0..60 {
            let kappa = 0.5 * (low + high);
            let gamma = ((1.0 - kappa) * (1.0 + kappa)).sqrt();
            if kappa * (kappa * h).sin() < m * gamma * (kappa * h).cos() {
                low = kappa
            } else {
                high = kappa
            }
        }
        let kappa = 0.5 * (low + high);
        // From the relation: 1 - kappa^2 would lose a small gamma.
        let gamma = kappa * (kappa * h).tan() / m;
        let outside = m / (1.0 + (m * m - 1.0) * gamma * gamma);
        ((2.0 * gamma / (outside + gamma * h)).sqrt(), kappa, gamma)
    }

    /// Wavenumber along the guide and the rate of the phase; for a well the latter alone.
    fn rate(&self, range: f64) -> (Complex64, Complex64) {
        let media = &self.media;
        let gamma = Complex64::from(self.shape(self.profile.width(range)).2);
        if media.carrier == Complex64::new(0.0, 0.0) {
            (Complex64::from(1.0), (gamma * media.q).powi(2) / (media.k * 2.0))
        } else {
            let along = media.along(gamma);
            (along, along)
        }
    }

    /// The mode's shape, relative to its largest value at the reference.
    fn value(&self, range: f64, x: f64) -> Result<Complex64, Error> {
        Error::require_finite("range", range)?;
        Error::require_finite("position", x)?;
        let [from, to] = self.profile.ranges();
        let width = self.profile.width(range);
        if !(range >= from && range <= to && width > 0.0) {
            let remedy = "stay on the profile and before the guide's tip";
            return Err(Error::domain("range", range, remedy));
        }
        let q = self.media.q_real;
        let (antinode, kappa, gamma) = self.shape(width);
        let first = self.shape(self.profile.width(self.reference)).0;
        let across = (kappa * q * x.min(width)).cos();
        let tail = (-gamma * q * (x - width).max(0.0)).exp();
        Ok((antinode / first * across * tail).into())
    }
}

/// The integral over an interval by the double-exponential rule, to 1e-10 of the integral of the modulus.
fn integral(
    from: f64,
    to: f64,
    f: impl Fn(f64) -> Result<Complex64, Error>,
) -> Result<Complex64, Error> {
    let (middle, half) = (0.5 * (from + to), 0.5 * (to - from));
    // Value and modulus at a node of the trapezium's rule in t, |t| <= 3.2.
    let node = |t: f64| -> Result<(Complex64, f64), Error> {
        let u = FRAC_PI_2 * t.sinh();
        let weight = half * FRAC_PI_2 * t.cosh() / u.cosh().powi(2);
        let value = f(middle + half * u.tanh())? * weight;
        Ok((value, value.norm()))
    };
    const REACH: f64 = 3.2;
    const HALVINGS: u32 = 13;
    let (mut sum, mut size) = node(0.0)?;
    let (mut step, mut last) = (REACH, Complex64::new(0.0, 0.0));
    for halving in 0..HALVINGS {
        // The new nodes, odd multiples of the step.
        for j in 0..(1u32 << halving).div_ceil(2) {
            let t = step * f64::from(2 * j + 1);
            for t in [t, -t] {
                let (value, modulus) = node(t)?;
                sum += value;
                size += modulus;
            }
        }
        let total = sum * step;
        // Not before a narrow field is seen.
        if halving >= 7 && (total - last).norm() <= 1e-10 * size * step {
            return Ok(total);
        }
        last = total;
        step *= 0.5;
    }
    Err(Error::NoConvergence {
        what: "the overlap of the launched field with a mode",
        limit: HALVINGS as usize,
        remedy: "launch a field without jumps, not far narrower than the guide",
    })
}

//! The asymptotic series of one cluster (or one end point) on several rings.
//!
//! Method. Small rings resolve better, large ones pass on less rounding noise: several are kept (`rings`) and
//! the one with the least error figure is taken at each wavenumber.

use super::algebraic::Powers;
use super::canonical::Moments;
use super::contribution::Contribution;
use super::figure::Parts;
use super::level::Level;
use super::pole::MappedPole;
use super::rings::{Given, Ring, Rings, UNSEEN, rings};
use super::unfolding::Unfolding;
use crate::Scaled;
use crate::ring::NormalForm;
use crate::saddles::Multiplicities;
use num_complex::Complex64;

/// One cluster or end point, ready for any wavenumber.
#[derive(Clone)]
pub(crate) struct Series {
    pub(super) rings: Vec<Ring>,
    /// The powers of algebraic ends in the amplitude.
    pub(super) powers: Powers,
    /// A small ring for the topology.
    inner: NormalForm,
    /// The ring whose normal form left the smallest residual: `A` and `x_m` are taken from it.
    reference: usize,
    pub(super) poles: Vec<Option<MappedPole>>,
    m: Multiplicities,
    /// The same sheet by sheet with the factor of each, where an end of the contour is algebraic.
    sheets: Vec<(Complex64, Multiplicities)>,
    sign: f64,
    level: Level,
}

impl Series {
    /// For some saddles (none: an end point) round `centre`, the first ring at about `reach` from it but not
    /// below `least`. None if there is no normal form.
    pub fn new(
        given: &Given,
        saddles: &[Complex64],
        centre: Complex64,
        (reach, least): (f64, f64),
    ) -> Option<Series> {
        let Rings { inner, list: rings, poles } = rings(given, saddles, centre, (reach, least))?;
        let reference = (0..rings.len())
            .min_by(|&a, &b| rings[a].form.residual().total_cmp(&rings[b].form.residual()))?;
        let level = Level::of_form(given.phase, &rings[reference].form);
        Some(Series {
            rings,
            powers: Powers::default(),
            inner,
            reference,
            poles,
            m: [0; 6],
            sheets: Vec::new(),
            sign: 1.0,
            level,
        })
    }

    /// The same with other starts on its rings.
    pub(super) fn with_rings(&self, rings: Vec<Ring>, poles: Vec<Option<MappedPole>>) -> Series {
        Series {
            rings,
            poles,
            powers: self.powers.clone(),
            inner: self.inner.clone(),
            sheets: self.sheets.clone(),
            ..*self
        }
    }

    /// The normal form on a small ring.
    pub fn form(&self) -> &NormalForm {
        &self.inner
    }

    /// Sets the powers of algebraic ends that the amplitude has.
    pub fn with_powers(mut self, powers: &Powers) -> Self {
        self.powers = powers.clone();
        self
    }

    /// Sets what the contour makes of the cluster.
    pub fn with_multiplicities(mut self, m: Multiplicities) -> Self {
        self.m = m;
        self
    }

    /// Sets what the contour makes of it on each sheet, with the factor of the sheet.
    pub fn with_sheets(mut self, sheets: Vec<(Complex64, Multiplicities)>) -> Self {
        self.sheets = sheets;
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
        let uneven = |m: &Multiplicities| m[1..degree].iter().any(|j| *j != m[0]);
        degree == 1 || uneven(&self.m) || self.sheets.iter().any(|(_, m)| uneven(m))
    }

    /// The canonical integrals at wavenumber `k`: the same for all amplitudes.
    pub fn moments(&self, k: f64) -> Option<Moments> {
        let phi = &Unfolding::new(&self.rings[self.reference].form);
        let Some(((factor, m), more)) = self.sheets.split_first() else {
            return Moments::new(phi, &self.m, k);
        };
        let mut sum = Moments::new(phi, m, k)?.times(*factor);
        for (factor, m) in more {
            sum = sum.plus(&Moments::new(phi, m, k)?.times(*factor));
        }
        Some(sum)
    }

    pub fn saddles(&self) -> usize {
        self.form().saddles()
    }

    /// The contribution at wavenumber `k` with at most `orders` orders.
    pub fn at(&self, k: f64, orders: usize) -> Contribution {
        self.summed(k, orders, &self.moments(k))
    }

    /// The same with the canonical integrals at hand.
    pub fn summed(&self, k: f64, orders: usize, moments: &Option<Moments>) -> Contribution {
        let Some(moments) = moments else { return Contribution::UNKNOWN };
        let phi = Unfolding::new(&self.rings[self.reference].form);
        let sizes = moments.values.map(|c| c.norm());
        let pole = |n: usize| -> Option<(Complex64, f64)> {
            self.poles[n].as_ref()?.contribution(&phi, &moments.values, k)
        };
        let mut best = (0, 0, f64::INFINITY, Complex64::new(0.0, 0.0));
        for (index, ring) in self.rings.iter().enumerate() {
            // Far poles are the last rings; no use where they are too far to be seen.
            if ring.beyond * k > UNSEEN {
                continue;
            }
            let (kept, mut figure) = Parts::of_ring(ring, &sizes, k, orders).least(best.2);
            if figure >= best.2 {
                continue;
            }
            let mut split_off = Complex64::new(0.0, 0.0);
            for n in (0..self.poles.len()).filter(|n| ring.split >> n & 1 == 1) {
                let (value, error) = pole(n).unwrap_or((split_off, f64::INFINITY));
                split_off += value;
                figure += error;
            }
            if figure < best.2 {
                best = (index, kept, figure, split_off);
            }
        }
        let (index, kept, figure, mut sum) = best;
        let ring = &self.rings[index];
        let mut power = 1.0;
        for n in 0..kept {
            let p = ring.orders.coefficients(n);
            let order: Complex64 = p.iter().zip(&moments.values).map(|(p, c)| p * c).sum();
            sum += order * power;
            power /= k;
        }
        let noise = self.level.error(k) * sum.norm();
        Contribution::new(
            self.level.exponent(k),
            Scaled::new(sum * self.sign, moments.exponent),
            Scaled::new(Complex64::new(figure + noise, 0.0), moments.exponent),
            kept,
        )
    }

    /// The poles that may be split off, where they lie in the plane of `u`.
    pub(super) fn poles(&self) -> &[Option<MappedPole>] {
        &self.poles
    }

    pub fn rings(&self) -> &[Ring] {
        &self.rings
    }
}

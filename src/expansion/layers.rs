//! Further amplitudes on the rings of a series: what the gradient of a field needs.
//!
//! Method. Nothing of a series but its starts, their orders and the principal parts of the poles depends
//! on the amplitude. A derivative of the field in a parameter is an integral over the same phase and
//! contour with another amplitude, so the rings, normal forms, multiplicities and places of poles are
//! kept, and only those three are made anew. All amplitudes are sampled together. A ring on which one of
//! them has not decayed is not used for it; if none is left, the innermost is made smaller.

use super::algebraic::{AlgebraicSeries, Powers, Ring as AlgebraicRing};
use super::pole::{MappedPole, Pole};
use super::rings::{FILLING, FIRST, Ring, WORST_TAIL};
use super::series::Series;
use crate::integral::Amplitude;
use crate::ring::{Based, BasedForm, BasedOrders, NormalForm, Orders, Start, ZERO};
use num_complex::Complex64;

/// With tails above this the rings are too large for an amplitude.
const LOOSE: f64 = 1e-9;
/// Ratio between rings that are added inwards.
const INWARDS: f64 = 2.0;
/// Rings that are added at most for an amplitude that is smaller there.
const SMALLER: usize = 4;
/// It must be smaller by this factor.
const LIGHTER: f64 = 0.7;

/// Several amplitudes on one phase.
pub(crate) struct Layers<'a> {
    pub count: usize,
    /// Writes the values of all at a point.
    pub fill: &'a dyn Fn(Complex64, &mut [Complex64]),
    /// Of each amplitude its poles, in the order in which the plan knows them.
    pub poles: Vec<Vec<Pole>>,
}

/// One of them.
pub(crate) struct Layer<'a> {
    pub index: usize,
    pub count: usize,
    pub fill: &'a dyn Fn(Complex64, &mut [Complex64]),
}

impl Amplitude for Layer<'_> {
    fn value(&self, z: Complex64) -> Complex64 {
        let mut values = vec![ZERO; self.count];
        (self.fill)(z, &mut values);
        values[self.index]
    }
}

impl Layers<'_> {
    /// The values with the powers of algebraic ends.
    fn fill_powered(&self, z: Complex64, powers: &Powers, values: &mut [Complex64]) {
        (self.fill)(z, values);
        let factor = powers.times(z, Complex64::new(1.0, 0.0));
        if factor != Complex64::new(1.0, 0.0) {
            for value in values {
                *value *= factor;
            }
        }
    }
}

/// Principal parts, of one amplitude, of the poles that are split off on a ring.
fn part(poles: &[Option<MappedPole>], split: u32, u: Complex64) -> Complex64 {
    let here = poles.iter().enumerate().filter(|(n, _)| split >> n & 1 == 1);
    here.filter_map(|(_, pole)| pole.as_ref()).map(|pole| pole.part(u)).sum()
}

impl Series {
    /// The same series for each of several amplitudes.
    pub fn with_amplitudes(&self, layers: &Layers) -> Vec<Series> {
        let mapped = |layer: usize| -> Vec<Option<MappedPole>> {
            let pairs = self.poles.iter().zip(&layers.poles[layer]);
            pairs.map(|(old, new)| old.as_ref().map(|old| old.with_part_of(new))).collect()
        };
        let poles: Vec<_> = (0..layers.count).map(mapped).collect();
        let sampled = |form: &NormalForm, split: u32| {
            let fill = |z, values: &mut [Complex64]| layers.fill_powered(z, &self.powers, values);
            Start::several(form, layers.count, fill, |n, u| part(&poles[n], split, u))
        };
        let mut list: Vec<Vec<Ring>> = vec![Vec::with_capacity(self.rings.len()); layers.count];
        for ring in &self.rings {
            for (rings, start) in list.iter_mut().zip(sampled(&ring.form, ring.split)) {
                let usable = start.filter(|start| start.tail() < WORST_TAIL);
                rings.push(ring.with_start(usable.unwrap_or_else(Start::unknown)));
            }
        }
        let innermost = self.rings.first().map(|r| (r.form.clone(), r.filling, r.split));
        let Some((mut form, mut filling, split)) = innermost else { return Vec::new() };
        let measure = |ring: &Ring| (ring.start.tail(), ring.start.size());
        add_inner_rings(&mut list, measure, || {
            filling *= INWARDS;
            form = form.shrunk(1.0 / INWARDS);
            let clear = poles.iter().flatten().flatten().all(|pole| pole.is_clear_of(&form));
            let ring = |start: Option<Start>| {
                let start = start.filter(|_| clear).unwrap_or_else(Start::unknown);
                let (orders, form) = (Orders::new(&form, &start), form.clone());
                Ring { form, start, orders, filling, split, beyond: 0.0 }
            };
            (filling < FILLING).then(|| sampled(&form, split).into_iter().map(ring).collect())
        });
        list.into_iter().zip(poles).map(|(rings, poles)| self.with_rings(rings, poles)).collect()
    }

    /// The largest modulus of `g dz/du` on the innermost ring; None where it could not be sampled.
    pub fn size(&self) -> Option<f64> {
        let start = &self.rings.first()?.start;
        start.tail().is_finite().then(|| start.size())
    }
}

impl Ring {
    fn with_start(&self, start: Start) -> Ring {
        let orders = Orders::new(&self.form, &start);
        Ring { form: self.form.clone(), start, orders, ..*self }
    }
}

impl AlgebraicSeries {
    /// The same series for each of several amplitudes.
    pub fn with_amplitudes(&self, layers: &Layers) -> Vec<AlgebraicSeries> {
        let sampled = |form: &BasedForm, power: Complex64, noise: &Based| {
            let fill = |z, values: &mut [Complex64]| layers.fill_powered(z, &self.powers, values);
            let all = BasedOrders::several(form, (self.lambda, power), layers.count, fill, noise);
            let usable = |orders: Option<BasedOrders>| {
                let decayed = orders.filter(|orders| orders.tail < WORST_TAIL);
                decayed.unwrap_or_else(|| BasedOrders::unknown(noise))
            };
            all.into_iter().map(usable).collect::<Vec<_>>()
        };
        let mut list = vec![Vec::with_capacity(self.rings.len()); layers.count];
        for ring in &self.rings {
            let all = sampled(&ring.form, ring.power, ring.orders.noises());
            for (rings, orders) in list.iter_mut().zip(all) {
                rings.push(ring.with_orders(&ring.form, ring.filling, orders));
            }
        }
        let Some(innermost) = self.rings.first() else { return Vec::new() };
        let (mut form, mut filling) = (innermost.form.clone(), innermost.filling);
        let measure = |ring: &AlgebraicRing| (ring.orders.tail, ring.orders.size);
        add_inner_rings(&mut list, measure, || {
            filling *= INWARDS;
            form = form.shrunk(1.0 / INWARDS);
            let noise = BasedOrders::unit(&form, self.lambda);
            let ring = |orders| innermost.with_orders(&form, filling, orders);
            let all = sampled(&form, innermost.power, &noise);
            (filling < FILLING).then(|| all.into_iter().map(ring).collect())
        });
        list.into_iter().map(|rings| self.with_rings(rings)).collect()
    }
}

/// Adds smaller rings to those of each amplitude where they are of use: where it has not decayed on the
/// innermost (the first of the list), or is much smaller on the next, and its rounding noise with it.
/// Rings are known by their place in the list, so these come at its end. `measure` gives tail and size of
/// an amplitude on a ring, `next` the next smaller ring for all, if there is one.
fn add_inner_rings<R>(
    list: &mut [Vec<R>],
    measure: impl Fn(&R) -> (f64, f64),
    mut next: impl FnMut() -> Option<Vec<R>>,
) {
    let mut inner: Vec<(f64, f64)> = list.iter().map(|rings| measure(&rings[0])).collect();
    for step in 0..FIRST {
        let gains = |tail: f64| tail > LOOSE || step < SMALLER;
        if !inner.iter().any(|inner| gains(inner.0)) {
            return;
        }
        let Some(rings) = next() else { return };
        let mut used = false;
        for ((list, inner), ring) in list.iter_mut().zip(&mut inner).zip(rings) {
            let (tail, size) = measure(&ring);
            if inner.0 > LOOSE || (step < SMALLER && size < LIGHTER * inner.1) {
                used = true;
                *inner = (tail, size);
                if tail < WORST_TAIL {
                    list.push(ring);
                }
            }
        }
        if !used {
            return;
        }
    }
}

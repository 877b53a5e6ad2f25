//! Further amplitudes on the rings of a series: what the gradient of a field needs.
//!
//! Method. Nothing of a series but its starts, their orders and the principal parts of the poles depends
//! on the amplitude. A derivative of the field in a parameter is an integral over the same phase and
//! contour with another amplitude, so the rings, normal forms, multiplicities and places of poles are
//! kept, and only those three are made anew. All amplitudes are sampled together. A ring on which one of
//! them has not decayed is not used for it; if none is left, the innermost is made smaller.

use super::algebraic::{AlgebraicSeries, Powers};
use super::pole::{MappedPole, Pole};
use super::series::{CLEAN, FILLING, FIRST, RATIO, Ring, Series, WORST_TAIL};
use crate::integral::Amplitude;
use crate::ring::{BasedOrders, NormalForm, Orders, Start, ZERO};
use num_complex::Complex64;

/// With tails above this the rings are too large for an amplitude.
const LOOSE: f64 = 1e-9;

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
            let fill =
                |z, values: &mut [Complex64]| layers.fill_powered(z, &self.powers, values);
            Start::several(form, layers.count, fill, |n, u| part(&poles[n], split, u))
        };
        let mut list: Vec<Vec<Ring>> = vec![Vec::with_capacity(self.rings.len()); layers.count];
        for ring in &self.rings {
            for (rings, start) in list.iter_mut().zip(sampled(&ring.form, ring.split)) {
                let usable = start.filter(|start| start.tail() < WORST_TAIL);
                rings.push(ring.with_start(usable.unwrap_or_else(Start::unknown)));
            }
        }
        let finished = list.into_iter().zip(poles.iter().cloned()).enumerate().map(|(layer, (mut rings, poles))| {
            // Rings are known by their place in the list: smaller ones are added at its end.
            let mut least = rings[0].clone();
            for _ in 0..FIRST {
                let clear = |form: &NormalForm| {
                    poles.iter().flatten().all(|pole| pole.is_clear_of(form))
                };
                let (loose, filling) = (least.start.tail() > LOOSE, least.filling * RATIO);
                if !loose || filling > FILLING {
                    break;
                }
                let form = least.form.shrunk(1.0 / RATIO);
                let start = sampled(&form, least.split).swap_remove(layer);
                let start = start.unwrap_or_else(Start::unknown);
                let orders = Orders::new(&form, &start);
                least = Ring { form, start, orders, filling, split: least.split };
                if least.start.tail() < WORST_TAIL && clear(&least.form) {
                    rings.push(least.clone());
                }
                if least.start.tail() < CLEAN {
                    break;
                }
            }
            self.with_rings(rings, poles)
        });
        finished.collect()
    }

    /// The largest modulus of `g dz/du` on the innermost ring; None where it could not be sampled.
    pub fn size(&self) -> Option<f64> {
        let start = &self.rings.first()?.start;
        start.tail().is_finite().then(|| start.size())
    }
}

impl Ring {
    fn with_start(&self, start: Start) -> Ring {
        let orders = self.orders.for_start(&self.form, &start);
        let (form, filling, split) = (self.form.clone(), self.filling, self.split);
        Ring { form, start, orders, filling, split }
    }
}

impl AlgebraicSeries {
    /// The same series for each of several amplitudes.
    pub fn with_amplitudes(&self, layers: &Layers) -> Vec<AlgebraicSeries> {
        let mut list = vec![self.clone(); layers.count];
        for (index, ring) in self.rings.iter().enumerate() {
            let noise = ring.orders.noises();
            let fill =
                |z, values: &mut [Complex64]| layers.fill_powered(z, &self.powers, values);
            let power = (self.lambda, ring.power);
            let all = BasedOrders::several(&ring.form, power, layers.count, fill, noise);
            for (series, orders) in list.iter_mut().zip(all) {
                let usable = orders.filter(|orders| orders.tail < WORST_TAIL);
                series.rings[index].orders =
                    usable.unwrap_or_else(|| BasedOrders::unknown(noise));
            }
        }
        list
    }
}

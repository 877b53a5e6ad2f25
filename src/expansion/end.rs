//! A finite end point inside the ring of a cluster.
//!
//! The path from the end `e` down into its valley is `T(e)`. Outside all rings it has the end's own
//! series (`Series` with no saddle). Where the end lies inside the ring of a cluster, at `u_e`,
//! integration by parts leaves a boundary term,
//!
//! `T(e) ~ exp(i k f(e)) sum_n k^(-n) [ sum_j p_j^(n) J_j - H_n(u_e)/(i k) ]`,
//!
//! with the incomplete canonical integrals `J_j` from `u_e` to the valley through which the descent
//! from `e` leaves the ring. It is uniform in the place of the end, on a saddle too. Which of the
//! two is used is decided at each wavenumber by the error figures.
//!
//! Source: N. Bleistein, Comm. Pure Appl. Math. 19 (1966) 353 (end point near a saddle).

use super::contribution::Contribution;
use super::end_pole::{ascent_in_ring, with_pole};
use super::figure::Parts;
use super::incomplete::{Incomplete, incomplete};
use super::level::Level;
use super::pole::Pole;
use super::series::Series;
use super::unfolding::Unfolding;
use crate::Scaled;
use crate::integral::Phase;
use crate::ring::{MAX_ORDERS, NormalForm, preimage};
use crate::saddles::Topology;
use num_complex::Complex64;

/// Incomplete integrals that may have been asked for and may exist.
pub(crate) type Known = Option<Option<Incomplete>>;

/// An end point must lie within this part of a ring.
const INSIDE: f64 = 0.9;

/// What is left of the residual's effect where the integral ends inside the ring.
const CANCELLED: f64 = 0.3;

/// The boundary terms of one ring.
#[derive(Clone)]
struct Boundary {
    ring: usize,
    u: Complex64,
    valley: usize,
    terms: [Complex64; MAX_ORDERS],
    noise: [f64; MAX_ORDERS],
    /// The poles that are split off, each with its steepest ascent in the plane of `u`.
    poles: Vec<(usize, Vec<Complex64>)>,
}

/// An end point as seen from the rings of one cluster.
#[derive(Clone)]
pub(crate) struct NearEnd {
    /// The cluster: an index into the plan's nodes.
    pub node: usize,
    /// Those that belong to all amplitudes come first.
    boundaries: Vec<Boundary>,
    common: usize,
    level: Level,
    sign: f64,
}

impl NearEnd {
    /// None if the end lies in no ring of the series. `tail` is the descent from the end.
    pub fn new(
        phase: &dyn Phase,
        series: &Series,
        node: usize,
        (e, sign): (Complex64, f64),
        tail: &[Complex64],
        poles: &[(Pole, Vec<Complex64>)],
    ) -> Option<NearEnd> {
        let mut boundaries = Vec::new();
        for (index, ring) in series.rings().iter().enumerate() {
            // Whether the descent passes a pole outside a ring on one side or the other is not known there.
            if ring.beyond > 0.0 {
                continue;
            }
            let Some(v) = ring.form.locate(e) else { continue };
            if v.norm() > INSIDE {
                continue;
            }
            let Some(valley) = Topology::leaves_by_valley(&ring.form, v, tail) else { continue };
            let (terms, noise) = ring.orders.boundary(&ring.form, &ring.start, v);
            let split = (0..poles.len()).filter(|n| ring.split >> n & 1 == 1);
            let ascents = split.filter_map(|n| {
                let pole = series.poles()[n].as_ref()?;
                Some((n, ascent_in_ring(&ring.form, pole, &poles[n].1)))
            });
            boundaries.push(Boundary {
                poles: ascents.collect(),
                ring: index,
                u: v * ring.form.radius(),
                valley,
                terms,
                noise,
            });
        }
        (!boundaries.is_empty()).then(|| NearEnd {
            node,
            common: boundaries.len(),
            boundaries,
            level: Level::of(phase, e, 0.2 * (series.form().map()[1]).norm()),
            sign,
        })
    }

    /// The same for the series of another amplitude on the same `rings` rings and perhaps on smaller
    /// ones after them. Those hold all saddles, so the descent leaves them through the same valley.
    pub fn for_series(&self, series: &Series, rings: usize) -> NearEnd {
        let mut near = self.clone();
        for boundary in &mut near.boundaries {
            let ring = &series.rings()[boundary.ring];
            boundary.terms = ring.start.boundary(&ring.form, boundary.u / ring.form.radius());
        }
        if let Some(innermost) = self.boundaries.iter().find(|boundary| boundary.ring == 0) {
            for (index, ring) in series.rings().iter().enumerate().skip(rings) {
                let v = innermost.u / ring.form.radius();
                if v.norm() <= INSIDE {
                    let (terms, noise) = ring.orders.boundary(&ring.form, &ring.start, v);
                    let inner = innermost.clone();
                    near.boundaries.push(Boundary { ring: index, terms, noise, ..inner });
                }
            }
        }
        near
    }

    /// The contribution at wavenumber `k` with at most `orders` orders; None if the descent inside
    /// the ring did not arrive. `known` keeps incomplete integrals for other amplitudes.
    pub fn at(
        &self,
        series: &Series,
        k: f64,
        orders: usize,
        known: &mut [Known],
    ) -> Option<Contribution> {
        let mut best: Option<(usize, usize, f64, _, _)> = None;
        for (index, boundary) in self.boundaries.iter().enumerate() {
            let ring = &series.rings()[boundary.ring];
            let found = || incomplete(&Unfolding::new(&ring.form), boundary.u, boundary.valley, k);
            let moments = match known.get_mut(index).filter(|_| index < self.common) {
                Some(slot) => *slot.get_or_insert_with(found),
                None => found(),
            };
            let Some(moments) = moments else { continue };
            let mut parts = Parts::of_ring(ring, &moments.values.map(|c| c.norm()), k, orders);
            // Its error inside and at the end nearly cancel.
            parts.residual *= CANCELLED;
            let mut power = 1.0 / k;
            for n in 0..MAX_ORDERS {
                parts.terms[n] += power * boundary.terms[n].norm();
                parts.noise[n] += power * boundary.noise[n];
                power /= k;
            }
            let limit = best.as_ref().map_or(f64::INFINITY, |b| b.2);
            let (kept, mut figure) = parts.least(limit);
            if best.is_some() && figure >= limit {
                continue;
            }
            for (p, error) in ring.orders.coefficients(0).iter().zip(&moments.errors) {
                figure += p.norm() * error;
            }
            let mut split_off = Complex64::new(0.0, 0.0);
            for (n, ascent) in &boundary.poles {
                let phi = Unfolding::new(&ring.form);
                let at = (boundary.u, boundary.valley);
                let pole = series.poles()[*n].as_ref();
                let found = pole.and_then(|pole| with_pole(&phi, at, pole, ascent, k));
                let (value, error) = found.unwrap_or((split_off, f64::INFINITY));
                split_off += value;
                figure += error;
            }
            if best.as_ref().is_none_or(|b| figure < b.2) {
                best = Some((index, kept, figure, moments, split_off));
            }
        }
        let (index, kept, figure, moments, mut sum) = best?;
        let boundary = &self.boundaries[index];
        let ring = &series.rings()[boundary.ring];
        let mut power = 1.0;
        for n in 0..kept {
            let p = ring.orders.coefficients(n);
            let inside: Complex64 = p.iter().zip(&moments.values).map(|(p, c)| p * c).sum();
            sum += (inside + boundary.terms[n] * Complex64::new(0.0, 1.0 / k)) * power;
            power /= k;
        }
        let noise = self.level.error(k) * sum.norm();
        Some(Contribution::new(
            self.level.exponent(k),
            Scaled::from(sum * self.sign),
            Scaled::from(Complex64::new(figure + noise, 0.0)),
            kept,
        ))
    }
}

impl NormalForm {
    /// `v` with `z(R v) = z` from the linear part of the map or from the centre.
    pub(crate) fn locate(&self, z: Complex64) -> Option<Complex64> {
        let linear = (z - self.map()[0]) / self.map()[1];
        let start = if linear.norm() > 1.0 { linear / linear.norm() } else { linear };
        self.preimage(z, start).or_else(|| self.preimage(z, Complex64::new(0.0, 0.0)))
    }

    /// `v` with `z(R v) = z`, by Newton's method on the Taylor map from `start`; None if it leaves
    /// the neighbourhood of the disc.
    pub(crate) fn preimage(&self, z: Complex64, start: Complex64) -> Option<Complex64> {
        preimage(self.map(), z, start)
    }
}

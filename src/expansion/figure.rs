//! The error figure of one series on one ring.
//!
//! Method. With `a_n` the size of order `n` (absolute values of its parts) and `q_n` the same for
//! unit noise on the ring, the figure of the first `n` orders is the sum of
//! - truncation: the largest of the next orders, taken over enough of them to bridge runs of
//!   orders that vanish, and of geometric interpolations across order `n`;
//! - rounding: the residual of the normal form times the wavenumber, passed through the series (all but
//!   its mean over the ring, an error of `A`, which is known better: `level`);
//! - resolution: what the transform folds into the amplitude's coefficients and what they lack;
//! - division and canonical function.
//!
//! The least over `n` is taken: the smallest-term rule. The constants were found by covering
//! random clusters (see the tests of coverage).

use super::level::MEAN;
use super::rings::Ring;
use crate::ring::{KEPT, MAX_ORDERS, POINTS};

/// What the figure is made of, for one ring and one wavenumber.
pub(crate) struct Parts {
    /// `a_n`.
    pub terms: [f64; MAX_ORDERS],
    /// `q_n`, for unit noise.
    pub noise: [f64; MAX_ORDERS],
    /// `max |G_0|` on the ring.
    pub size: f64,
    /// `q_0` so far as it comes from the mean over the ring.
    pub mean: f64,
    /// `k |f - A - Phi|`, root mean square.
    pub residual: f64,
    /// What is wrong with the Taylor coefficients of `G_0`.
    pub folded: f64,
    /// The first coefficients that are missing: of `G_0`, and of `k f - k A - k Phi`.
    pub missing: f64,
    /// `K + 2`.
    pub degree: usize,
    /// `k sum |x_m| |u_s|^m`.
    pub spread: f64,
    /// `|u_s|/R`.
    pub filling: f64,
    /// The series may keep at most this many orders.
    pub orders: usize,
}

const EPS: f64 = f64::EPSILON;
/// Error in units of the root mean square of noise on the ring.
pub(super) const RESIDUAL: f64 = 7.0;

impl Parts {
    /// For a ring whose canonical integrals have the given sizes, at wavenumber `k`.
    pub fn of_ring(ring: &Ring, sizes: &[f64], k: f64, orders: usize) -> Parts {
        let mut terms = [0.0; MAX_ORDERS];
        let mut noise = [0.0; MAX_ORDERS];
        let mut power = 1.0;
        for n in 0..MAX_ORDERS {
            let p = ring.orders.coefficients(n);
            for ((p, q), c) in p.iter().zip(ring.orders.noise(n)).zip(sizes) {
                terms[n] += power * p.norm() * c;
                noise[n] += power * q * c;
            }
            power /= k;
        }
        let form = &ring.form;
        let reach = ring.filling * form.radius();
        let spread: f64 =
            (1..form.saddles()).map(|m| form.x(m).norm() * reach.powi(m as i32)).sum();
        Parts {
            terms,
            noise,
            size: ring.start.size(),
            residual: k * form.residual(),
            mean: MEAN.min(ring.orders.noise(0)[0]) * sizes[0],
            folded: ring.start.folded(),
            missing: ring.start.missing() + k * form.unresolved(),
            degree: form.degree(),
            spread: k * spread,
            filling: if form.saddles() > 1 { ring.filling } else { 0.0 },
            orders,
        }
    }

    /// The number of orders with the least figure, and that figure; no less than `limit`, above which no
    /// figure is of interest.
    pub fn least(&self, limit: f64) -> (usize, f64) {
        let present = |n: usize| self.terms[n] >= 1000.0 * EPS * self.size * self.noise[n];
        let mut longest = 0;
        let mut run = 0;
        for n in 0..MAX_ORDERS {
            if present(n) {
                longest = longest.max(run);
                run = 0;
            } else {
                run += 1;
            }
        }
        let ahead = (1 + longest).max(2);
        let mut logs = None;
        // Of the canonical integrals, each as accurate as it is.
        let canonical = EPS * if self.degree > 3 { 4 * (self.degree - 2) } else { 4 } as f64;
        let division = self.terms[0]
            * (canonical + 0.5 * EPS * self.spread + 10.0 * self.filling.powi(POINTS as i32));
        // The mean of the residual is an error of A, which is known better.
        let level = self.size * self.mean;
        let mut best = (0, limit);
        let mut passed = 0.0;
        let mut unresolved = 0.0;
        let mut grown = 1.0;
        let highest = KEPT as f64 / self.degree as f64;
        for n in 1..=self.orders.min(MAX_ORDERS - 3) {
            let size = self.size * self.noise[n - 1];
            passed += size;
            // Division by Phi' takes a factor |u_s|/R a power, each order starts K + 2 powers higher and has
            // differentiated once more.
            let powers = KEPT.saturating_sub(self.degree * n);
            grown *= (highest - n as f64 + 1.0).max(1.0) / n as f64;
            unresolved += self.missing * size * (grown * self.filling.powi(powers as i32)).min(1.0);
            // What grows with the orders comes first: often nothing else has to be asked for.
            let rest = RESIDUAL * (self.residual * (passed - level) + 2.0 * EPS * passed)
                + 3.0 * (self.folded * passed + unresolved)
                + division;
            if rest >= best.1 || rest.is_nan() {
                break;
            }
            let mut next = 0.0f64;
            for a in self.terms.iter().skip(n).take(ahead) {
                next = next.max(*a);
            }
            if longest >= 3 {
                next = next.max(self.size * self.noise[n]);
            }
            let weight = 2.5 + (n as f64).sqrt();
            if weight * next + rest >= best.1 {
                continue;
            }
            let logs = logs.get_or_insert_with(|| self.terms.map(f64::ln));
            let mut log = f64::NEG_INFINITY;
            for (i, j) in [(1usize, 1usize), (1, 2), (2, 1), (2, 2), (1, 3), (3, 1)] {
                if i <= n && n + j < MAX_ORDERS {
                    let (low, high) = (logs[n - i], logs[n + j]);
                    if low > f64::NEG_INFINITY && high > f64::NEG_INFINITY {
                        log = log.max((low * j as f64 + high * i as f64) / (i + j) as f64);
                    }
                }
            }
            let figure = weight * next.max(0.3 * log.exp()) + rest;
            if figure < best.1 {
                best = (n, figure);
            }
        }
        best
    }
}

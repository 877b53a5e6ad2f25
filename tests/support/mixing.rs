//! Random numbers that are the same on every machine.

#![allow(dead_code)] // Each test uses its part.

use merging_saddles::Complex64;
use std::f64::consts::TAU;

/// Steele, Lea & Flood's mixing generator.
pub struct Random(pub u64);

impl Random {
    /// Neighbouring seeds give unrelated numbers.
    pub fn new(seed: u64) -> Random {
        let mut random = Random(seed.wrapping_mul(0xd134_2543_de82_ef95));
        random.next();
        random
    }

    /// From 0 to below 1.
    pub fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn within(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.next()
    }

    pub fn below(&mut self, n: usize) -> usize {
        ((self.next() * n as f64) as usize).min(n - 1)
    }

    pub fn chance(&mut self, p: f64) -> bool {
        self.next() < p
    }

    /// 10 to a power between the two.
    pub fn power(&mut self, low: f64, high: f64) -> f64 {
        10f64.powf(self.within(low, high))
    }

    pub fn turn(&mut self) -> Complex64 {
        Complex64::from_polar(1.0, TAU * self.next())
    }

    pub fn disc(&mut self, radius: f64) -> Complex64 {
        radius * self.next().sqrt() * self.turn()
    }
}

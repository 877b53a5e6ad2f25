//! Airy functions (DLMF chapter 9).

use crate::Scaled;
use num_complex::Complex64;

/// The four values of the Airy functions at one point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Airy<T> {
    /// Ai.
    pub ai: T,
    /// Ai'.
    pub ai_prime: T,
    /// Bi.
    pub bi: T,
    /// Bi'.
    pub bi_prime: T,
}

/// The rotated pair: Ai and Ai' at `z e^(2 pi i/3)` (`plus`) and at `z e^(-2 pi i/3)` (`minus`).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rotated<T> {
    /// Ai(z e^(2 pi i/3)).
    pub plus: T,
    /// Ai'(z e^(2 pi i/3)), the derivative of Ai taken at the rotated point.
    pub plus_prime: T,
    /// Ai(z e^(-2 pi i/3)).
    pub minus: T,
    /// Ai'(z e^(-2 pi i/3)).
    pub minus_prime: T,
}

/// placeholder
pub fn airy(_z: Complex64) -> Airy<Complex64> {
    unimplemented!()
}
/// placeholder
pub fn airy_extended(_z: Complex64) -> Airy<Scaled> {
    unimplemented!()
}
/// placeholder
pub fn rotated_extended(_z: Complex64) -> Rotated<Scaled> {
    unimplemented!()
}

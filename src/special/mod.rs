//! Functions of numbers: the ground floor, which knows no phases.

pub mod airy;
pub mod cuspoid;
mod double_double;

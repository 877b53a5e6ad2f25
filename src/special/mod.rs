//! Functions of numbers: the ground floor, which knows no phases.

pub mod airy;
pub mod cuspoid;
pub(crate) mod double_double;
pub mod faddeeva;
pub(crate) mod panels;
mod slices;
pub mod umbilic;

//! Functions of numbers: the ground floor, which knows no phases.

pub mod airy;
mod double_double;

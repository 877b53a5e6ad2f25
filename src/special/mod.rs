//! Functions of numbers: the ground floor, which knows no phases.

pub mod airy;
pub(crate) mod double_double;

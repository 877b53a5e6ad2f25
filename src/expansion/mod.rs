//! Uniform expansions: the coefficients of the ring joined to the canonical integrals.

mod canonical;
mod figure;
mod series;

pub(crate) use canonical::LARGEST_CLUSTER;
pub(crate) use series::{Contribution, Series};

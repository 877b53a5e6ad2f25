//! Uniform expansions: the coefficients of the ring joined to the canonical integrals.

mod canonical;
mod end;
mod figure;
mod incomplete;
mod series;
mod unfolding;

pub(crate) use canonical::LARGEST_CLUSTER;
pub(crate) use end::NearEnd;
pub(crate) use series::{Contribution, Series};

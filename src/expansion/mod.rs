//! Uniform expansions: the coefficients of the ring joined to the canonical integrals.

mod algebraic;
mod canonical;
mod end;
mod end_pole;
mod figure;
mod incomplete;
mod level;
mod parabolic;
mod pole;
mod series;
mod unfolding;

pub(crate) use algebraic::{AlgebraicSeries, Part, Powered};
pub(crate) use end::NearEnd;
pub(crate) use pole::Pole;
pub(crate) use series::{Contribution, Given, Series};

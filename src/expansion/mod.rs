//! Uniform expansions: the coefficients of the ring joined to the canonical integrals.

mod algebraic;
mod canonical;
mod contribution;
mod end;
mod end_moments;
mod end_pole;
mod far_pole;
mod figure;
mod incomplete;
mod layers;
mod level;
mod pole;
mod rings;
mod series;
mod unfolding;

pub(crate) use algebraic::{AlgebraicSeries, Part, Powered};
pub(crate) use canonical::Moments;
pub(crate) use contribution::Contribution;
pub(crate) use end::{Known, NearEnd};
pub(crate) use layers::{Layer, Layers};
pub(crate) use pole::Pole;
pub(crate) use rings::Given;
pub(crate) use series::Series;

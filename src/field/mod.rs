//! The one API: plan an integral once, evaluate it at any wavenumber.

mod algebraic;
mod build;
mod explain;
mod plan;

pub use plan::Plan;

//! The one API: plan an integral once, evaluate it at any wavenumber.

mod algebraic;
mod build;
mod explain;
mod gradient;
mod plan;

pub use gradient::GradientPlan;
pub use plan::Plan;

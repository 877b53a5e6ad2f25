//! The one API: plan an integral once, evaluate it at any wavenumber.

mod plan;

pub use plan::Plan;

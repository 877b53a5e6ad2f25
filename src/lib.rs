//! Special functions and uniform asymptotics near coalescing saddle points.
#![forbid(unsafe_code)]
#![deny(missing_docs)]

mod error;
mod estimate;
mod expansion;
pub mod field;
pub mod guide;
pub mod integral;
mod quadrature;
pub mod ring;
pub mod saddles;
mod scaled;
pub mod special;

pub use error::Error;
pub use estimate::{Estimate, Form};
pub use field::Plan;
pub use integral::{Contour, Integral, Phase};
pub use num_complex::{self, Complex64};
pub use scaled::Scaled;

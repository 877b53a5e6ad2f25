//! Special functions and uniform asymptotics near coalescing saddle points.
//!
//! A wave field is often an oscillatory integral
//!
//! `I(k) = integral over C of g(z) exp(i k f(z)) dz`, `k` large,
//!
//! whose saddle points (zeros of `f'`) merge: at caustics, at cusps, where a guided mode reaches
//! its cut-off and leaks away as a beam. Ray and WKB formulas blow up there; quadrature costs more
//! the shorter the wave. This crate evaluates such integrals right through the merging points, at
//! a cost that does not depend on `k`, with an error figure, and with a quadrature beside it that
//! any value can be checked against.
//!
//! ```
//! use merging_saddles::{Complex64, Contour, Integral};
//! use std::f64::consts::PI;
//!
//! // Two saddles, a hair from merging: I = 2 pi i J_{k(1+a)}(k) (DLMF 10.9.17).
//! let a = 1e-9;
//! let minus_i = Complex64::new(0.0, -1.0);
//! let integral = Integral::new(
//!     move |z: Complex64| {
//!         ((z.sinh() - z - z * a) * minus_i, (z.cosh() - 1.0 - a) * minus_i) // f and f'
//!     },
//!     Contour::through([
//!         Complex64::new(3.0, -PI),
//!         Complex64::new(0.0, 0.0),
//!         Complex64::new(3.0, PI),
//!     ]),
//! );
//! let plan = integral.plan()?; // saddles, clusters, valleys, expansions: no k in it
//! for k in [10.0, 1e3, 1e5] {
//!     let u = plan.at(k)?;
//!     println!("k = {k}: {:.12} +- {:.0e}", u.value, u.error);
//! }
//! // J of order 10 (1 + 1e-9) at 10, by an arbitrary-precision library (mpmath, 25 digits).
//! let j = plan.at(10.0)?.value / Complex64::new(0.0, 2.0 * PI);
//! assert!((j.re - 0.2074861057206876).abs() < 1e-11);
//!
//! let yardstick = integral.quadrature(1e3, 1e-12)?;
//! assert!((plan.at(1e3)?.value - yardstick.value).norm() < 1e-11 * yardstick.value.norm());
//! # Ok::<(), merging_saddles::Error>(())
//! ```
//!
//! # What lives where
//!
//! | module | what |
//! | --- | --- |
//! | [`special`] | functions of numbers: Airy functions and canonical integrals |
//! | [`ring`] | the numerical core: analytic functions on a circle, division, normal form |
//! | [`integral`] | what a caller hands in: phase, amplitude, contour, derivatives in parameters |
//! | [`saddles`] | where the saddles are |
//! | [`field`] | the one API: plan once, evaluate at any wavenumber |
//! | [`guide`] | the application: modes of a slowly varying guide through cut-off |
//!
//! [`Integral::plan`] and [`Integral::quadrature`] return the same [`Estimate`].
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
pub use estimate::{Estimate, FieldGradient, Form};
pub use field::{GradientPlan, Plan};
pub use integral::{Contour, Gradient, Integral, Phase};
pub use num_complex::{self, Complex64};
pub use scaled::Scaled;

//! What every evaluation of an integral returns.

use crate::Scaled;
use num_complex::Complex64;

/// How a value was obtained.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Form {
    /// Asymptotic contributions of clusters of saddle points (and of finite end points).
    Saddles {
        /// Clusters that contribute.
        clusters: usize,
        /// Saddles in the largest of them.
        largest: usize,
    },
    /// Finite end points alone; no saddle contributes.
    EndPoints,
    /// Quadrature along the contour, flowed downhill.
    Quadrature {
        /// Evaluations of the integrand.
        evaluations: usize,
    },
}

/// A value with its error figure.
///
/// `value` and `error` go to infinity or zero where they leave the range of `f64`;
/// `scaled` and `relative_error` do not.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// The value.
    pub value: Complex64,
    /// A bound that the absolute error is expected to stay below.
    pub error: f64,
    /// The value with its exponent apart.
    pub scaled: Scaled,
    /// `error / |value|`, also where both leave the range of `f64`; infinite at a zero.
    pub relative_error: f64,
    /// Orders of the expansion that were kept (the largest of all clusters); 0 for quadrature.
    pub orders: usize,
    /// How it was obtained.
    pub form: Form,
}

impl Estimate {
    /// From a scaled value and an error that carries its own exponent (its mantissa real).
    pub(crate) fn new(scaled: Scaled, error: Scaled, orders: usize, form: Form) -> Self {
        let relative_error = if error.is_zero() {
            0.0
        } else if scaled.is_zero() {
            f64::INFINITY
        } else {
            (error.ln_norm() - scaled.ln_norm()).exp()
        };
        Estimate {
            value: scaled.to_complex(),
            error: error.to_complex().re,
            scaled,
            relative_error,
            orders,
            form,
        }
    }
}

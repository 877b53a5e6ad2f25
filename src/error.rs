//! Every refusal of the crate, with the offending value and what to do about it.

use num_complex::Complex64;
use std::fmt;

/// Why a call could not be answered. Each message names the value and says what to change.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Error {
    /// An argument lies outside the domain of the function.
    Domain {
        /// The argument's name.
        what: &'static str,
        /// Its value.
        value: Complex64,
        /// What to do.
        remedy: &'static str,
    },
    /// The arguments are so large that their own rounding leaves no correct digit.
    NoDigits {
        /// The function.
        what: &'static str,
        /// The argument that is too large.
        value: Complex64,
        /// Digits that the inputs allow (negative: the phase is unknown by many turns).
        digits: f64,
        /// What to do.
        remedy: &'static str,
    },
    /// A caller's phase or amplitude returned NaN or infinity.
    NotFinite {
        /// `phase`, `derivative of the phase` or `amplitude`.
        what: &'static str,
        /// Where it was evaluated.
        at: Complex64,
    },
    /// An iteration did not converge within its bound.
    NoConvergence {
        /// The iteration.
        what: &'static str,
        /// How many steps were allowed.
        limit: usize,
        /// What to do.
        remedy: &'static str,
    },
    /// It could not be decided, or not be computed with any correct digit, by saddle points.
    Undecided {
        /// What went wrong, for a person.
        reason: String,
        /// What to do.
        remedy: &'static str,
    },
    /// The crate does not cover this case.
    Unsupported {
        /// What is not covered.
        what: String,
        /// What to do.
        remedy: &'static str,
    },
}

impl Error {
    /// A real argument outside the domain.
    pub(crate) fn domain(what: &'static str, value: f64, remedy: &'static str) -> Self {
        Error::Domain { what, value: Complex64::new(value, 0.0), remedy }
    }

    /// Refuses NaN and infinities.
    pub(crate) fn require_finite(what: &'static str, value: f64) -> Result<(), Self> {
        if value.is_finite() {
            Ok(())
        } else {
            Err(Error::domain(what, value, "pass a finite number"))
        }
    }

    /// Refuses everything but finite numbers above zero.
    pub(crate) fn require_positive(what: &'static str, value: f64) -> Result<(), Self> {
        if value.is_finite() && value > 0.0 {
            Ok(())
        } else {
            Err(Error::domain(what, value, "pass a finite number above zero"))
        }
    }
}

fn short(value: &Complex64) -> String {
    if value.im == 0.0 { format!("{}", value.re) } else { format!("{}{:+}i", value.re, value.im) }
}

impl fmt::Display for Error {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Error::Domain { what, value, remedy } => {
                write!(out, "{what} = {} is outside the domain: {remedy}", short(value))
            }
            Error::NoDigits { what, value, digits, remedy } => write!(
                out,
                "{what} at {}: rounding of the inputs leaves {digits:.1} digits: {remedy}",
                short(value)
            ),
            Error::NotFinite { what, at } => write!(
                out,
                "the {what} is not finite at z = {}: keep the contour away from singularities",
                short(at)
            ),
            Error::NoConvergence { what, limit, remedy } => {
                write!(out, "{what} did not converge in {limit} steps: {remedy}")
            }
            Error::Undecided { reason, remedy } => write!(out, "{reason}: {remedy}"),
            Error::Unsupported { what, remedy } => write!(out, "{what} is not covered: {remedy}"),
        }
    }
}

impl std::error::Error for Error {}

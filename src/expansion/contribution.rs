//! What one series adds to the integral.

use crate::Scaled;
use num_complex::Complex64;

/// What a series adds to the integral.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Contribution {
    pub value: Scaled,
    /// Its modulus; of a sum, the sum of the moduli.
    pub size: Scaled,
    pub error: Scaled,
    pub orders: usize,
}

impl Contribution {
    pub const NONE: Contribution =
        Contribution { value: Scaled::ZERO, size: Scaled::ZERO, error: Scaled::ZERO, orders: 0 };

    /// What could not be computed.
    pub const UNKNOWN: Contribution = Contribution {
        value: Scaled::ZERO,
        size: Scaled::ZERO,
        error: Scaled { mantissa: Complex64::new(f64::INFINITY, 0.0), exponent: 0 },
        orders: 0,
    };

    /// Whether the error is at the rounding level.
    pub fn is_sharp(&self) -> bool {
        self.error.ln_norm() < self.value.ln_norm() - 30.0
    }

    /// `exp(exponent)` times a value and its error; the exponent with what it lacks as a double.
    pub fn new(
        exponent: (Complex64, Complex64),
        value: Scaled,
        error: Scaled,
        orders: usize,
    ) -> Contribution {
        let factor = Scaled::exp(exponent.0);
        let value = factor * (value * (1.0 + exponent.1 * (1.0 + exponent.1 * 0.5)));
        Contribution { value, size: value.norm(), error: factor.norm() * error, orders }
    }

    pub fn and(&self, other: &Contribution) -> Contribution {
        Contribution {
            value: self.value + other.value,
            size: self.size + other.size,
            error: self.error + other.error,
            orders: self.orders.max(other.orders),
        }
    }

    pub fn times(&self, factor: Complex64) -> Contribution {
        let size = factor.norm();
        Contribution {
            value: self.value * factor,
            size: self.size * size,
            error: self.error * size,
            orders: self.orders,
        }
    }
}

//! Phases and amplitudes as a caller gives them.

use num_complex::Complex64;

/// A phase `f(z)` of `exp(i k f(z))`, analytic near the contour and the saddles.
///
/// Every closure `Fn(Complex64) -> (Complex64, Complex64)` that returns the value and the
/// derivative is a phase. [`ValueOnly`] makes one from the value alone, [`Formula`] from one
/// expression that gives all derivatives, [`Polynomial`] from coefficients.
///
/// [`Formula`]: super::Formula
pub trait Phase {
    /// `f(z)` and `f'(z)`.
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64);

    /// `f(z)`.
    fn value(&self, z: Complex64) -> Complex64 {
        self.value_and_derivative(z).0
    }

    /// `f'(z)` alone. The search for saddles asks for nothing else: worth an override where the value
    /// costs more than the derivative.
    fn derivative(&self, z: Complex64) -> Complex64 {
        self.value_and_derivative(z).1
    }

    /// `f(z)`, `f'(z)` and `f''(z)`. The second derivative steers step lengths only; without an
    /// override it is a difference of `f'` over `1e-7 (1 + |z|)`, good to some eight digits where lengths
    /// are of order 1; for lengths below some 1e-4 measure `z` in other units or give a `Formula`.
    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        let (f, df) = self.value_and_derivative(z);
        let step = 1e-7 * (1.0 + z.norm());
        let (_, ahead) = self.value_and_derivative(z + step);
        [f, df, (ahead - df) / step]
    }

    /// The size of the terms that `f(z)` is summed from: its rounding error is about this times
    /// 2.2e-16. Without an override it is `|f(z)|`, right where no large terms cancel.
    fn noise_scale(&self, z: Complex64) -> f64 {
        self.value(z).norm()
    }
}

impl<F> Phase for F
where
    F: Fn(Complex64) -> (Complex64, Complex64),
{
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        self(z)
    }
}

/// A phase given by its value alone; the derivative comes from eight values on a small circle
/// (seven more evaluations, some 13 digits where the nearest singularity is farther than 0.2).
#[derive(Clone, Debug)]
pub struct ValueOnly<F>(pub F);

impl<F: Fn(Complex64) -> Complex64> Phase for ValueOnly<F> {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        // Cauchy's formula by the trapezoidal rule: exact up to terms of order radius^8.
        const RADIUS: f64 = 0.015_625;
        let mut sum = Complex64::new(0.0, 0.0);
        for j in 0..8 {
            let turn = Complex64::from_polar(1.0, f64::from(j) * std::f64::consts::FRAC_PI_4);
            sum += (self.0)(z + turn * RADIUS) * turn.conj();
        }
        ((self.0)(z), sum / (8.0 * RADIUS))
    }

    fn value(&self, z: Complex64) -> Complex64 {
        (self.0)(z)
    }
}

/// A polynomial phase, coefficients in ascending order: `c[0] + c[1] z + c[2] z^2 + ..`.
#[derive(Clone, Debug, PartialEq)]
pub struct Polynomial(pub Vec<Complex64>);

impl Phase for Polynomial {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        let [f, df, _] = self.jet(z);
        (f, df)
    }

    fn value(&self, z: Complex64) -> Complex64 {
        let zero = Complex64::new(0.0, 0.0);
        self.0.iter().rev().fold(zero, |f, &c| f * z + c)
    }

    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        let zero = Complex64::new(0.0, 0.0);
        let (mut f, mut df, mut half) = (zero, zero, zero);
        for &c in self.0.iter().rev() {
            half = half * z + df;
            df = df * z + f;
            f = f * z + c;
        }
        [f, df, half * 2.0]
    }

    fn noise_scale(&self, z: Complex64) -> f64 {
        self.0.iter().rev().fold(0.0, |sum, c| sum * z.norm() + c.norm())
    }
}

/// An amplitude `g(z)`. Every closure `Fn(Complex64) -> Complex64` is one.
pub trait Amplitude {
    /// `g(z)`.
    fn value(&self, z: Complex64) -> Complex64;
}

impl<F: Fn(Complex64) -> Complex64> Amplitude for F {
    fn value(&self, z: Complex64) -> Complex64 {
        self(z)
    }
}

/// The amplitude 1.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Unit;

impl Amplitude for Unit {
    fn value(&self, _: Complex64) -> Complex64 {
        Complex64::new(1.0, 0.0)
    }
}

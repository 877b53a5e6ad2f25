//! A value with its first two derivatives, so that a formula is written once.

use super::Phase;
use num_complex::Complex64;
use num_traits::{Inv, One, Zero};
use std::ops::{Add, Div, Mul, Neg, Sub};

/// `f`, `f'` and `f''` at one point, carried through arithmetic and elementary functions by the
/// rules of differentiation.
///
/// ```
/// use merging_saddles::{Complex64, integral::Jet};
/// let z = Jet::variable(Complex64::new(0.5, 0.0));
/// let f = (z * z).sin(); // f' = 2 z cos z^2, f'' = 2 cos z^2 - 4 z^2 sin z^2 (elementary)
/// assert!((f.first.re - 0.25f64.cos()).abs() < 1e-15);
/// assert!((f.second.re - (2.0 * 0.25f64.cos() - 0.25f64.sin())).abs() < 1e-15);
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Jet {
    /// The value.
    pub value: Complex64,
    /// The first derivative.
    pub first: Complex64,
    /// The second derivative.
    pub second: Complex64,
}

/// A phase written as one formula over [`Jet`]: `f`, `f'` and `f''` come from the same expression.
/// Costs about three evaluations of `f`.
///
/// ```
/// use merging_saddles::integral::{Formula, Jet};
/// use merging_saddles::{Complex64, Phase};
/// let phase = Formula(|z: Jet| z.sinh() - z * 1.1);
/// let (_, slope) = phase.value_and_derivative(Complex64::new(0.0, 0.0));
/// assert!((slope.re - (1.0 - 1.1)).abs() < 1e-15); // cosh 0 - 1.1
/// ```
#[derive(Clone, Debug)]
pub struct Formula<F>(pub F);

impl<F: Fn(Jet) -> Jet> Phase for Formula<F> {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        let f = (self.0)(Jet::variable(z));
        (f.value, f.first)
    }

    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        let f = (self.0)(Jet::variable(z));
        [f.value, f.first, f.second]
    }
}

impl Jet {
    /// The independent variable at `z`.
    pub fn variable(z: Complex64) -> Jet {
        Jet { value: z, first: Complex64::one(), second: Complex64::zero() }
    }

    /// A constant.
    pub fn constant(c: Complex64) -> Jet {
        Jet { value: c, first: Complex64::zero(), second: Complex64::zero() }
    }

    /// `F(f)` from `F`, `F'`, `F''` at the value: the chain rule.
    pub fn through(self, value: Complex64, first: Complex64, second: Complex64) -> Jet {
        Jet {
            value,
            first: first * self.first,
            second: second * self.first * self.first + first * self.second,
        }
    }

    /// Exponential.
    pub fn exp(self) -> Jet {
        let e = self.value.exp();
        self.through(e, e, e)
    }

    /// Principal logarithm.
    pub fn ln(self) -> Jet {
        let inverse = self.value.inv();
        self.through(self.value.ln(), inverse, -inverse * inverse)
    }

    /// Principal square root.
    pub fn sqrt(self) -> Jet {
        let root = self.value.sqrt();
        let first = (root * 2.0).inv();
        self.through(root, first, -first / (self.value * 2.0))
    }

    /// Sine.
    pub fn sin(self) -> Jet {
        let (s, c) = (self.value.sin(), self.value.cos());
        self.through(s, c, -s)
    }

    /// Cosine.
    pub fn cos(self) -> Jet {
        let (s, c) = (self.value.sin(), self.value.cos());
        self.through(c, -s, -c)
    }

    /// Hyperbolic sine.
    pub fn sinh(self) -> Jet {
        let (s, c) = (self.value.sinh(), self.value.cosh());
        self.through(s, c, s)
    }

    /// Hyperbolic cosine.
    pub fn cosh(self) -> Jet {
        let (s, c) = (self.value.sinh(), self.value.cosh());
        self.through(c, s, c)
    }

    /// Integer power.
    pub fn powi(self, n: i32) -> Jet {
        let n_real = f64::from(n);
        // z^0 and z^1 need no negative powers, which would spoil the value at zero.
        let lower = |by: i32| if n >= by || n < 0 { self.value.powi(n - by) } else { Zero::zero() };
        self.through(self.value.powi(n), lower(1) * n_real, lower(2) * (n_real * (n_real - 1.0)))
    }
}

impl Add for Jet {
    type Output = Jet;
    fn add(self, o: Jet) -> Jet {
        Jet {
            value: self.value + o.value,
            first: self.first + o.first,
            second: self.second + o.second,
        }
    }
}

impl Neg for Jet {
    type Output = Jet;
    fn neg(self) -> Jet {
        Jet { value: -self.value, first: -self.first, second: -self.second }
    }
}

impl Sub for Jet {
    type Output = Jet;
    fn sub(self, o: Jet) -> Jet {
        self + -o
    }
}

impl Mul for Jet {
    type Output = Jet;
    fn mul(self, o: Jet) -> Jet {
        Jet {
            value: self.value * o.value,
            first: self.first * o.value + self.value * o.first,
            second: self.second * o.value + self.first * o.first * 2.0 + self.value * o.second,
        }
    }
}

impl Inv for Jet {
    type Output = Jet;
    fn inv(self) -> Jet {
        let inverse = self.value.inv();
        let square = inverse * inverse;
        self.through(inverse, -square, square * inverse * 2.0)
    }
}

impl Div for Jet {
    type Output = Jet;
    fn div(self, o: Jet) -> Jet {
        Mul::mul(self, o.inv())
    }
}

impl Zero for Jet {
    fn zero() -> Jet {
        Jet::constant(Complex64::zero())
    }

    fn is_zero(&self) -> bool {
        self.value.is_zero() && self.first.is_zero() && self.second.is_zero()
    }
}

impl One for Jet {
    fn one() -> Jet {
        Jet::constant(Complex64::one())
    }
}

/// Operators with plain numbers on the right.
macro_rules! with_numbers {
    ($($number:ty),*) => {$(
        impl Add<$number> for Jet {
            type Output = Jet;
            fn add(self, c: $number) -> Jet {
                Jet { value: self.value + c, ..self }
            }
        }

        impl Sub<$number> for Jet {
            type Output = Jet;
            fn sub(self, c: $number) -> Jet {
                Jet { value: self.value - c, ..self }
            }
        }

        impl Mul<$number> for Jet {
            type Output = Jet;
            fn mul(self, c: $number) -> Jet {
                Jet { value: self.value * c, first: self.first * c, second: self.second * c }
            }
        }

        impl Div<$number> for Jet {
            type Output = Jet;
            fn div(self, c: $number) -> Jet {
                Jet { value: self.value / c, first: self.first / c, second: self.second / c }
            }
        }
    )*};
}

with_numbers!(f64, Complex64);

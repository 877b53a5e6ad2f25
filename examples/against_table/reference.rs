//! Reference values with more digits than a double holds, and differences from them.

use crate::table::{Fault, Table};
use merging_saddles::Complex64;

/// A decimal number as an unevaluated sum `hi + lo` of two doubles, some 31 digits.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reference {
    hi: f64,
    lo: f64,
}

impl Reference {
    const ZERO: Reference = Reference { hi: 0.0, lo: 0.0 };

    /// Reads a finite decimal number.
    pub fn parse(text: &str) -> Option<Reference> {
        // The standard library decides what a number is; below, the form is known to be right.
        let nearest: f64 = text.parse().ok().filter(|x: &f64| x.is_finite())?;
        if nearest == 0.0 {
            return Some(Reference::ZERO);
        }
        let unsigned = text.trim_start_matches(['+', '-']);
        let (digits, exponent) = match unsigned.split_once(['e', 'E']) {
            Some((digits, exponent)) => (digits, exponent.parse().ok()?),
            None => (unsigned, 0i32),
        };
        let (whole, fraction) = digits.split_once('.').unwrap_or((digits, ""));
        let mut value = Reference::ZERO;
        let mut power = exponent;
        // 40 digits are more than the sum of two doubles can hold.
        let mut kept = 0;
        for (index, digit) in whole.bytes().chain(fraction.bytes()).enumerate() {
            let after_point = index >= whole.len();
            if kept < 40 {
                value = value.times(10.0).plus(f64::from(digit - b'0'));
                kept += usize::from(kept > 0 || digit != b'0');
                power -= i32::from(after_point);
            } else {
                power += i32::from(!after_point);
            }
        }
        // 10^22 is the largest power of ten that is a double.
        while power != 0 {
            let step = power.clamp(-22, 22);
            let factor = 10f64.powi(step.abs());
            value = if step > 0 { value.times(factor) } else { value.over(factor) };
            power -= step;
        }
        let sign = if text.starts_with('-') { -1.0 } else { 1.0 };
        Some(Reference { hi: sign * value.hi, lo: sign * value.lo })
    }

    fn normal(hi: f64, lo: f64) -> Reference {
        let sum = hi + lo;
        Reference { hi: sum, lo: lo - (sum - hi) }
    }

    fn times(self, factor: f64) -> Reference {
        let hi = self.hi * factor;
        Reference::normal(hi, self.hi.mul_add(factor, -hi) + self.lo * factor)
    }

    fn plus(self, term: f64) -> Reference {
        let hi = self.hi + term;
        let back = hi - self.hi;
        let error = (self.hi - (hi - back)) + (term - back);
        Reference::normal(hi, error + self.lo)
    }

    fn over(self, divisor: f64) -> Reference {
        let hi = self.hi / divisor;
        let rest = (-hi).mul_add(divisor, self.hi) + self.lo;
        Reference::normal(hi, rest / divisor)
    }

    /// The nearest double.
    pub fn value(self) -> f64 {
        self.hi
    }

    /// `computed - self`, without the rounding of the reference to one double.
    pub fn difference(self, computed: f64) -> f64 {
        (computed - self.hi) - self.lo
    }
}

/// A complex reference value.
#[derive(Clone, Copy, Debug)]
pub struct ComplexReference {
    pub re: Reference,
    pub im: Reference,
}

impl ComplexReference {
    /// `|self|`.
    pub fn norm(self) -> f64 {
        self.re.value().hypot(self.im.value())
    }

    /// `|computed - self|`.
    pub fn distance(self, computed: Complex64) -> f64 {
        self.re.difference(computed.re).hypot(self.im.difference(computed.im))
    }
}

impl Table {
    /// The input columns `<stem>_re` and `<stem>_im`.
    pub fn complex_inputs(&self, stem: &str) -> Result<Vec<Complex64>, Fault> {
        let re = self.numbers(&format!("{stem}_re"))?;
        let im = self.numbers(&format!("{stem}_im"))?;
        Ok(re.into_iter().zip(im).map(|(re, im)| Complex64::new(re, im)).collect())
    }

    /// A column of reference values.
    pub fn references(&self, name: &str) -> Result<Vec<Reference>, Fault> {
        self.map(name, "a finite decimal number", Reference::parse)
    }

    /// The columns `<stem>_re` and `<stem>_im` of reference values.
    pub fn complex_references(&self, stem: &str) -> Result<Vec<ComplexReference>, Fault> {
        self.references_in(&format!("{stem}_re"), &format!("{stem}_im"))
    }

    /// Real and imaginary parts from two columns of any name.
    pub fn references_in(&self, re: &str, im: &str) -> Result<Vec<ComplexReference>, Fault> {
        let (re, im) = (self.references(re)?, self.references(im)?);
        Ok(re.into_iter().zip(im).map(|(re, im)| ComplexReference { re, im }).collect())
    }
}

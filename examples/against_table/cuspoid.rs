//! Cuspoid integrals: with T = 1 + sum |x_m|^(1/(K+2-m)) and S = max(|Psi|, |dPsi/dx_m| / T^m), the
//! error of Psi counts against S and that of dPsi/dx_m against S T^m.

use crate::measured::{Measured, evaluate};
use crate::reference::ComplexReference;
use crate::table::{Fault, Table};
use merging_saddles::special::cuspoid::{self, Cuspoid, pearcey};
use merging_saddles::{Complex64, Error};

/// Along the real line, real parameters; the Pearcey integral by its own fast method.
pub fn pearcey_real(table: &Table) -> Result<Measured, Fault> {
    let points = points::<2>(&columns(|m| table.complex_inputs_or_real(m))?);
    measure(table, &points, |x| x, |[x1, x2]| pearcey(x1.re, x2.re))
}

/// Along the real line.
pub fn real_line<const K: usize>(table: &Table) -> Result<Measured, Fault> {
    let points = points::<K>(&columns(|m| table.complex_inputs_or_real(m))?);
    measure(table, &points, |x| x, |x| cuspoid::real_line(x).map(Cuspoid::to_complex))
}

/// Between two valleys, complex parameters.
pub fn valleys<const K: usize>(table: &Table) -> Result<Measured, Fault> {
    let valley = |name: &str| table.map(name, "the number of a valley", |field| field.parse().ok());
    let (from, to) = (valley("from_valley")?, valley("to_valley")?);
    let points = points::<K>(&columns(|m| table.complex_inputs_or_real(m))?);
    let points: Vec<(usize, usize, [Complex64; K])> =
        from.into_iter().zip(to).zip(points).map(|((from, to), x)| (from, to, x)).collect();
    measure(
        table,
        &points,
        |(_, _, x)| x,
        |(from, to, x)| cuspoid::between(x, *from, *to).map(Cuspoid::to_complex),
    )
}

/// Zeros of the Pearcey integral, found from the table's own rounded to two decimals: distance over
/// the distance from the origin.
pub fn zeros(table: &Table) -> Result<Measured, Fault> {
    let exact = [table.references("x1")?, table.references("x2")?];
    let rounded = |x: f64| (100.0 * x).round() / 100.0;
    let starts: Vec<[f64; 2]> = (0..exact[0].len())
        .map(|row| exact.each_ref().map(|column| rounded(column[row].value())))
        .collect();
    let (values, ns) = evaluate(&starts, |&[x1, x2]| cuspoid::pearcey_zero_near(x1, x2));
    let errors = values.iter().enumerate().map(|(row, value)| {
        let [x1, x2] = exact.each_ref().map(|column| column[row]);
        // A refusal has no correct digit.
        value.as_ref().map_or(f64::INFINITY, |zero| {
            x1.difference(zero.x1).hypot(x2.difference(zero.x2)) / x1.value().hypot(x2.value())
        })
    });
    Ok(Measured::new(ns).quantity("zero", errors))
}

impl Table {
    /// The parameter x_m, from `x<m>` or, complex, from `x<m>_re` and `x<m>_im`.
    fn complex_inputs_or_real(&self, m: usize) -> Result<Vec<Complex64>, Fault> {
        let name = format!("x{m}");
        match self.numbers(&name) {
            Ok(real) => Ok(real.into_iter().map(Complex64::from).collect()),
            Err(fault) => self.complex_inputs(&name).map_err(|_| fault),
        }
    }
}

/// The columns of x_1 .. x_K.
fn columns<const K: usize>(
    read: impl Fn(usize) -> Result<Vec<Complex64>, Fault>,
) -> Result<[Vec<Complex64>; K], Fault> {
    let mut columns = std::array::from_fn(|_| Vec::new());
    for (column, m) in columns.iter_mut().zip(1..) {
        *column = read(m)?;
    }
    Ok(columns)
}

fn points<const K: usize>(columns: &[Vec<Complex64>; K]) -> Vec<[Complex64; K]> {
    (0..columns[0].len()).map(|row| std::array::from_fn(|m| columns[m][row])).collect()
}

/// T, the size of the outermost saddle.
fn outermost<const K: usize>(x: &[Complex64; K]) -> f64 {
    let part = |(m, x): (usize, &Complex64)| x.norm().powf(1.0 / (K + 1 - m) as f64);
    1.0 + x.iter().enumerate().map(part).sum::<f64>()
}

fn measure<P, const K: usize>(
    table: &Table,
    points: &[P],
    parameters: impl Fn(&P) -> &[Complex64; K],
    function: impl Fn(&P) -> Result<Cuspoid<Complex64, K>, Error>,
) -> Result<Measured, Fault> {
    let mut exact = vec![table.complex_references("psi")?];
    for m in 1..=K {
        exact.push(table.complex_references(&format!("dpsi_dx{m}"))?);
    }
    let (values, ns) = evaluate(points, function);
    let errors: Vec<Vec<f64>> = (0..points.len())
        .map(|row| {
            let exact: Vec<ComplexReference> = exact.iter().map(|column| column[row]).collect();
            errors(parameters(&points[row]), &values[row], &exact)
        })
        .collect();
    Ok((0..=K).fold(Measured::new(ns), |measured, m| {
        let name = if m == 0 { "psi".to_string() } else { format!("dpsi_dx{m}") };
        measured.quantity(name, errors.iter().map(|e| e[m]))
    }))
}

/// Errors of Psi and the derivatives; a refusal has no correct digit.
fn errors<const K: usize>(
    x: &[Complex64; K],
    value: &Result<Cuspoid<Complex64, K>, Error>,
    exact: &[ComplexReference],
) -> Vec<f64> {
    let Ok(value) = value else { return vec![f64::INFINITY; K + 1] };
    let t = outermost(x);
    let size = |m: usize| t.powi(m as i32);
    let scale = (0..=K).map(|m| exact[m].norm() / size(m)).fold(0.0, f64::max);
    let computed = std::iter::once(value.psi).chain(value.derivatives);
    computed
        .zip(exact)
        .enumerate()
        .map(|(m, (computed, exact))| exact.distance(computed) / (scale * size(m)))
        .collect()
}

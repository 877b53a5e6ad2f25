//! Cuspoid integrals: with T = 1 + sum |x_m|^(1/(K+2-m)) and S = max(|Psi|, |dPsi/dx_m| / T^m), the
//! error of Psi counts against S and that of dPsi/dx_m against S T^m.

use crate::measured::{Measured, evaluate};
use crate::reference::ComplexReference;
use crate::table::{Fault, Table};
use merging_saddles::special::cuspoid::{Cuspoid, between};
use merging_saddles::{Complex64, Error, Scaled};

/// A point: the valleys of the path and the parameters x_1 .. x_K.
type Point<const K: usize> = (usize, usize, [Complex64; K]);

/// Along the real line, real parameters.
pub fn real<const K: usize>(table: &Table) -> Result<Measured, Fault> {
    let columns = columns::<K, f64>(|m| table.numbers(&format!("x{m}")))?;
    let from = vec![(K + 2) / 2; columns[0].len()];
    let to = vec![0; from.len()];
    let real = |x: f64| Complex64::new(x, 0.0);
    let columns = columns.map(|c| c.into_iter().map(real).collect());
    measure(table, points(&from, &to, &columns))
}

/// Along the real line, complex parameters.
pub fn complex<const K: usize>(table: &Table) -> Result<Measured, Fault> {
    let columns = columns::<K, Complex64>(|m| table.complex_inputs(&format!("x{m}")))?;
    let from = vec![(K + 2) / 2; columns[0].len()];
    let to = vec![0; from.len()];
    measure(table, points(&from, &to, &columns))
}

/// Between two valleys, complex parameters.
pub fn valleys<const K: usize>(table: &Table) -> Result<Measured, Fault> {
    let valley = |name: &str| table.map(name, "the number of a valley", |field| field.parse().ok());
    let columns = columns::<K, Complex64>(|m| table.complex_inputs(&format!("x{m}")))?;
    measure(table, points(&valley("from_valley")?, &valley("to_valley")?, &columns))
}

/// Zeros of the Pearcey integral: |Psi_2| there, which is to be nothing beside its derivatives. The
/// zeros are rounded to doubles, which alone leaves a few 1e-16.
pub fn zeros(table: &Table) -> Result<Measured, Fault> {
    let columns = columns::<2, f64>(|m| table.numbers(&format!("x{m}")))?;
    let zero = vec![0; columns[0].len()];
    let two = vec![2; columns[0].len()];
    let columns = columns.map(|c| c.into_iter().map(Complex64::from).collect());
    let points = points(&two, &zero, &columns);
    let (values, ns) = evaluate(&points, |(from, to, x)| between(x, *from, *to));
    let errors = values.iter().zip(&points).map(|(value, (_, _, x))| {
        let value = value.as_ref().ok()?;
        let t = outermost(x);
        let slopes = value.derivatives.iter().zip(1..);
        let scale = slopes.map(|(d, m)| d.to_complex().norm() / t.powi(m)).fold(0.0, f64::max);
        Some(value.psi.to_complex().norm() / scale)
    });
    Ok(Measured::new(ns).quantity("psi", errors.map(|e| e.unwrap_or(f64::INFINITY))))
}

/// The columns of x_1 .. x_K.
fn columns<const K: usize, T>(
    read: impl Fn(usize) -> Result<Vec<T>, Fault>,
) -> Result<[Vec<T>; K], Fault> {
    let mut columns = std::array::from_fn(|_| Vec::new());
    for (column, m) in columns.iter_mut().zip(1..) {
        *column = read(m)?;
    }
    Ok(columns)
}

fn points<const K: usize>(
    from: &[usize],
    to: &[usize],
    columns: &[Vec<Complex64>; K],
) -> Vec<Point<K>> {
    let row = |n: usize| (from[n], to[n], std::array::from_fn(|m| columns[m][n]));
    (0..from.len()).map(row).collect()
}

/// T, the size of the outermost saddle.
fn outermost<const K: usize>(x: &[Complex64; K]) -> f64 {
    let part = |(m, x): (usize, &Complex64)| x.norm().powf(1.0 / (K + 1 - m) as f64);
    1.0 + x.iter().enumerate().map(part).sum::<f64>()
}

fn measure<const K: usize>(table: &Table, points: Vec<Point<K>>) -> Result<Measured, Fault> {
    let mut exact = vec![table.complex_references("psi")?];
    for m in 1..=K {
        exact.push(table.complex_references(&format!("dpsi_dx{m}"))?);
    }
    let (values, ns) = evaluate(&points, |(from, to, x)| between(x, *from, *to));
    let errors: Vec<Vec<f64>> = (0..points.len())
        .map(|row| {
            let exact: Vec<ComplexReference> = exact.iter().map(|column| column[row]).collect();
            errors(&points[row].2, &values[row], &exact)
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
    value: &Result<Cuspoid<Scaled, K>, Error>,
    exact: &[ComplexReference],
) -> Vec<f64> {
    let Ok(value) = value else { return vec![f64::INFINITY; K + 1] };
    let t = outermost(x);
    let size = |m: usize| t.powi(m as i32);
    let scale = (0..=K).map(|m| exact[m].norm() / size(m)).fold(0.0, f64::max);
    let computed = std::iter::once(value.psi).chain(value.derivatives).map(Scaled::to_complex);
    computed
        .zip(exact)
        .enumerate()
        .map(|(m, (computed, exact))| exact.distance(computed) / (scale * size(m)))
        .collect()
}

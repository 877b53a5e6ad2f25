//! Functions whose errors count against the exact value itself: |computed - exact| / |exact|; for the
//! umbilic integrals and their derivatives against max(|exact|, 0.1).

use crate::measured::{Measured, evaluate};
use crate::reference::ComplexReference;
use crate::table::{Fault, Table};
use merging_saddles::special::airy::{
    Zero, ai_prime_zero, ai_zero, bi_prime_zero, bi_zero, incomplete_airy, scorer,
};
use merging_saddles::special::faddeeva::w;
use merging_saddles::special::umbilic::{Umbilic, elliptic, hyperbolic};
use merging_saddles::{Complex64, Error};

/// N complex quantities of each row, `None` for a refusal; errors count against no less than `floor`.
fn measure<I, const N: usize>(
    table: &Table,
    names: [&'static str; N],
    rows: &[I],
    floor: f64,
    function: impl Fn(&I) -> Option<[Complex64; N]>,
) -> Result<Measured, Fault> {
    let mut exact: [Vec<ComplexReference>; N] = std::array::from_fn(|_| Vec::new());
    for (exact, name) in exact.iter_mut().zip(names) {
        *exact = table.complex_references(name)?;
    }
    let (values, ns) = evaluate(rows, function);
    Ok((0..N).fold(Measured::new(ns), |measured, k| {
        let errors = values.iter().zip(&exact[k]).map(|(value, exact)| match value {
            Some(value) => exact.distance(value[k]) / exact.norm().max(floor),
            None => f64::INFINITY,
        });
        measured.quantity(names[k], errors)
    }))
}

/// w(z).
pub fn faddeeva(table: &Table) -> Result<Measured, Fault> {
    measure(table, ["w"], &table.complex_inputs("z")?, 0.0, |&z| Some([w(z)]))
}

/// Gi, Gi', Hi, Hi'.
pub fn scorers(table: &Table) -> Result<Measured, Fault> {
    measure(table, ["gi", "gip", "hi", "hip"], &table.complex_inputs("z")?, 0.0, |&z| {
        let v = scorer(z);
        Some([v.gi, v.gi_prime, v.hi, v.hi_prime])
    })
}

/// Incomplete Airy integrals.
pub fn incomplete(table: &Table) -> Result<Measured, Fault> {
    let x = table.complex_inputs("x")?;
    let points: Vec<_> = x.into_iter().zip(table.complex_inputs("a")?).collect();
    measure(table, ["i0", "i1"], &points, 0.0, |&(x, a)| {
        incomplete_airy(x, a).ok().map(|v| [v.i0, v.i1])
    })
}

/// The elliptic umbilic integral and its derivatives.
pub fn elliptic_umbilic(table: &Table) -> Result<Measured, Fault> {
    umbilic(table, elliptic)
}

/// The hyperbolic umbilic integral and its derivatives.
pub fn hyperbolic_umbilic(table: &Table) -> Result<Measured, Fault> {
    umbilic(table, hyperbolic)
}

fn umbilic(
    table: &Table,
    function: fn(f64, f64, f64) -> Result<Umbilic, Error>,
) -> Result<Measured, Fault> {
    let (x, y, z) = (table.numbers("x")?, table.numbers("y")?, table.numbers("z")?);
    let points: Vec<[f64; 3]> = (0..x.len()).map(|row| [x[row], y[row], z[row]]).collect();
    measure(table, ["psi", "dpsi_dx", "dpsi_dy", "dpsi_dz"], &points, 0.1, |&[x, y, z]| {
        function(x, y, z).ok().map(|v| {
            let [dx, dy, dz] = v.derivatives;
            [v.psi, dx, dy, dz]
        })
    })
}

/// Real zeros of Ai, Ai', Bi, Bi' and what the other one of the pair is there; the time is that of
/// all four.
pub fn zeros(table: &Table) -> Result<Measured, Fault> {
    let number = |field: &str| field.parse().ok().filter(|k: &usize| *k > 0);
    let k: Vec<usize> = table.map("k", "a whole number above zero", number)?;
    let names = [
        ["a_k", "aip_at_a_k"],
        ["ap_k", "ai_at_ap_k"],
        ["b_k", "bip_at_b_k"],
        ["bp_k", "bi_at_bp_k"],
    ];
    let functions = [ai_zero, ai_prime_zero, bi_zero, bi_prime_zero];
    let (values, ns) = evaluate(&k, |&k| functions.map(|zero| zero(k)));
    let mut measured = Measured::new(ns);
    for (which, names) in names.into_iter().enumerate() {
        for (name, pick) in names.into_iter().zip([location, value]) {
            let exact = table.references(name)?;
            let errors = values.iter().zip(&exact).map(|(zeros, exact)| {
                zeros[which].as_ref().map_or(f64::INFINITY, |zero| {
                    exact.difference(pick(zero)).abs() / exact.value().abs()
                })
            });
            measured = measured.quantity(name, errors);
        }
    }
    Ok(measured)
}

fn location(zero: &Zero<f64>) -> f64 {
    zero.location
}

fn value(zero: &Zero<f64>) -> f64 {
    zero.value
}

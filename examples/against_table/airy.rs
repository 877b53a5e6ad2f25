//! Airy functions: errors on the natural scale.
//!
//! Off the negative real axis the scale of f at z is max(|f|, |f'| / sqrt(1 + |z|)) and that of f'
//! is max(|f'|, |f| sqrt(1 + |z|)): relative errors where there is no zero nearby. On the negative
//! real axis the modulus sqrt(Ai^2 + Bi^2) is the scale, sqrt(Ai'^2 + Bi'^2) for the derivatives.

use crate::measured::{Measured, evaluate};
use crate::reference::{ComplexReference, Reference};
use crate::table::{Fault, Table};
use merging_saddles::Complex64;
use merging_saddles::special::airy::{Airy, airy, airy_real, airy_scaled};

/// Ai, Ai', Bi, Bi' of a complex argument.
pub fn complex(table: &Table) -> Result<Measured, Fault> {
    four_functions(table, ["ai", "aip", "bi", "bip"], airy)
}

/// `e^zeta Ai`, `e^zeta Ai'`, `e^-|Re zeta| Bi`, `e^-|Re zeta| Bi'`, `zeta = (2/3) z^(3/2)`.
pub fn scaled(table: &Table) -> Result<Measured, Fault> {
    four_functions(table, ["sai", "saip", "sbi", "sbip"], airy_scaled)
}

/// Two pairs of a function and its derivative, in columns with the given stems.
fn four_functions(
    table: &Table,
    stems: [&'static str; 4],
    function: impl Fn(Complex64) -> Airy<Complex64>,
) -> Result<Measured, Fault> {
    let z = table.complex_inputs("z")?;
    let exact = [
        table.complex_references(stems[0])?,
        table.complex_references(stems[1])?,
        table.complex_references(stems[2])?,
        table.complex_references(stems[3])?,
    ];
    let (values, ns) = evaluate(&z, |&z| function(z));
    let (z, exact, values) = (&z, &exact, &values);
    let pair = |first: usize, pick: fn(&Airy<Complex64>) -> [Complex64; 2]| {
        values.iter().enumerate().map(move |(row, value)| {
            pair_errors(z[row], exact[first][row], exact[first + 1][row], pick(value))
        })
    };
    Ok(Measured::new(ns)
        .pair([stems[0], stems[1]], pair(0, |v| [v.ai, v.ai_prime]))
        .pair([stems[2], stems[3]], pair(2, |v| [v.bi, v.bi_prime])))
}

/// The errors of a function and its derivative on their natural scales.
fn pair_errors(
    z: Complex64,
    f: ComplexReference,
    df: ComplexReference,
    computed: [Complex64; 2],
) -> [f64; 2] {
    let root = (1.0 + z.norm()).sqrt();
    let scale = f.norm().max(df.norm() / root);
    [f.distance(computed[0]) / scale, df.distance(computed[1]) / (scale * root)]
}

/// Ai, Ai', Bi, Bi' of a real argument.
pub fn real(table: &Table) -> Result<Measured, Fault> {
    let x = table.numbers("x")?;
    let references = [
        table.references("ai")?,
        table.references("aip")?,
        table.references("bi")?,
        table.references("bip")?,
    ];
    let (values, ns) = evaluate(&x, |&x| airy_real(x));
    let errors: Vec<[f64; 4]> = (0..x.len())
        .map(|row| real_errors(x[row], references.each_ref().map(|r| r[row]), values[row]))
        .collect();
    let names = ["ai", "aip", "bi", "bip"];
    Ok(names.iter().enumerate().fold(Measured::new(ns), |measured, (index, name)| {
        measured.quantity(*name, errors.iter().map(|e| e[index]))
    }))
}

fn real_errors(x: f64, exact: [Reference; 4], computed: Airy<f64>) -> [f64; 4] {
    let [ai, ai_prime, bi, bi_prime] = exact.map(Reference::value);
    let root = (1.0 + x.abs()).sqrt();
    let scales = if x < 0.0 {
        let (modulus, slope) = (ai.hypot(bi), ai_prime.hypot(bi_prime));
        [modulus, slope, modulus, slope]
    } else {
        let [ai_scale, bi_scale] = [(ai, ai_prime), (bi, bi_prime)]
            .map(|(f, df): (f64, f64)| f.abs().max(df.abs() / root));
        [ai_scale, ai_scale * root, bi_scale, bi_scale * root]
    };
    let computed = [computed.ai, computed.ai_prime, computed.bi, computed.bi_prime];
    std::array::from_fn(|i| exact[i].difference(computed[i]).abs() / scales[i])
}

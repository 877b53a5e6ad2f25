//! Measures the crate against a table of reference values.
//!
//! ```text
//! cargo run --release --example against_table -- airy_complex tests/data/airy_complex.csv
//! ```
//!
//! The table is CSV: `#` comment lines, one header line, one row per point; inputs are exact
//! doubles, outputs carry 17 digits or more. For every quantity the program prints the maximum,
//! the 99th percentile and the median of the error on the quantity's natural scale, and last the
//! time of one evaluation (the best of several passes over all rows). A file that cannot be read
//! as the table asked for ends the program with exit code 2 and one line that says where.

mod airy;
#[path = "../support/arguments.rs"]
mod arguments;
mod cuspoid;
mod field;
mod layer;
mod measured;
mod reference;
mod relative;
#[path = "../support/table.rs"]
mod table;

use clap::Parser;
use measured::Measured;
use std::process::ExitCode;
use table::{Fault, Table};

/// Measures the crate against a table of reference values.
#[derive(Parser)]
struct Arguments {
    /// What the table holds; a name that is not known is answered with the list of those that are.
    name: String,
    /// The CSV file.
    file: std::path::PathBuf,
}

/// One kind of table: its name and how its rows are evaluated and compared.
struct Entry {
    name: &'static str,
    measure: fn(&Table) -> Result<Measured, Fault>,
}

const ENTRIES: &[Entry] = &[
    Entry { name: "airy_complex", measure: airy::complex },
    Entry { name: "airy_scaled", measure: airy::scaled },
    Entry { name: "airy_real", measure: airy::real },
    Entry { name: "airy_zeros", measure: relative::zeros },
    Entry { name: "scorer", measure: relative::scorers },
    Entry { name: "incomplete_airy", measure: relative::incomplete },
    Entry { name: "faddeeva", measure: relative::faddeeva },
    Entry { name: "pearcey_real", measure: cuspoid::pearcey_real },
    Entry { name: "pearcey_complex", measure: cuspoid::real_line::<2> },
    Entry { name: "pearcey_valleys", measure: cuspoid::valleys::<2> },
    Entry { name: "pearcey_zeros", measure: cuspoid::zeros },
    Entry { name: "swallowtail", measure: cuspoid::real_line::<3> },
    Entry { name: "swallowtail_complex", measure: cuspoid::real_line::<3> },
    Entry { name: "swallowtail_valleys", measure: cuspoid::valleys::<3> },
    Entry { name: "butterfly", measure: cuspoid::real_line::<4> },
    Entry { name: "butterfly_valleys", measure: cuspoid::valleys::<4> },
    Entry { name: "elliptic_umbilic", measure: relative::elliptic_umbilic },
    Entry { name: "hyperbolic_umbilic", measure: relative::hyperbolic_umbilic },
    Entry { name: "cutoff_layer", measure: layer::cutoff },
    Entry { name: "uniform_field", measure: field::uniform },
];

fn run(arguments: &Arguments) -> Result<(), Fault> {
    let entry = ENTRIES.iter().find(|entry| entry.name == arguments.name).ok_or_else(|| {
        let known: Vec<&str> = ENTRIES.iter().map(|entry| entry.name).collect();
        Fault(format!("unknown NAME '{}': give one of {}", arguments.name, known.join(", ")))
    })?;
    let table = Table::read(&arguments.file)?;
    print!("{}", (entry.measure)(&table)?.report(entry.name));
    Ok(())
}

fn main() -> ExitCode {
    let arguments = match arguments::parse::<Arguments>() {
        Ok(arguments) => arguments,
        Err(code) => return code,
    };
    match run(&arguments) {
        Ok(()) => ExitCode::SUCCESS,
        Err(fault) => {
            eprintln!("error: {fault}");
            ExitCode::from(arguments::REFUSED)
        }
    }
}

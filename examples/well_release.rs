//! A state of a quantum well that narrows slowly: held, then released as a pulse.
//!
//! ```text
//! cargo run --release --example well_release
//! ```
//!
//! Scaled units: energies in the well's depth V, lengths in hbar/(2 M V)^(1/2), times in hbar/V. The half
//! width falls along a smooth step; the chosen state is let go when it reaches index times pi/2.

#[path = "support/arguments.rs"]
mod arguments;
#[path = "support/cells.rs"]
mod cells;
#[path = "support/colours.rs"]
mod colours;
#[path = "support/output.rs"]
mod output;
#[path = "support/passage.rs"]
mod passage;
#[path = "support/picture.rs"]
mod picture;
#[path = "support/table.rs"]
#[allow(dead_code)] // its faults serve for every refusal
mod table;

use clap::Parser;
use merging_saddles::Error;
use merging_saddles::guide::{Passage, QuantumWell};
use passage::{Words, fault, print_rows, raised_cosine};
use std::path::PathBuf;
use std::process::ExitCode;
use table::Fault;

/// Follows a state of a narrowing quantum well through its release.
#[derive(Parser)]
#[command(allow_negative_numbers = true)]
struct Arguments {
    /// State, counted from 0; state 0 is never released
    #[arg(long, default_value_t = 2)]
    state: u32,
    /// Half width at the beginning
    #[arg(long, default_value_t = 5.5)]
    from: f64,
    /// Half width at the end
    #[arg(long, default_value_t = 1.2)]
    to: f64,
    /// How long the well takes to narrow
    #[arg(long, default_value_t = 400.0)]
    duration: f64,
    /// The picture
    #[arg(long, value_name = "SVG", default_value = "out/well_release.svg")]
    output: PathBuf,
    /// Columns of the picture
    #[arg(long, default_value_t = 120, value_parser = clap::value_parser!(u16).range(10..=2000))]
    columns: u16,
    /// Rows of the picture
    #[arg(long, default_value_t = 90, value_parser = clap::value_parser!(u16).range(10..=2000))]
    rows: u16,
}

fn main() -> ExitCode {
    let arguments = match arguments::parse::<Arguments>() {
        Ok(arguments) => arguments,
        Err(code) => return code,
    };
    match run(&arguments) {
        Ok(()) => ExitCode::SUCCESS,
        Err(Fault(message)) => {
            eprintln!("error: {message}");
            ExitCode::from(arguments::REFUSED)
        }
    }
}

fn run(arguments: &Arguments) -> Result<(), Fault> {
    let Arguments { from, to, duration, .. } = *arguments;
    output::prepare(&arguments.output)?;
    if !(to > 0.0 && from > to) {
        return Err(Fault(format!(
            "--to {to} does not lie between 0 and --from {from}: give a well that narrows"
        )));
    }
    let walls = raised_cosine(from, to, duration).map_err(fault)?;
    let well = QuantumWell.along(arguments.state, walls, 0.0).map_err(fault)?;
    report(&well).map_err(fault)?;
    draw(&well, arguments)
}

fn report(well: &Passage) -> Result<(), Error> {
    let (release, length) = (well.cutoff_range(), well.layer_range());
    println!("released at the time {release:.1}, at a half width of {:.4}", well.cutoff_width());
    println!("eps {:.4}, over a time of {length:.1}", well.eps());
    println!("the fit of the profile departs by {:.1e} of that", well.fit_departure());
    // The momentum of greatest density, by steps of 0.5 % of the layer's scale.
    let scale = well.layer_height().recip();
    let mut peak = (0.0, 0.0);
    for j in 1..600 {
        let p = 0.005 * scale * f64::from(j);
        let density = well.radiation_per_wavenumber(p)?;
        if density > peak.1 {
            peak = (p, density);
        }
    }
    println!(
        "momentum {:.4}, energy {:.4} of the well's depth at the peak",
        peak.0,
        peak.0 * peak.0
    );
    println!("\n       time   in the well   level at the wall (dB)   formula");
    print_rows(well, 1.0)
}

fn draw(well: &Passage, arguments: &Arguments) -> Result<(), Fault> {
    // A particle of the peak's momentum P = 2^(-1/3)/L_z moves at the speed 2 P.
    let speed = 2.0 * 0.5f64.cbrt() / well.layer_height();
    let start = [well.cutoff_range(), well.cutoff_width()];
    let words = Words {
        title: format!("State {} of a narrowing well: held, then released", arguments.state),
        subtitle:
            "Level of the wave function re its largest value inside; the half above the middle"
                .to_string(),
        axes: ["time (hbar/V)", "from the middle (hbar/(2MV)^(1/2))"],
        boundary: "wall of the well",
        cutoff: "release",
        unit: 1.0,
        range_unit: "",
    };
    let cells = [arguments.columns, arguments.rows];
    passage::draw(well, start, speed, cells, words, &arguments.output)
}

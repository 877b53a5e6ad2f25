//! A sound mode on its way up a shelf, through its cut-off and into the sea bed.
//!
//! ```text
//! cargo run --release --example shelf_cutoff
//! ```
//!
//! Reads a depth profile, finds where each mode of the two-layer sea (water over a faster fluid
//! bottom) reaches its cut-off, and follows one of them: the level in the water and in the bottom,
//! each with its error figure and with the value of the yardstick quadrature beside it, and a
//! picture. The bed need not be plane: the track is fitted round the cut-off. Without arguments it works on the invented track `examples/data/quillfin_shelf.csv`.
//!
//! Levels are those of one mode in two dimensions over a smooth bed; there is no
//! spreading, no roughness and no shear in the bottom. They are no basis for a decision about
//! exposure or safety at sea: local rules and licensed practice come first.

#[path = "../support/arguments.rs"]
mod arguments;
#[path = "../support/cells.rs"]
mod cells;
#[path = "../support/colours.rs"]
mod colours;
#[path = "../support/output.rs"]
mod output;
#[path = "../support/picture.rs"]
mod picture;
mod profile;
mod report;
mod scene;
#[path = "../support/table.rs"]
mod table;

use clap::Parser;
use std::path::PathBuf;
use std::process::ExitCode;
use table::Fault;

/// Follows a sound mode up a shelf, through its cut-off and into the sea bed.
#[derive(Parser)]
#[command(allow_negative_numbers = true)]
pub struct Arguments {
    /// CSV file with the columns range_m and depth_m, depths not increasing; without it the invented
    /// track examples/data/quillfin_shelf.csv
    #[arg(long, value_name = "CSV")]
    profile: Option<PathBuf>,
    /// Frequency in Hz
    #[arg(long, value_name = "HZ", default_value_t = 100.0)]
    frequency_hz: f64,
    /// Sound speed of the water in m/s
    #[arg(long, value_name = "M_PER_S", default_value_t = 1500.0)]
    water_speed: f64,
    /// Sound speed of the bottom in m/s
    #[arg(long, value_name = "M_PER_S", default_value_t = 1650.0)]
    bottom_speed: f64,
    /// Density of the water in kg/m^3
    #[arg(long, value_name = "KG_PER_M3", default_value_t = 1000.0)]
    water_density: f64,
    /// Density of the bottom in kg/m^3
    #[arg(long, value_name = "KG_PER_M3", default_value_t = 1800.0)]
    bottom_density: f64,
    /// Attenuation of the water in dB per wavelength
    #[arg(long, value_name = "DB", default_value_t = 0.0)]
    water_attenuation: f64,
    /// Attenuation of the bottom in dB per wavelength
    #[arg(long, value_name = "DB", default_value_t = 0.0)]
    attenuation: f64,
    /// The mode to follow, counted from 1; without it the lowest that is cut off on the track
    #[arg(long)]
    mode: Option<u32>,
    /// A point to print besides the usual ones; may be given several times
    #[arg(long, value_name = "RANGE_M,DEPTH_M", value_parser = point)]
    point: Vec<(f64, f64)>,
    /// The picture
    #[arg(long, value_name = "SVG", default_value = "out/shelf_cutoff.svg")]
    output: PathBuf,
    /// Columns of the picture
    #[arg(long, default_value_t = 100, value_parser = clap::value_parser!(u16).range(10..=2000))]
    columns: u16,
    /// Rows of the picture
    #[arg(long, default_value_t = 100, value_parser = clap::value_parser!(u16).range(10..=2000))]
    rows: u16,
}

/// The track that comes with the program.
const OWN_TRACK: &str = "examples/data/quillfin_shelf.csv";

/// Reads `RANGE_M,DEPTH_M`.
fn point(text: &str) -> Result<(f64, f64), String> {
    let read = |text: &str| text.trim().parse().ok().filter(|x: &f64| x.is_finite());
    text.split_once(',')
        .and_then(|(range, depth)| Some((read(range)?, read(depth)?)))
        .ok_or_else(|| "give two numbers in metres, as in 5100,45".into())
}

fn main() -> ExitCode {
    let arguments = match arguments::parse::<Arguments>() {
        Ok(arguments) => arguments,
        Err(code) => return code,
    };
    match report::run(&arguments) {
        Ok(()) => ExitCode::SUCCESS,
        Err(Fault(message)) => {
            eprintln!("error: {message}");
            ExitCode::from(arguments::REFUSED)
        }
    }
}

//! Light in a tapered waveguide: one mode through its cut-off and into the cladding.
//!
//! ```text
//! cargo run --release --example taper_leak
//! ```
//!
//! The chip "Dunlin-3" is invented: a core of index 1.475 between claddings of 1.444 whose half width
//! falls along a smooth taper. The program prints where the mode is cut off, the angle and width of the beam
//! that leaves, what is left in the core, and draws the field.
//!
//! A slab in two dimensions and one mode: no basis alone for a decision on laser safety. Local rules and
//! licensed practice decide.

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
use merging_saddles::guide::{Passage, Polarization, Slab, SlabGuide};
use passage::{Words, fault, print_rows, raised_cosine};
use std::path::PathBuf;
use std::process::ExitCode;
use table::Fault;

/// Follows a mode of a tapered slab waveguide through its cut-off.
#[derive(Parser)]
#[command(allow_negative_numbers = true)]
struct Arguments {
    /// Wavelength in vacuum in nm
    #[arg(long, value_name = "NM", default_value_t = 1550.0)]
    wavelength_nm: f64,
    /// Refractive index of the core
    #[arg(long, default_value_t = 1.475)]
    core_index: f64,
    /// Refractive index of the cladding
    #[arg(long, default_value_t = 1.444)]
    cladding_index: f64,
    /// Magnetic field along the slab (TM) in place of the electric field (TE)
    #[arg(long)]
    tm: bool,
    /// Mode, counted from 0; mode 0 has no cut-off
    #[arg(long, default_value_t = 1)]
    mode: u32,
    /// Half width of the core at the start of the taper in nm
    #[arg(long, value_name = "NM", default_value_t = 2600.0)]
    from_nm: f64,
    /// Half width at its end in nm
    #[arg(long, value_name = "NM", default_value_t = 500.0)]
    to_nm: f64,
    /// Length of the taper in nm
    #[arg(long, value_name = "NM", default_value_t = 600_000.0)]
    length_nm: f64,
    /// The picture
    #[arg(long, value_name = "SVG", default_value = "out/taper_leak.svg")]
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
    let Arguments { from_nm, to_nm, length_nm, .. } = *arguments;
    output::prepare(&arguments.output)?;
    let polarization = if arguments.tm { Polarization::Tm } else { Polarization::Te };
    let guide = SlabGuide::new(Slab {
        vacuum_wavelength_nm: arguments.wavelength_nm,
        core_index: arguments.core_index,
        cladding_index: arguments.cladding_index,
        polarization,
    })
    .map_err(fault)?;
    if !(to_nm > 0.0 && from_nm > to_nm) {
        return Err(Fault(format!(
            "--to-nm {to_nm} does not lie between 0 and --from-nm {from_nm}: give a taper that narrows"
        )));
    }
    let taper = raised_cosine(from_nm, to_nm, length_nm).map_err(fault)?;
    let leak = guide.along(arguments.mode, taper, 0.0).map_err(fault)?;
    report(&leak, polarization).map_err(fault)?;
    draw(&leak, arguments)
}

fn report(leak: &Passage, polarization: Polarization) -> Result<(), Error> {
    let (cut, length) = (leak.cutoff_range(), leak.layer_range());
    println!(
        "{polarization:?}, cut off {:.1} um along, at a half width of {:.0} nm",
        cut / 1e3,
        leak.cutoff_width()
    );
    println!("eps {:.4}, transition over {:.1} um", leak.eps(), length / 1e3);
    println!("the fit of the profile departs by {:.1e} of that", leak.fit_departure());
    let beam = leak.beam()?;
    let [low, high] = beam.half_power_rad.map(f64::to_degrees);
    println!(
        "beam at {:.2} degrees from the axis, half its power between {low:.2} and {high:.2}",
        beam.axis_rad.to_degrees()
    );
    println!("\n along (um)   in the core   level at the wall (dB)   formula");
    print_rows(leak, 1e3)
}

fn draw(leak: &Passage, arguments: &Arguments) -> Result<(), Fault> {
    let beam = leak.beam().map_err(fault)?;
    let (start, out) = leak.ray_start(beam.axis_rad);
    let words = Words {
        title: format!(
            "Mode {} of a tapered slab through its cut-off: guided, then a beam in the cladding",
            arguments.mode
        ),
        subtitle: format!(
            "Level re the incoming mode's largest field; {} nm, index {} in {}, {}; the half above the middle plane",
            arguments.wavelength_nm,
            arguments.core_index,
            arguments.cladding_index,
            if arguments.tm { "TM" } else { "TE" }
        ),
        axes: ["along the taper (um)", "from the middle plane (um)"],
        boundary: "edge of the core",
        cutoff: "cut-off",
        unit: 1e3,
        range_unit: " um",
    };
    let cells = [arguments.columns, arguments.rows];
    // In the one-way equation the axis falls by the sine of its angle.
    passage::draw(leak, [start, out], beam.axis_rad.sin(), cells, words, &arguments.output)
}

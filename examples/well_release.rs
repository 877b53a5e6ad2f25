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
#[path = "support/picture.rs"]
mod picture;
#[path = "support/table.rs"]
#[allow(dead_code)] // its faults serve for every refusal
mod table;

use cells::{centres, levels};
use clap::Parser;
use merging_saddles::Error;
use merging_saddles::guide::{Passage, Profile, QuantumWell, level_db};
use picture::Picture;
use std::f64::consts::PI;
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

fn fault(error: Error) -> Fault {
    Fault(error.to_string())
}

fn run(arguments: &Arguments) -> Result<(), Fault> {
    let Arguments { from, to, duration, .. } = *arguments;
    output::prepare(&arguments.output)?;
    if !(to > 0.0 && from > to) {
        return Err(Fault(format!(
            "--to {to} does not lie between 0 and --from {from}: give a well that narrows"
        )));
    }
    let walls = Profile::from_fn(0.0, duration, move |t| {
        let (angle, half) = (PI * t / duration, 0.5 * (from - to));
        (to + half * (1.0 + angle.cos()), -half * angle.sin() * PI / duration)
    })
    .map_err(fault)?;
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
    println!("\n     time    in the well   at the wall (dB)   formula");
    for j in -3..=5 {
        let time = release + 0.6 * length * f64::from(j);
        if time < well.fitted_from() || time > well.profile().ranges()[1] {
            continue;
        }
        let wall = well.field(time, well.profile().width(time))?;
        println!(
            "{time:9.1} {:12.4} % {:14.2} {:15.0e}",
            100.0 * well.energy_inside(time)?,
            level_db(wall.value),
            well.departure(time)?
        );
    }
    Ok(())
}

fn draw(well: &Passage, arguments: &Arguments) -> Result<(), Fault> {
    let [from, to] = well.profile().ranges();
    let to = to.min(well.cutoff_range() + 6.0 * well.layer_range());
    let from = from.max(well.cutoff_range() - 4.0 * well.layer_range());
    // A particle of the peak's momentum P = 2^(-1/3)/L_z moves at the speed 2 P.
    let speed = 2.0 * 0.5f64.cbrt() / well.layer_height();
    let (start, out) = (well.cutoff_range(), well.cutoff_width());
    let axis = |t: f64| out + speed * (t - start);
    let top = (1.5 * axis(to)).max(3.0 * out);
    let (times, across) = (centres(from, to, arguments.columns), centres(0.0, top, arguments.rows));
    let level_db = levels(&times, &across, |t, x| {
        let value = if t < well.fitted_from() {
            well.adiabatic(t, x)
        } else {
            well.field(t, x).map(|u| u.value)
        };
        value.map_or(f64::NAN, level_db)
    });
    let line = |first: f64, x: &dyn Fn(f64) -> f64| -> Vec<(f64, f64)> {
        (0..=100).map(|j| first + (to - first) * f64::from(j) / 100.0).map(|t| (t, x(t))).collect()
    };
    let picture = Picture {
        title: format!("State {} of a narrowing well: held, then released", arguments.state),
        subtitle:
            "Level of the wave function re its largest value inside; the half above the middle"
                .to_string(),
        axes: ["time (hbar/V)", "from the middle (hbar/(2MV)^(1/2))"],
        bed: line(from, &|t| well.profile().width(t)),
        bed_name: "wall of the well",
        model_bed: well.fitted_profile(),
        beam: line(start, &axis),
        cutoff: (start, out),
        cutoff_name: format!("release, {start:.0}"),
        downwards: false,
        range: times,
        across,
        level_db,
        floor_db: -40.0,
    };
    let svg = picture.svg().map_err(|error| Fault(format!("the picture: {error}")))?;
    output::write_whole(&arguments.output, &svg)?;
    println!("\npicture: {}", arguments.output.display());
    Ok(())
}

//! The whole job: tables on the standard output, the picture into its file.

use crate::cells::{centres, level, levels};
use crate::output::{prepare, write_whole};
use crate::picture::Picture;
use crate::scene::{BEFORE, Followed, Level, Scene};
use crate::table::Fault;
use crate::{Arguments, OWN_TRACK};
use merging_saddles::Error;
use std::path::Path;

/// The quietest level of the picture, in dB.
const FLOOR_DB: f64 = -40.0;

/// Stands where there is no level.
const NONE: &str = "-";

const CAUTION: &str = "\
Caution: one mode, two dimensions, two fluid layers, a smooth bed; no spreading, roughness or
shear. These levels alone are no basis for decisions on the exposure of divers,
swimmers or animals: local rules and licensed practice decide.";

pub fn run(arguments: &Arguments) -> Result<(), Fault> {
    let scene = Scene::new(arguments)?;
    let followed = scene.followed(arguments.mode)?;
    prepare(&arguments.output)?;
    print_modes(arguments, &scene);
    print_followed(&followed);
    print_levels(arguments, &followed);
    let (picture, refused) = picture(arguments, &followed);
    let svg = picture.svg().map_err(|error| Fault(format!("the picture: {error}")))?;
    write_whole(&arguments.output, &svg)?;
    println!("\npicture: {}", arguments.output.display());
    if refused > 0 {
        println!("{refused} of its cells could not be evaluated and are grey");
    }
    println!("\n{CAUTION}");
    Ok(())
}

fn print_modes(arguments: &Arguments, scene: &Scene) {
    let [from, to] = scene.profile.ranges();
    let [deep, shallow] = [scene.profile.width(from), scene.profile.width(to)];
    let track = arguments.profile.as_deref().unwrap_or(Path::new(OWN_TRACK));
    println!("track {}", track.display());
    println!("  {from} to {to} m, depth {deep} to {shallow} m");
    println!(
        "water {} m/s, {} kg/m^3, {} dB per wavelength",
        arguments.water_speed, arguments.water_density, arguments.water_attenuation
    );
    println!(
        "bottom {} m/s, {} kg/m^3, {} dB per wavelength",
        arguments.bottom_speed, arguments.bottom_density, arguments.attenuation
    );
    println!("frequency {} Hz", arguments.frequency_hz);
    println!("\nModes cut off on the track (angles from the bed):");
    println!(" mode   range (m)   depth (m)   bed 1 in   transition (m)   beam (deg)      eps");
    for (mode, place, run) in &scene.modes {
        let gradient = place.slope_rad.tan();
        print!("{mode:5} {:11.1}", place.range_m);
        match run {
            Ok(run) => println!(
                " {:11.2} {:10.1} {:16.1} {:>12} {:8.4}",
                run.cutoff_depth_m(),
                1.0 / gradient,
                run.layer_range_m(),
                // Beyond 90 degrees there is no beam.
                run.take_off_angle_rad()
                    .map_or("none".into(), |angle| format!("{:.2}", angle.to_degrees())),
                run.eps()
            ),
            Err(error) => println!("   {error}"),
        }
    }
    match scene.trapped_at_end {
        0 => {}
        1 => println!("mode 1 is still trapped at the end of the track"),
        last => println!("modes 1 to {last} are still trapped at the end of the track"),
    }
}

fn print_followed(followed: &Followed) {
    let Followed { mode, place, run, beam_start_m, .. } = followed;
    println!("\nMode {mode} through its cut-off at {:.1} m", place.range_m);
    println!(
        "The bed falls 1 in {:.1} there on the smoothed track; the smoothing moves it by up to {:.3} of\n\
         the transition length.",
        1.0 / run.passage().slope(),
        run.passage().fit_departure()
    );
    println!("The beam's axis leaves the bed at {beam_start_m:.0} m.");
    match run.passage().beam() {
        Ok(beam) => println!(
            "Beam: axis {:.2} degrees from the surface, half its power between {:.2} and {:.2} degrees.",
            beam.axis_rad.to_degrees(),
            beam.half_power_rad[0].to_degrees(),
            beam.half_power_rad[1].to_degrees()
        ),
        Err(error) => println!("Beam: {error}"),
    }
    println!(
        "0 dB is the incoming mode's largest pressure in the water {:.0} m before cut-off.",
        BEFORE * run.layer_range_m()
    );
    println!(
        "Levels are those of the uniform field: an integral, evaluated by expansions at its saddles\n\
         and by the yardstick quadrature, each with its error figure. The whole figure, in the last column,\n\
         covers what the formula, an expansion in eps, and the smoothing of the track leave out."
    );
}

fn print_levels(arguments: &Arguments, followed: &Followed) {
    let Followed { mode, place, run, window_m: [from, to], beam_start_m, .. } = followed;
    println!(
        "\n                              at the saddles            yardstick\n\
         range (m)  depth (m)  where    level (dB)   figure  level (dB)   figure   apart (dB)    whole"
    );
    let mut refusals = Vec::new();
    let mut points = 0;
    let mut row = |range_m: f64, depth_m: f64| {
        let yardstick = followed.level(range_m, depth_m);
        let saddles = followed.level_at_saddles(range_m, depth_m);
        println!(
            "{range_m:9.1} {depth_m:10.2}  {:6} {} {} {:>12} {:>8}",
            if depth_m < run.depth_m(range_m) { "water" } else { "bottom" },
            columns(&saddles),
            columns(&yardstick),
            saddles.as_ref().map_or(NONE.into(), |u| format!("{:.0e}", u.apart_db)),
            followed
                .whole_figure_db(range_m, depth_m)
                .map_or(NONE.into(), |db| format!("{db:.2}dB"))
        );
        points += 1;
        refusals.extend(saddles.err());
        refusals.extend(yardstick.err());
    };
    // The fraction of the depth where the mode's first antinode lies at cut-off.
    let antinode = 1.0 / (2.0 * f64::from(*mode) - 1.0);
    let cut = place.range_m;
    // Before the fit there are no saddles to expand at.
    let from = from.max(run.passage().fitted_from());
    let before = (0..5).map(|j| from + (cut - from) * f64::from(j) / 5.0);
    for range_m in before.chain((0..=7).map(|j| cut + (to - cut) * f64::from(j) / 7.0)) {
        row(range_m, antinode * run.depth_m(range_m));
    }
    // Above the beam's axis, on it and below it.
    for j in 1..=3 {
        let range_m = beam_start_m + (to - beam_start_m) * f64::from(j) / 3.0;
        let height = followed.beam_depth_m(range_m) - run.depth_m(range_m);
        for share in [0.5, 1.0, 1.5] {
            // There is no beam yet where the track ends early.
            if height > 0.0 {
                row(range_m, run.depth_m(range_m) + share * height);
            }
        }
    }
    for &(range_m, depth_m) in &arguments.point {
        row(range_m, depth_m);
    }
    if let Some(error) = refusals.first() {
        println!("- at {} of {points} points: {error}", refusals.len());
    }
}

fn columns(level: &Result<Level, Error>) -> String {
    match level {
        Ok(u) => format!("{:>12.3} {:>8.0e}", u.db, u.figure_db),
        Err(_) => format!("{NONE:>12} {NONE:>8}"),
    }
}

/// The picture, and how many cells have no value.
fn picture(arguments: &Arguments, followed: &Followed) -> (Picture, usize) {
    let Followed { mode, place, run, window_m: [from, to], beam_start_m, .. } = followed;
    let bed = |s: f64| run.depth_m(s);
    let bottom = (1.4 * followed.beam_depth_m(*to)).max(2.0 * bed(*from));
    let ranges = centres(*from, *to, arguments.columns);
    let depths = centres(0.0, bottom, arguments.rows);
    let level_db = levels(&ranges, &depths, |range_m, depth_m| {
        level(run.passage(), range_m, depth_m, FLOOR_DB)
    });
    let refused = level_db.iter().filter(|level| level.is_nan()).count();
    let line = |first: f64, depth: &dyn Fn(f64) -> f64| -> Vec<(f64, f64)> {
        (0..=100)
            .map(|j| first + (to - first) * f64::from(j) / 100.0)
            .map(|s| (s, depth(s)))
            .collect()
    };
    let picture = Picture {
        title: format!(
            "Mode {mode} at {} Hz through its cut-off: trapped in the water, then a beam in the bottom",
            arguments.frequency_hz
        ),
        subtitle: format!(
            "Level re the incoming mode's largest pressure; water {} m/s over a bottom of {} m/s, \
             {} dB per wavelength; bed 1 in {:.0}",
            arguments.water_speed,
            arguments.bottom_speed,
            arguments.attenuation,
            1.0 / place.slope_rad.tan()
        ),
        axes: ["range along the track (m)", "depth below the surface (m)"],
        bed: line(*from, &bed),
        bed_name: "sea bed",
        model_bed: run.passage().fitted_profile(),
        beam: line(*beam_start_m, &|s| followed.beam_depth_m(s)),
        cutoff: (place.range_m, run.cutoff_depth_m()),
        cutoff_name: format!("cut-off, {:.0} m", place.range_m),
        downwards: true,
        range: ranges,
        across: depths,
        level_db,
        floor_db: FLOOR_DB,
    };
    (picture, refused)
}

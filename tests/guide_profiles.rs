//! Curved profiles, even modes and losses against a solution of the guide's equation; energy.

#[path = "support/compare.rs"]
mod compare;
#[path = "support/tapered.rs"]
mod tapered;

use compare::{error, pairs, turn};
use merging_saddles::Complex64 as C;
use merging_saddles::guide::{Order, Profile, QuantumWell, SlopingGuide};
use std::f64::consts::PI;
use std::rc::Rc;
use tapered::Taper;

/// Times of the layer at which the fields are compared; the phase is taken at the second.
const TIMES: [f64; 4] = [-1.0, 0.0, 1.0, 2.0];

/// Relative L2 errors `[inside, outside]` at each time, with one phase taken out. `field` takes range,
/// width, position and whether that lies inside.
fn errors(t: &Taper, field: impl Fn(f64, f64, f64, bool) -> C) -> Vec<[f64; 2]> {
    let (eps, m) = (t.eps.norm(), t.m);
    let ranges = TIMES.map(|time| time * (m * m * eps).cbrt());
    let length = (m / eps).cbrt();
    let shots = t.run(&ranges, 25.0 * length, 1.0);
    let sides: Vec<_> = shots
        .iter()
        .map(|s| pairs(s, 10.0 * length, |h, x, within| field(s.r, h, x, within)))
        .collect();
    let phase = turn(&sides[1]);
    sides.iter().map(|side| [error(&side[0], phase), error(&side[1], phase)]).collect()
}

#[test]
fn curved_profiles() {
    // A well whose half width is h_c - r + c r^2 at the time r/eps.
    let (eps, cut) = (0.01, 0.5 * PI);
    for (c, from) in [(0.25, -1.4), (-0.2, -1.6)] {
        let profile = move |r: f64| (cut - r + c * r * r, 2.0 * c * r - 1.0);
        let t = Taper {
            mode: 1,
            even: false,
            m: 1.0,
            eps: C::from(eps),
            well: C::from(1.0),
            from,
            profile: Rc::new(profile),
        };
        let width = Profile::from_fn(from / eps, 1.0 / eps, move |time| {
            let (h, slope) = profile(eps * time);
            (h, slope * eps)
        });
        let passage = QuantumWell.along(1, width.unwrap(), from / eps).unwrap();
        let antinode = t.antinode();
        println!(
            "fit departs {:.1e} from {}",
            passage.fit_departure(),
            passage.fitted_from() * eps
        );
        let [leading, next] = [Order::Leading, Order::Next].map(|order| {
            let passage = passage.clone().order(order);
            errors(&t, |r, h, x, within| {
                // A hair to the right side of the wall.
                let x = if within { x.min(h * (1.0 - 1e-12)) } else { x.max(h * (1.0 + 1e-12)) };
                passage.field(r / eps, x).unwrap().value * antinode
            })
        });
        println!("c {c} leading {leading:.5?}\n next {next:.5?}");
    }
}

#[test]
fn even_modes() {
    // A slow start: an abrupt one leaves some 0.5 % of the lower mode.
    for (mode, even) in [(2, true), (2, false)] {
        for m in [1.0, 0.55] {
            let eps = 0.01;
            let cut = (f64::from(mode) - if even { 1.0 } else { 0.5 }) * PI;
            let t = Taper {
                mode,
                even,
                m,
                eps: C::from(eps),
                well: C::from(1.0),
                from: -3.0,
                profile: Rc::new(move |r| slow_start(cut, r)),
            };
            let guide = SlopingGuide::new(mode, m, eps).unwrap();
            let guide = if even { guide.even().unwrap() } else { guide };
            let [leading, next] = [Order::Leading, Order::Next].map(|order| {
                let guide = guide.clone().order(order);
                errors(&t, |_, h, x, within| {
                    let field = if within {
                        guide.inside(h, x)
                    } else {
                        guide.outside(h, (x - h).max(0.0))
                    };
                    field.unwrap().quadrature(1e-8).unwrap().value
                })
            });
            println!("even {even} m {m} leading {leading:.5?}\n next {next:.5?}");
        }
    }
}

/// Unit slope from `r = -1` on, flat before `r = -3`.
fn slow_start(cut: f64, r: f64) -> (f64, f64) {
    if r >= -1.0 {
        return (cut - r, -1.0);
    }
    // The slope goes as sin^2 over a length of 2.
    let u = (r + 3.0).max(0.0);
    let (angle, rate) = (0.5 * PI * u / 2.0, 0.25 * PI);
    let lost = 0.5 * u - (2.0 * angle).sin() / (4.0 * rate);
    (cut + 1.0 + 1.0 - lost, -angle.sin().powi(2))
}

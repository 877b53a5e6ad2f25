//! Random integrals with two random derivatives each, against the yardstick: coverage and sharpness of the
//! error figures of gradients.
//!
//! The integrals are those of `random_integrals`; the phase's derivatives are polynomials and sinh, half of
//! the amplitudes vary too, with simple and double poles where the amplitude has some.

#[path = "support/mixing.rs"]
mod mixing;
#[path = "support/random.rs"]
#[allow(dead_code)]
mod random;

mod coverage;

use coverage::Tally;
use merging_saddles::{Complex64 as C, Error, Estimate, FieldGradient};
use random::{Family, Random};

/// A closure of its own for each derivative.
type Slopes = Box<dyn Fn(C) -> [C; 2]>;

/// Random derivatives of the phase, and of the amplitude with simple and double poles where it has some.
fn slopes(random: &mut Random, poles: &[C]) -> (Slopes, Slopes) {
    let (a, b, d) = (random.disc(1.0), random.disc(1.0), random.disc(1.0));
    let power = 1 + random.below(4) as i32;
    let phase: Slopes = if random.chance(0.3) {
        Box::new(move |z: C| [a + b * z, (z * 0.5).sinh() * d])
    } else {
        Box::new(move |z: C| [z, a + b * z + d * z.powi(power)])
    };
    let list: Vec<(C, C, C)> =
        poles.iter().map(|&p| (p, random.disc(1.0), random.disc(1.0))).collect();
    let (p, q) = (random.disc(1.0), random.disc(1.0));
    let amplitude: Slopes = Box::new(move |z: C| {
        let principal: C = list
            .iter()
            .map(|&(pole, simple, double)| {
                let inverse = (z - pole).inv();
                (double * inverse + simple) * inverse
            })
            .sum();
        [p * z + principal, q]
    });
    (phase, amplitude)
}

fn run(family: &Family, seeds: std::ops::Range<u64>, tally: &mut Tally) {
    for seed in seeds {
        let case = family.case(seed);
        let mut random = Random::new(seed ^ 0x5eed);
        let (phase, amplitude) = slopes(&mut random, case.integral.poles());
        let both = random.chance(0.5);
        let (got, exact) = if both {
            let gradient = case.integral.gradient(phase).amplitude(amplitude);
            (gradient.plan().and_then(|p| p.at(case.k)), gradient.quadrature(case.k, 1e-13))
        } else {
            let gradient = case.integral.gradient(phase);
            (gradient.plan().and_then(|p| p.at(case.k)), gradient.quadrature(case.k, 1e-13))
        };
        for j in 0..2 {
            let of = |all: &Result<FieldGradient<2>, Error>| -> Result<Estimate, Error> {
                all.clone().map(|u| u.gradient[j])
            };
            tally.enter(&format!("{} [{j}] both {both}", case.label), of(&got), of(&exact));
        }
    }
}

const FAMILIES: [(&Family, u64, f64); 9] = [
    (&random::FEW_SADDLES, 100, 0.97),
    (&random::MORE_SADDLES, 100, 0.93),
    (&random::CLUSTERS, 100, 0.93),
    (&random::ENTIRE, 50, 0.9),
    (&random::ENDS, 60, 0.93),
    (&random::ENDS_NEAR, 60, 0.93),
    (&random::POLES, 60, 0.9),
    (&random::UNNAMED, 30, 0.9),
    (&random::MIXED, 30, 0.85),
];

#[test]
fn random_gradients() {
    over(0, 1);
}

/// The first integrals of every family from a seed on: enough are answered of each, 99.9 % of all answers
/// are covered, none is wrong without warning.
fn over(first: u64, times: u64) {
    let mut all = Tally::default();
    for (family, count, answered) in FAMILIES {
        let mut tally = Tally::default();
        run(family, first..first + times * count, &mut tally);
        tally.report(family.name);
        assert!(tally.answered() >= answered, "{}", family.name);
        all.absorb(tally);
    }
    all.check("all gradients", 0.95);
}

/// Some five thousand integrals of the long run of `random_integrals`, with two derivatives each.
#[test]
#[ignore = "minutes; run in release"]
fn thousands_of_gradients() {
    over(10_000, 9);
}

//! Random integrals, one from each seed: the same on every machine.

pub use super::mixing::Random;
use merging_saddles::integral::{Phase, Polynomial, Termination};
use merging_saddles::{Complex64, Contour, Integral};
use std::f64::consts::{PI, TAU};

type C = Complex64;

fn c(re: f64, im: f64) -> C {
    C::new(re, im)
}

/// A phase of any kind.
pub enum AnyPhase {
    Polynomial(Polynomial),
    Closure(Box<dyn Fn(C) -> (C, C)>),
}

impl Phase for AnyPhase {
    fn value_and_derivative(&self, z: C) -> (C, C) {
        match self {
            AnyPhase::Polynomial(p) => p.value_and_derivative(z),
            AnyPhase::Closure(f) => f(z),
        }
    }

    fn jet(&self, z: C) -> [C; 3] {
        match self {
            AnyPhase::Polynomial(p) => p.jet(z),
            AnyPhase::Closure(f) => f.jet(z),
        }
    }

    fn noise_scale(&self, z: C) -> f64 {
        match self {
            AnyPhase::Polynomial(p) => p.noise_scale(z),
            AnyPhase::Closure(f) => f.noise_scale(z),
        }
    }
}

/// What a phase is made of.
pub enum Law {
    Polynomial(Vec<C>),
    Entire { kind: usize, a: C, b: f64 },
}

/// An entire amplitude: 1, a quadratic or an exponential.
#[derive(Clone, Copy)]
pub struct Smooth {
    pub kind: usize,
    pub a: C,
    pub b: C,
}

impl Smooth {
    fn random(random: &mut Random) -> Smooth {
        let (a, b) = (random.disc(1.0), random.disc(1.0));
        Smooth { kind: random.below(3), a, b }
    }

    fn value(&self, z: C) -> C {
        match self.kind {
            0 => c(1.0, 0.0),
            1 => 1.0 + self.a * z + self.b * z * z,
            _ => (self.a * z * 0.5).exp(),
        }
    }
}

/// The principal part at a pole.
#[derive(Clone, Copy)]
pub struct Part {
    pub pole: C,
    pub simple: C,
    pub double: C,
}

impl Part {
    /// Simple, double or both.
    fn random(random: &mut Random, pole: C) -> Part {
        let (simple, mut double) = (random.disc(1.0), random.disc(1.0));
        if random.chance(0.5) {
            double = c(0.0, 0.0);
        }
        Part { pole, simple, double }
    }

    fn value(&self, z: C) -> C {
        let inverse = (z - self.pole).inv();
        (self.double * inverse + self.simple) * inverse
    }
}

/// What an integral is made of.
pub struct Recipe {
    pub law: Law,
    pub smooth: Smooth,
    pub parts: Vec<Part>,
    pub contour: Contour,
}

/// An integral and a wavenumber.
pub struct Case {
    pub integral: Integral<AnyPhase, Box<dyn Fn(C) -> C>>,
    pub recipe: Recipe,
    pub k: f64,
    pub label: String,
}

impl Case {
    /// Of a phase and what its amplitude is made of.
    fn new(
        law: Law,
        contour: Contour,
        smooth: Smooth,
        parts: Vec<Part>,
        k: f64,
        label: String,
    ) -> Case {
        let phase = match &law {
            Law::Polynomial(c) => AnyPhase::Polynomial(Polynomial(c.clone())),
            &Law::Entire { kind, a, b } => AnyPhase::Closure(Box::new(move |z: C| {
                let (h, d) = match kind {
                    0 => (z.sinh() - a * z, z.cosh() - a),
                    1 => (z.exp() - a * z - z * z * 0.5, z.exp() - a - z),
                    2 => (z.cosh() * -1.0 + a * z, z.sinh() * -1.0 + a),
                    _ => (z.exp() * b - a * z, z.exp() * b - a),
                };
                (c(0.0, -1.0) * h, c(0.0, -1.0) * d)
            })),
        };
        let singular = parts.clone();
        let g: Box<dyn Fn(C) -> C> = if parts.is_empty() {
            Box::new(move |z| smooth.value(z))
        } else {
            Box::new(move |z| smooth.value(z) + singular.iter().map(|p| p.value(z)).sum::<C>())
        };
        let integral = Integral::new(phase, contour.clone()).amplitude(g);
        Case { integral, recipe: Recipe { law, smooth, parts, contour }, k, label }
    }

    /// With all poles named.
    fn named(mut self) -> Case {
        for part in &self.recipe.parts {
            self.integral = self.integral.pole(part.pole);
        }
        self
    }
}

/// The kinds of integrals, each with the lengths of its runs: plain and long.
pub struct Family {
    pub name: &'static str,
    pub make: fn(&mut Random) -> Case,
}

impl Family {
    pub fn case(&self, seed: u64) -> Case {
        let case = (self.make)(&mut Random::new(seed));
        Case { label: format!("{} seed {seed} {} k {:.1}", self.name, case.label, case.k), ..case }
    }
}

pub const FEW_SADDLES: Family =
    Family { name: "degree 2 and 3", make: |random| polynomials(random, 2, 3) };
pub const MORE_SADDLES: Family =
    Family { name: "degree 4 to 6", make: |random| polynomials(random, 4, 6) };
pub const CLUSTERS: Family = Family { name: "clusters", make: clusters };
pub const ENDS: Family = Family { name: "finite ends", make: ends };
pub const ENDS_NEAR: Family = Family { name: "ends near saddles", make: ends_near_saddles };
pub const POLES: Family = Family { name: "poles", make: poles };
pub const UNNAMED: Family = Family { name: "unnamed poles", make: unnamed_poles };
pub const ENTIRE: Family = Family { name: "entire phases", make: entire };
pub const MIXED: Family = Family { name: "ends and poles", make: ends_and_poles };

fn wavenumber(random: &mut Random) -> f64 {
    random.power(3f64.log10(), 4.0)
}

/// A point far out in valley `v` of `lead z^degree`, where `i lead z^degree` is negative.
fn valley(lead: C, degree: usize, v: usize, radius: f64) -> C {
    let angle = (0.5 * PI - lead.arg() + TAU * v as f64) / degree as f64;
    C::from_polar(radius, angle)
}

/// A polynomial with its degree and a radius beyond which the leading term rules.
struct Poly {
    c: Vec<C>,
    degree: usize,
    radius: f64,
}

impl Poly {
    fn new(c: Vec<C>) -> Poly {
        let degree = c.len() - 1;
        // Cauchy's bound; the constant does not matter.
        let lead = c[degree].norm();
        let radius = 1.0 + c[1..degree].iter().map(|c| c.norm() / lead).fold(0.0, f64::max);
        Poly { c, degree, radius: 1.5 * radius }
    }

    fn random(random: &mut Random, degree: usize) -> Poly {
        let mut c: Vec<C> = (0..=degree).map(|_| random.disc(1.0)).collect();
        c[degree] = random.within(0.3, 1.0) * random.turn();
        // Half of the cases nearly degenerate: a small unfolding of the leading power.
        if random.chance(0.5) {
            let small = random.power(-6.0, 0.0);
            for (j, c) in c.iter_mut().enumerate().take(degree) {
                *c *= small.powf((degree - j) as f64 / degree as f64);
            }
        }
        Poly::new(c)
    }

    /// From the zeros of the derivative.
    fn with_saddles(lead: C, saddles: &[C], constant: C) -> Poly {
        let mut d = vec![lead];
        for s in saddles {
            let mut next = vec![c(0.0, 0.0); d.len() + 1];
            for (j, a) in d.iter().enumerate() {
                next[j + 1] += a;
                next[j] -= a * s;
            }
            d = next;
        }
        let terms = d.iter().enumerate().map(|(j, a)| a / (j + 1) as f64);
        Poly::new(std::iter::once(constant).chain(terms).collect())
    }

    fn valley(&self, v: usize) -> C {
        valley(self.c[self.degree], self.degree, v, self.radius)
    }

    /// From one valley to another, through a point.
    fn contour(&self, random: &mut Random, middle: C) -> Contour {
        let from = random.below(self.degree);
        let to = (from + 1 + random.below(self.degree - 1)) % self.degree;
        Contour::through([self.valley(from), middle, self.valley(to)])
    }

    fn law(&self) -> Law {
        Law::Polynomial(self.c.clone())
    }

    /// A zero of the derivative.
    fn saddle(&self, random: &mut Random) -> C {
        let phase = Polynomial(self.c.clone());
        let mut z = random.disc(1.0);
        for _ in 0..50 {
            let [_, d, dd] = phase.jet(z);
            if dd.norm() > 0.0 {
                z -= d / dd;
            }
        }
        z
    }
}

fn polynomials(random: &mut Random, low: usize, high: usize) -> Case {
    let degree = low + random.below(high - low + 1);
    let p = Poly::random(random, degree);
    let contour = p.contour(random, c(0.0, 0.0));
    let k = wavenumber(random);
    Case::new(p.law(), contour, Smooth::random(random), Vec::new(), k, format!("degree {degree}"))
}

/// Two to four saddles that merge, one or two others farther off; offsets of the phase up to 30.
fn clusters(random: &mut Random) -> Case {
    let merging = 2 + random.below(3);
    let others = random.below(3);
    let size = random.power(-6.0, 0.0);
    let centre = random.disc(1.0);
    let mut saddles: Vec<C> = (0..merging).map(|_| centre + random.disc(size)).collect();
    saddles.extend((0..others).map(|_| centre + random.within(1.0, 2.0) * random.turn()));
    let lead = random.within(0.3, 2.0) * random.turn();
    let p = Poly::with_saddles(lead, &saddles, random.disc(30.0));
    let contour = p.contour(random, centre);
    let k = wavenumber(random);
    Case::new(
        p.law(),
        contour,
        Smooth::random(random),
        Vec::new(),
        k,
        format!("{merging} of {} merging within {size:.1e}", p.degree - 1),
    )
}

fn ends(random: &mut Random) -> Case {
    let degree = 2 + random.below(4);
    let p = Poly::random(random, degree);
    let start = random.disc(2.0);
    let points = [start, p.valley(random.below(degree))];
    let contour = match random.below(3) {
        0 => Contour::starting_at(points),
        1 => Contour::ending_at([points[1], points[0]]),
        _ => Contour::between([start, start + random.disc(2.0)]),
    };
    let k = wavenumber(random);
    Case::new(p.law(), contour, Smooth::random(random), Vec::new(), k, format!("degree {degree}"))
}

fn ends_near_saddles(random: &mut Random) -> Case {
    let count = 1 + random.below(3);
    let near = random.power(-4.0, 0.3);
    let first = random.disc(1.0);
    let mut saddles = vec![first];
    saddles.extend((1..count).map(|_| first + near * random.turn()));
    let p = Poly::with_saddles(random.turn(), &saddles, c(0.0, 0.0));
    let offset = if random.chance(0.2) { 0.0 } else { random.power(-6.0, 0.0) };
    let start = first + offset * random.turn();
    let far = p.valley(random.below(p.degree));
    let contour = if random.chance(0.5) {
        Contour::starting_at([start, far])
    } else {
        Contour::ending_at([far, start])
    };
    let k = wavenumber(random);
    let label = format!("{count} saddles within {near:.1e}, end {offset:.1e} off");
    Case::new(p.law(), contour, Smooth::random(random), Vec::new(), k, label)
}

/// Anywhere, or near a saddle.
fn place(random: &mut Random, p: &Poly) -> C {
    if random.chance(0.5) {
        random.disc(2.0)
    } else {
        p.saddle(random) + random.power(-4.0, 0.0) * random.turn()
    }
}

fn poles(random: &mut Random) -> Case {
    let degree = 2 + random.below(3);
    let p = Poly::random(random, degree);
    let middle = random.disc(0.5);
    let contour = p.contour(random, middle);
    let smooth = Smooth::random(random);
    let mut poles = vec![place(random, &p)];
    if random.chance(0.3) {
        poles.push(place(random, &p));
    }
    let parts = poles.iter().map(|&pole| Part::random(random, pole)).collect();
    let k = wavenumber(random);
    let label = format!("degree {degree} poles {poles:.3?}");
    Case::new(p.law(), contour, smooth, parts, k, label).named()
}

/// Poles that nobody names, beyond the contour's descent (those across it must be named).
fn unnamed_poles(random: &mut Random) -> Case {
    // A saddle or two near the origin of a real phase, the contour near the real line, the poles
    // on the far side of both valleys' ridge lines.
    let distance = random.within(0.7, 4.0);
    let (a, b) = (random.within(-0.3, 0.3), random.within(0.2, 1.0));
    let p =
        Poly::new(vec![c(0.0, 0.0), c(0.0, 0.0), c(0.5, 0.0), c(a, 0.0) * 0.2, c(b, 0.0) * 0.25]);
    let contour = Contour::through([p.valley(2), c(0.0, 0.0), p.valley(0)]);
    let weight = random.disc(1.0);
    let smooth = Smooth::random(random);
    // exp(i k f) has its ridges along -45 and 135 degrees at the saddle: a pole near there is never crossed.
    let pole = C::from_polar(distance, if random.chance(0.5) { -0.25 * PI } else { 0.75 * PI });
    let parts = vec![Part { pole, simple: weight, double: c(0.0, 0.0) }];
    let k = wavenumber(random);
    Case::new(p.law(), contour, smooth, parts, k, format!("pole {distance:.2} off"))
}

fn entire(random: &mut Random) -> Case {
    let a = random.disc(1.5);
    let b = random.within(0.3, 1.5);
    let kind = random.below(4);
    // sinh and exp have valleys at +infinity +- i pi, cosh (with a minus) at +-infinity.
    let contour = match kind {
        2 => Contour::through([c(-5.0, 0.0), c(5.0, 0.0)]),
        _ => {
            let periods = TAU * random.below(3) as f64;
            Contour::through([c(5.0, -PI), c(0.0, 0.0), c(5.0, PI + periods)])
        }
    };
    let k = wavenumber(random);
    let label = format!("kind {kind} a {a:.3}");
    Case::new(Law::Entire { kind, a, b }, contour, Smooth::random(random), Vec::new(), k, label)
}

fn ends_and_poles(random: &mut Random) -> Case {
    let degree = 2 + random.below(3);
    let p = Poly::random(random, degree);
    let start = if random.chance(0.5) {
        p.saddle(random) + random.power(-4.0, 0.0) * random.turn()
    } else {
        random.disc(2.0)
    };
    let far = p.valley(random.below(degree));
    let contour = match random.below(2) {
        0 => Contour::starting_at([start, far]),
        _ => Contour::ending_at([far, start]),
    };
    let pole = place(random, &p);
    let smooth = Smooth::random(random);
    let part = Part::random(random, pole);
    let k = wavenumber(random);
    let label = format!("degree {degree} end {start:.3} pole {pole:.3}");
    Case::new(p.law(), contour, smooth, vec![part], k, label).named()
}

/// Whether a contour has a finite end.
pub fn has_finite_end(contour: &Contour) -> bool {
    contour.start() == Termination::Finite || contour.end() == Termination::Finite
}

//! A reference for the tapered guide: Crank-Nicolson in range, linear elements across, on a mesh
//! that moves with the boundary.
//!
//! `i eps psi_r = -psi_xx - v psi` inside `0 < x < h(r)`, `i eps psi_r = -psi_xx` outside, weight 1
//! inside and `m` outside, `psi = 0` or `psi_x = 0` at `x = 0`; `eps` and `v` (1 without) are complex
//! with losses. On a mesh with velocity `v` the weak form is
//! `i eps [M u_r + (1/2) M_r u - C u] = (K + V) u` with `C_ij = (1/2) int w v (N_j' N_i - N_j N_i')`: the
//! condition at the sloping boundary that keeps the energy is built in. The midpoint rule keeps
//! the norm. The phase of the bound mode, `gamma^2/eps` per unit of range, is taken out of the equation and put
//! back, so the step need only be small beside the layer's length in range, `(m^2 eps)^(1/3)`, at any `eps`.
//! Errors are of second order in step and mesh together, so two runs at half of both are extrapolated
//! to fourth order.

use merging_saddles::Complex64 as C;
use std::f64::consts::PI;
use std::rc::Rc;

const I: C = C::new(0.0, 1.0);

/// Range step over `(m^2 eps)^(1/3)` at fineness 1.
const STEP: f64 = 0.02;
/// Strongest absorption over the energy `(eps/m)^(2/3)` of the layer.
const ABSORBER: f64 = 5.0;

#[derive(Clone)]
pub struct Taper {
    pub mode: u32,
    /// Whether the mode is even in `x`.
    pub even: bool,
    pub m: f64,
    pub eps: C,
    /// Depth of the well inside.
    pub well: C,
    /// Range at the start, where the guide is wider than at cut-off.
    pub from: f64,
    /// Width and its derivative against range.
    pub profile: Rc<dyn Fn(f64) -> (f64, f64)>,
}

/// A profile (width, slope) that is flat before `r = -knee - length` and the given one from `-knee` on, all as smooth
/// as the profile itself: an abrupt start leaves some 0.5 % of the other modes and light outside.
pub fn flat_before(
    profile: impl Fn(f64) -> (f64, f64) + 'static,
    knee: f64,
    length: f64,
) -> Rc<dyn Fn(f64) -> (f64, f64)> {
    Rc::new(move |r| {
        if r >= -knee {
            return profile(r);
        }
        // The profile at a range that rises slowly from rest: four derivatives are continuous.
        let s = ((r + knee) / length + 1.0).max(0.0);
        let speed = s.powi(4) * (35.0 - s * (84.0 - s * (70.0 - 20.0 * s)));
        let gone = s.powi(5) * (7.0 - s * (14.0 - s * (10.0 - 2.5 * s)));
        let (width, slope) = profile(-knee + length * (gone - 0.5));
        (width, slope * speed)
    })
}

/// What one step sees: width, slope, the energy taken out, and the step.
#[derive(Clone, Copy)]
struct Local {
    h: f64,
    slope: f64,
    shift: f64,
    dr: f64,
}

/// Resolution of one run.
#[derive(Clone, Copy)]
struct Mesh {
    inside: usize,
    spacing: f64,
    outside: usize,
    /// Range step over `(m^2 eps)^(1/3)`.
    step: f64,
    /// Outside distance at which absorption begins.
    absorb: f64,
}

impl Mesh {
    fn refined(self) -> Mesh {
        Mesh {
            inside: 2 * self.inside,
            spacing: 0.5 * self.spacing,
            outside: 2 * self.outside,
            step: 0.5 * self.step,
            absorb: self.absorb,
        }
    }
}

/// The field at one of the ranges asked for.
pub struct Snapshot {
    pub r: f64,
    pub h: f64,
    /// Nodes `x` from 0 over `h` outwards, with the values; `inside` is the index of the boundary.
    pub x: Vec<f64>,
    pub psi: Vec<C>,
    pub inside: usize,
    /// Node beyond which the field is absorbed.
    pub end: usize,
}

impl Taper {
    /// A mode of a guide without losses that starts on a flat, `length` before unit slope from `r = -1` on; cut off
    /// at `r = 0`.
    pub fn slow(mode: u32, even: bool, m: f64, eps: f64, length: f64) -> Taper {
        let cut = (f64::from(mode) - if even { 1.0 } else { 0.5 }) * PI;
        Taper {
            mode,
            even,
            m,
            eps: C::from(eps),
            well: C::from(1.0),
            from: -1.0 - length,
            profile: flat_before(move |r| (cut - r, -1.0), 1.0, length),
        }
    }

    /// The same with the flat as near to cut-off as the layer allows: unit slope from `t = -knee` on, with
    /// `t = r/(m^2 eps)^(1/3)`, and flat `length` earlier.
    pub fn near(mode: u32, m: f64, eps: f64, knee: f64, length: f64) -> Taper {
        let scale = (m * m * eps).cbrt();
        let cut = (f64::from(mode) - 0.5) * PI;
        let (knee, length) = (knee * scale, length * scale);
        Taper {
            from: -knee - length,
            profile: flat_before(move |r| (cut - r, -1.0), knee, length),
            ..Taper::straight(mode, m, eps, cut)
        }
    }

    /// Mode `n` (zero at `x = 0`) of a guide without losses that falls with unit slope from the width
    /// `start`; its ranges are minus the widths.
    pub fn straight(mode: u32, m: f64, eps: f64, start: f64) -> Taper {
        Taper {
            mode,
            even: false,
            m,
            eps: C::from(eps),
            well: C::from(1.0),
            from: -start,
            profile: Rc::new(|r| (-r, -1.0)),
        }
    }

    /// The fields at the given ranges, in rising order. `fineness` divides step and mesh; `reach` is
    /// how far out the field is kept.
    pub fn run(&self, ranges: &[f64], reach: f64, fineness: f64) -> Vec<Snapshot> {
        // Small beside the tail of the mode at the start and beside the layer.
        let tail = self.shift((self.profile)(self.from).0).sqrt();
        let length = (self.m / self.eps.norm()).cbrt();
        let spacing = f64::max(0.08, (0.07 / tail).min(0.02 * length)) / fineness;
        let mesh = Mesh {
            inside: (90.0 * fineness * f64::from(self.mode)) as usize,
            spacing,
            outside: (1.8 * reach / spacing) as usize,
            step: STEP / fineness,
            absorb: reach,
        };
        let coarse = self.single(ranges, mesh);
        let fine = self.single(ranges, mesh.refined());
        coarse
            .into_iter()
            .zip(fine)
            .map(|(mut c, f)| {
                // The phase of the whole, where most of the error is, apart from the rest.
                let overlap: C =
                    c.psi.iter().zip(f.psi.iter().step_by(2)).map(|(c, f)| c.conj() * f).sum();
                let turn = overlap / overlap.norm();
                for (i, value) in c.psi.iter_mut().enumerate() {
                    *value = (f.psi[2 * i] * 4.0 - *value * turn) / 3.0 * turn.cbrt();
                }
                c
            })
            .collect()
    }

    /// `kappa` of the bound mode without losses where the guide has the width `h`: `kappa h` lies between its value
    /// at cut-off and the next multiple of `pi/2`.
    fn bound(&self, h: f64) -> f64 {
        let n = f64::from(self.mode) - if self.even { 0.5 } else { 0.0 };
        let (mut low, mut high) = ((n - 0.5) * PI / h, (n * PI / h).min(1.0));
        let below = self.condition(C::from(low), C::from(1.0), h).re;
        for _ in 0..60 {
            let k = 0.5 * (low + high);
            let same = self.condition(C::from(k), C::from(1.0), h).re * below > 0.0;
            if same { low = k } else { high = k }
        }
        0.5 * (low + high)
    }

    /// Zero for a mode, with `kappa^2 + gamma^2 = v`.
    fn condition(&self, k: C, well: C, h: f64) -> C {
        let g = (well - k * k).sqrt();
        let (sin, cos) = ((k * h).sin(), (k * h).cos());
        if self.even { k * sin - g * cos * self.m } else { k * cos + g * sin * self.m }
    }

    /// `gamma^2` of the bound mode without losses, 0 where it is cut off.
    fn shift(&self, h: f64) -> f64 {
        let cut = (f64::from(self.mode) - if self.even { 1.0 } else { 0.5 }) * PI;
        if h > cut { (1.0 - self.bound(h).powi(2)).max(0.0) } else { 0.0 }
    }

    /// The adiabatic mode of unit energy at the start: kappa, gamma and the amplitude of its sine or cosine.
    fn adiabatic(&self) -> [C; 3] {
        let (m, h) = (self.m, (self.profile)(self.from).0);
        // Newton from the mode without losses.
        let condition = |k: C| self.condition(k, self.well, h);
        let mut k = C::from(self.bound(h));
        for _ in 0..20 {
            let slope = (condition(k + 1e-6) - condition(k - 1e-6)) / 2e-6;
            k -= condition(k) / slope;
        }
        let g = (self.well - k * k).sqrt();
        let edge = if self.even { (k * h).cos() } else { (k * h).sin() };
        let bend = (k * h * 2.0).sin() / (k * 4.0);
        let inside = if self.even { bend + 0.5 * h } else { -bend + 0.5 * h };
        [k, g, (inside + edge * edge * m / (g * 2.0)).sqrt().inv()]
    }

    /// The largest value of the mode inside at the start.
    pub fn antinode(&self) -> f64 {
        self.adiabatic()[2].re
    }

    fn at_start(&self, [k, g, size]: [C; 3], x: f64) -> C {
        let h = (self.profile)(self.from).0;
        let wave = |x: f64| if self.even { (k * x).cos() } else { (k * x).sin() };
        size * if x < h { wave(x) } else { wave(h) * (-g * (x - h)).exp() }
    }

    fn single(&self, ranges: &[f64], mesh: Mesh) -> Vec<Snapshot> {
        let nodes = mesh.inside + mesh.outside;
        let place = |h: f64, i: usize| {
            if i <= mesh.inside {
                h * i as f64 / mesh.inside as f64
            } else {
                h + (i - mesh.inside) as f64 * mesh.spacing
            }
        };
        // The first row that is solved for.
        let first = usize::from(!self.even);
        let (mode, start) = (self.adiabatic(), (self.profile)(self.from).0);
        let mut u: Vec<C> = (0..=nodes).map(|i| self.at_start(mode, place(start, i))).collect();
        if !self.even {
            u[0] = C::from(0.0);
        }
        u[nodes] = C::from(0.0);
        let mut out = Vec::new();
        let mut system = System::new(nodes);
        let mut r = self.from;
        let layer = (self.m * self.m * self.eps.norm()).cbrt();
        // The phase taken out.
        let mut turned = C::from(0.0);
        for &target in ranges {
            let steps = ((target - r) / (mesh.step * layer)).ceil().max(1.0);
            let dr = (target - r) / steps;
            let mut before = [f64::NAN; 2];
            let mut boundary = system.rows[mesh.inside];
            for s in 0..steps as usize {
                let (h, slope) = (self.profile)(r + dr * (s as f64 + 0.5));
                let shift = self.shift(h);
                turned += I * shift * dr / self.eps;
                let at = Local { h, slope, shift, dr };
                // The outside is the same as long as the slope is and nothing is taken out.
                if [slope, shift] != before {
                    before = [slope, shift];
                    system.clear(mesh.inside, nodes);
                    for e in mesh.inside..nodes {
                        self.element(mesh, e, at, &mut system);
                    }
                    system.eliminate(mesh.inside + 1, nodes);
                    boundary = system.rows[mesh.inside];
                }
                system.clear(0, mesh.inside);
                system.rows[mesh.inside] = boundary;
                for e in 0..mesh.inside {
                    self.element(mesh, e, at, &mut system);
                }
                system.eliminate(first, mesh.inside + 1);
                system.step(&mut u, first);
            }
            r = target;
            let h = (self.profile)(r).0;
            out.push(Snapshot {
                r,
                h,
                x: (0..=nodes).map(|i| place(h, i)).collect(),
                psi: u.iter().map(|u| u * turned.exp()).collect(),
                inside: mesh.inside,
                end: mesh.inside + (mesh.absorb / mesh.spacing) as usize,
            });
        }
        out
    }

    /// Adds one element to the two sides of a step, `i eps M/dr +- (1/2) [i eps (M_r/2 - C) - (K + V)]`.
    fn element(&self, mesh: Mesh, e: usize, at: Local, system: &mut System) {
        let (Local { h, slope, shift, dr }, ie) = (at, I * self.eps);
        let within = e < mesh.inside;
        let (j, w) = if within { (h / mesh.inside as f64, 1.0) } else { (mesh.spacing, self.m) };
        // Mesh velocity at the ends of the element, and the rate of its length.
        let speed = |i: usize| slope * i.min(mesh.inside) as f64 / mesh.inside as f64;
        let (v0, v1) = (speed(e), speed(e + 1));
        // Potential: the well inside, absorption far out in measures of the layer, less the mode's energy.
        let potential = if within {
            -self.well + shift
        } else {
            let far = (e - mesh.inside) as f64 * mesh.spacing - mesh.absorb;
            let depth = (far / (0.8 * mesh.absorb)).max(0.0);
            let strength = ABSORBER * (self.eps.norm() / self.m).powf(2.0 / 3.0);
            -I * (strength * depth.powi(3)) + shift
        };
        for (r, c) in [(0, 0), (0, 1), (1, 0), (1, 1)] {
            let (share, sign) = if r == c { (1.0 / 3.0, 1.0) } else { (1.0 / 6.0, -1.0) };
            let mass = w * j * share;
            // (1/2) w int v (N_c' N_r - N_c N_r') with v linear.
            let drift = 0.25 * w * (v0 + v1) * (c as f64 - r as f64);
            let g = ie * (0.5 * w * (v1 - v0) * share - drift) - w * sign / j - potential * mass;
            let slot = if r == c { 0 } else { 2 - c };
            let row = &mut system.rows[e + r];
            row.left[slot] += ie * mass / dr + g * 0.5;
            row.right[slot] += ie * mass / dr - g * 0.5;
        }
    }
}

/// One row of both sides: on the diagonal, above, below.
#[derive(Clone, Copy)]
struct Row {
    left: [C; 3],
    right: [C; 3],
}

/// A tridiagonal system, eliminated from the far end so that the fixed part is done once.
struct System {
    rows: Vec<Row>,
    pivots: Vec<C>,
    work: Vec<C>,
}

impl System {
    fn new(nodes: usize) -> Self {
        let zero = C::from(0.0);
        let row = Row { left: [zero; 3], right: [zero; 3] };
        System {
            rows: vec![row; nodes + 1],
            pivots: vec![zero; nodes + 1],
            work: vec![zero; nodes + 1],
        }
    }

    fn clear(&mut self, from: usize, to: usize) {
        for row in &mut self.rows[from..to] {
            *row = Row { left: [C::from(0.0); 3], right: [C::from(0.0); 3] };
        }
    }

    /// Pivots of the rows `from..to`; those above must be there (the last node is held at zero).
    fn eliminate(&mut self, from: usize, to: usize) {
        for i in (from..to).rev() {
            let next = if i + 1 == self.rows.len() - 1 {
                C::from(0.0)
            } else {
                self.rows[i].left[1] * self.pivots[i + 1] * self.rows[i + 1].left[2]
            };
            self.pivots[i] = (self.rows[i].left[0] - next).inv();
        }
    }

    fn step(&mut self, u: &mut [C], first: usize) {
        let last = u.len() - 1;
        for i in (first..last).rev() {
            let [d, above, below] = self.rows[i].right;
            let mut value = d * u[i] + above * u[i + 1];
            if i > 0 {
                value += below * u[i - 1];
            }
            if i + 1 < last {
                value -= self.rows[i].left[1] * self.pivots[i + 1] * self.work[i + 1];
            }
            self.work[i] = value;
        }
        for i in first..last {
            let before = if i > 0 { self.rows[i].left[2] * u[i - 1] } else { C::from(0.0) };
            u[i] = (self.work[i] - before) * self.pivots[i];
        }
    }
}

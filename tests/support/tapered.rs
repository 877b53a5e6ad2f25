//! A reference for the tapered guide: Crank-Nicolson in range, linear elements across, on a mesh
//! that moves with the boundary.
//!
//! `i eps psi_r = -psi_xx - psi` inside `0 < x < h`, `i eps psi_r = -psi_xx` outside, weight 1
//! inside and `m` outside, `h` falling with unit slope. On a mesh with velocity `v` the weak form is
//! `i eps [M u_r + (1/2) M_r u - C u] = (K + V) u` with `C_ij = (1/2) int w v (N_j' N_i - N_j N_i')`: the
//! condition at the sloping boundary that keeps the energy is built in. The midpoint rule keeps
//! the norm. Errors are of second order in step and mesh together, so two runs at half of both are extrapolated
//! to fourth order.

use merging_saddles::Complex64 as C;

const I: C = C::new(0.0, 1.0);

#[derive(Clone, Copy)]
pub struct Taper {
    pub mode: u32,
    pub m: f64,
    pub eps: f64,
    /// Width at the start, deeper than at cut-off.
    pub start: f64,
}

/// Resolution of one run.
#[derive(Clone, Copy)]
struct Mesh {
    inside: usize,
    spacing: f64,
    outside: usize,
    /// Range step over eps.
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

/// The field where the guide has one of the widths asked for.
pub struct Snapshot {
    pub h: f64,
    /// Nodes `x` from 0 over `h` outwards, with the values; `inside` is the index of the boundary.
    pub x: Vec<f64>,
    pub psi: Vec<C>,
    pub inside: usize,
    /// Node beyond which the field is absorbed.
    pub end: usize,
}

impl Taper {
    /// The fields at the given widths, in falling order. `fineness` divides step and mesh; `reach` is
    /// how far out the field is kept.
    pub fn run(&self, widths: &[f64], reach: f64, fineness: f64) -> Vec<Snapshot> {
        let spacing = 0.08 / fineness;
        let mesh = Mesh {
            inside: (60.0 * fineness) as usize,
            spacing,
            outside: (1.8 * reach / spacing) as usize,
            step: 0.06 / fineness,
            absorb: reach,
        };
        let coarse = self.single(widths, mesh);
        let fine = self.single(widths, mesh.refined());
        coarse
            .into_iter()
            .zip(fine)
            .map(|(mut c, f)| {
                for (i, value) in c.psi.iter_mut().enumerate() {
                    *value = (f.psi[2 * i] * 4.0 - *value) / 3.0;
                }
                c
            })
            .collect()
    }

    /// The adiabatic mode of unit energy: `kappa cot(kappa h) = -m gamma`, `kappa^2 + gamma^2 = 1`.
    fn mode(&self, h: f64) -> impl Fn(f64) -> C {
        let (n, m) = (f64::from(self.mode), self.m);
        let (mut low, mut high) =
            ((n - 0.5) * std::f64::consts::PI / h, 1f64.min(n * std::f64::consts::PI / h));
        for _ in 0..60 {
            let k = 0.5 * (low + high);
            let g = (1.0 - k * k).max(0.0).sqrt();
            if k / (k * h).tan() + m * g > 0.0 { low = k } else { high = k }
        }
        let k = 0.5 * (low + high);
        let g = (1.0 - k * k).sqrt();
        let edge = (k * h).sin();
        let energy = 0.5 * h - (2.0 * k * h).sin() / (4.0 * k) + m * edge * edge / (2.0 * g);
        let size = energy.sqrt().recip();
        move |x| C::from(size * if x < h { (k * x).sin() } else { edge * (-g * (x - h)).exp() })
    }

    fn single(&self, widths: &[f64], mesh: Mesh) -> Vec<Snapshot> {
        let nodes = mesh.inside + mesh.outside;
        let place = |h: f64, i: usize| {
            if i <= mesh.inside {
                h * i as f64 / mesh.inside as f64
            } else {
                h + (i - mesh.inside) as f64 * mesh.spacing
            }
        };
        let mut h = self.start;
        let mode = self.mode(h);
        let mut u: Vec<C> = (0..=nodes).map(|i| mode(place(h, i))).collect();
        (u[0], u[nodes]) = (C::from(0.0), C::from(0.0));
        let mut out = Vec::new();
        let mut system = System::new(nodes);
        for &target in widths {
            let steps = ((h - target) / (mesh.step * self.eps)).ceil().max(1.0);
            let dr = (h - target) / steps;
            let first = h;
            system.clear(0, nodes);
            for e in mesh.inside..nodes {
                self.element(mesh, e, first, dr, &mut system);
            }
            system.eliminate(mesh.inside + 1, nodes);
            let boundary = system.rows[mesh.inside];
            for s in 0..steps as usize {
                system.clear(0, mesh.inside);
                system.rows[mesh.inside] = boundary;
                for e in 0..mesh.inside {
                    self.element(mesh, e, first - dr * (s as f64 + 0.5), dr, &mut system);
                }
                system.eliminate(1, mesh.inside + 1);
                system.step(&mut u);
            }
            h = target;
            out.push(Snapshot {
                h,
                x: (0..=nodes).map(|i| place(h, i)).collect(),
                psi: u.clone(),
                inside: mesh.inside,
                end: mesh.inside + (mesh.absorb / mesh.spacing) as usize,
            });
        }
        out
    }

    /// Adds one element to the two sides of a step, `i eps M/dr +- (1/2) [i eps (M_r/2 - C) - (K + V)]`.
    fn element(&self, mesh: Mesh, e: usize, h: f64, dr: f64, system: &mut System) {
        let ie = I * self.eps;
        let within = e < mesh.inside;
        let (j, w) = if within { (h / mesh.inside as f64, 1.0) } else { (mesh.spacing, self.m) };
        // Mesh velocity at the ends of the element, and the rate of its length.
        let speed = |i: usize| -(i.min(mesh.inside) as f64) / mesh.inside as f64;
        let (v0, v1) = (speed(e), speed(e + 1));
        // Potential: the well inside, absorption far out.
        let potential = if within {
            C::from(-1.0)
        } else {
            let far = (e - mesh.inside) as f64 * mesh.spacing - mesh.absorb;
            let depth = (far / (0.8 * mesh.absorb)).max(0.0);
            -I * (0.8 * depth * depth)
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

    fn step(&mut self, u: &mut [C]) {
        let last = u.len() - 1;
        for i in (1..last).rev() {
            let [d, above, below] = self.rows[i].right;
            let mut value = d * u[i] + above * u[i + 1] + below * u[i - 1];
            if i + 1 < last {
                value -= self.rows[i].left[1] * self.pivots[i + 1] * self.work[i + 1];
            }
            self.work[i] = value;
        }
        for i in 1..last {
            u[i] = (self.work[i] - self.rows[i].left[2] * u[i - 1]) * self.pivots[i];
        }
    }
}

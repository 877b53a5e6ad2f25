//! The 16-point Gauss-Legendre panel, with projections on some Legendre modes.
//!
//! Recipe of the table: the nodes are the zeros of P_16 (DLMF 3.5.19), refined by Newton steps at 40 digits,
//! weights `2/((1 - x^2) P_16'(x)^2)`; `modes[m] = (2j + 1)/2 w P_j(x)` for j = 6, 7, 12, 13, 14
//! and 15, so that sums over all nodes give the Legendre coefficients of these degrees. Negative
//! nodes follow from the parity of P_j.

use num_complex::Complex64;

/// A panel's integral of the first of two functions.
pub(super) struct Panel {
    pub value: Complex64,
    /// Integral of the modulus.
    pub size: f64,
    /// The largest modulus met.
    pub peak: f64,
    /// Estimated error of the rule.
    pub defect: f64,
    /// Rounding noise in the values of the second function.
    pub grass: f64,
}

/// Integrates along a straight chord.
pub(super) fn panel<E>(
    from: Complex64,
    to: Complex64,
    mut values: impl FnMut(Complex64) -> Result<[Complex64; 2], E>,
) -> Result<Panel, E> {
    let zero = Complex64::new(0.0, 0.0);
    let (mid, half) = ((from + to) * 0.5, (to - from) * 0.5);
    let (mut value, mut size, mut peak) = (zero, 0.0_f64, 0.0_f64);
    let (mut modes, mut grass) = ([zero; 6], [zero; 4]);
    for row in &ROWS {
        for sign in [1.0, -1.0] {
            let [integrand, other] = values(mid + half * (sign * row.node))?;
            value += integrand * row.weight;
            let modulus = integrand.norm();
            size += modulus * row.weight;
            peak = peak.max(modulus);
            for (j, mode) in row.modes.iter().enumerate() {
                let mode = if j % 2 == 1 { sign * mode } else { *mode };
                modes[j] += integrand * mode;
                if j > 1 {
                    grass[j - 2] += other * mode;
                }
            }
        }
    }
    let length = half.norm();
    // The rule's error sits at degree 32. The modes fall on to there at least as from degree 7 to
    // 13 (power 20/6 in theory, 2.5 with reserve); unless a weak singularity takes over, which
    // shows between degree 13 and 15 (power 9; aliasing flatters the last modes).
    let pair = |j: usize| modes[j].norm().max(modes[j + 1].norm());
    let (early, late, last) = (pair(0), pair(2), pair(4));
    let ratio = |a: f64, b: f64| if a < b { a / b } else { 1.0 };
    let falling = ratio(late, early).powf(2.5).max(ratio(1.5 * last, late).powi(5));
    let defect = 4.0 * length * late * falling;
    // Noise is flat in the degree: what still falls off is not noise.
    let early = (grass[0].norm_sqr() + grass[1].norm_sqr()).sqrt();
    let late = (grass[2].norm_sqr() + grass[3].norm_sqr()).sqrt();
    let grass = if late < 0.1 * early { late * (late / early).powi(2) } else { late.max(early) };
    Ok(Panel { value: value * half, size: size * length, peak, defect, grass })
}

/// One node of the positive half.
struct Row {
    node: f64,
    weight: f64,
    /// Degrees 6, 7, 12, 13, 14, 15: even and odd in turn.
    modes: [f64; 6],
}

#[rustfmt::skip]
const ROWS: [Row; 8] = [
    Row { node: 0.9894009349916499, weight: 0.027152459411754096, modes: [0.13924570146573803, 0.14740575972423792, 0.11123804481263061, 0.08905932565526124, 0.06270545045312347, 0.03278130486396174] },
    Row { node: 0.9445750230732326, weight: 0.062253523938647894, modes: [0.050453919562579504, -0.025281105530178673, -0.297659223207536, -0.2686045287808487, -0.20493540387013992, -0.1122209124505884] },
    Row { node: 0.8656312023878318, weight: 0.09515851168249279, modes: [-0.23192995512788747, -0.292586524485687, 0.32665957676450175, 0.39372215724065485, 0.3541214949557947, 0.21159853063188444] },
    Row { node: 0.755404408355003, weight: 0.12462897125553388, modes: [-0.23959819842067112, -0.05269404819587083, -0.12022762822389817, -0.3785530965929479, -0.46284478766452636, -0.31691961779722083] },
    Row { node: 0.6178762444026438, weight: 0.14959598881657674, modes: [0.12327693233144715, 0.35201317927912984, -0.21933837322856672, 0.2042708267115585, 0.49770223675171826, 0.41664037702596135] },
    Row { node: 0.45801677765722737, weight: 0.16915651939500254, modes: [0.3640133146065163, 0.16501933751603287, 0.4783954761108613, 0.0756360796078141, -0.4435406121078921, -0.5008933497159644] },
    Row { node: 0.2816035507792589, weight: 0.18260341504492358, modes: [0.10836995418974235, -0.3414173736623772, -0.4778653306683862, -0.3581142469595214, 0.305833437439604, 0.5617461448292791] },
    Row { node: 0.09501250983763744, weight: 0.1894506104550685, modes: [-0.31383166860746475, -0.2717959571544673, 0.19879745764039344, 0.533969699258292, -0.10904181595768207, -0.5936159289428018] },
];

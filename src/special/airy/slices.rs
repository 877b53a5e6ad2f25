//! The same functions over slices: one call for many points, nothing allocated.

use super::*;
use crate::special::slices::over_slices;

over_slices! { "airy", infallible;
    airy_slice, airy, Complex64 => Airy<Complex64>, ".ai", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    airy_real_slice, airy_real, f64 => Airy<f64>, ".bi", 0.614926627446000736, "Bi(0): DLMF 9.2.5.";
    airy_scaled_slice, airy_scaled, Complex64 => Airy<Complex64>, ".bi_prime", 0.448288357353826359, "Bi'(0): DLMF 9.2.6.";
    airy_real_scaled_slice, airy_real_scaled, f64 => Airy<f64>, ".ai", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    airy_extended_slice, airy_extended, Complex64 => Airy<Scaled>, ".ai_prime.to_complex()", -0.258819403792806798, "Ai'(0): DLMF 9.2.4.";
    rotated_slice, rotated, Complex64 => Rotated<Complex64>, ".plus", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    rotated_extended_slice, rotated_extended, Complex64 => Rotated<Scaled>, ".minus.to_complex()", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    ai_slice, ai, Complex64 => Complex64, "", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    ai_real_slice, ai_real, f64 => f64, "", 0.355028053887817239, "Ai(0): DLMF 9.2.3.";
    bi_slice, bi, Complex64 => Complex64, "", 0.614926627446000736, "Bi(0): DLMF 9.2.5.";
    bi_real_slice, bi_real, f64 => f64, "", 0.614926627446000736, "Bi(0): DLMF 9.2.5.";
    scorer_slice, scorer, Complex64 => Scorer<Complex64>, ".gi", 0.204975542482000245, "Gi(0) = Bi(0)/3: DLMF 9.12.6, 9.2.5.";
    scorer_extended_slice, scorer_extended, Complex64 => Scorer<Scaled>, ".hi.to_complex()", 0.409951084964000491, "Hi(0) = 2 Bi(0)/3: DLMF 9.12.6, 9.2.5.";
    scorer_real_slice, scorer_real, f64 => Scorer<f64>, ".hi", 0.409951084964000491, "Hi(0) = 2 Bi(0)/3: DLMF 9.12.6, 9.2.5.";
    ai_integral_slice, ai_integral, Complex64 => AiryIntegral<Complex64>, ".to_infinity", 0.333333333333333333, "1/3: DLMF 9.10.11.";
    ai_integral_extended_slice, ai_integral_extended, Complex64 => AiryIntegral<Scaled>, ".to_infinity.to_complex()", 0.333333333333333333, "1/3: DLMF 9.10.11.";
    ai_integral_real_slice, ai_integral_real, f64 => AiryIntegral<f64>, ".to_infinity", 0.333333333333333333, "1/3: DLMF 9.10.11.";
}

over_slices! { "airy";
    ai_zero_slice, ai_zero, usize => Zero<f64>, |k| ai_zero(k), "[1, 2]", ".location", -2.338107410459767, 1e-15, "a_1: DLMF table 9.9.1, further digits from mpmath.";
    ai_prime_zero_slice, ai_prime_zero, usize => Zero<f64>, |k| ai_prime_zero(k), "[1, 2]", ".location", -1.018792971647471, 1e-15, "a'_1: DLMF table 9.9.1, further digits from mpmath.";
    bi_zero_slice, bi_zero, usize => Zero<f64>, |k| bi_zero(k), "[1, 2]", ".location", -1.173713222709128, 1e-15, "b_1: DLMF table 9.9.2, further digits from mpmath.";
    bi_prime_zero_slice, bi_prime_zero, usize => Zero<f64>, |k| bi_prime_zero(k), "[1, 2]", ".location", -2.294439682614123, 1e-15, "b'_1: DLMF table 9.9.2, further digits from mpmath.";
    bi_complex_zero_slice, bi_complex_zero, usize => Zero<Complex64>, |k| bi_complex_zero(k), "[1, 2]", ".location.norm()", 2.354, 1e-3, "|beta_1|: DLMF table 9.9.3.";
    bi_prime_complex_zero_slice, bi_prime_complex_zero, usize => Zero<Complex64>, |k| bi_prime_complex_zero(k), "[1, 2]", ".location.norm()", 1.121, 1e-3, "|beta'_1|: DLMF table 9.9.4.";
    modulus_phase_slice, modulus_phase, f64 => ModulusPhase, |x| modulus_phase(x), "[0.0, -1.0]", ".phase", 0.5235987755982989, 2e-16, "theta(0) = pi/6, as tan theta = Ai/Bi: DLMF 9.2.3, 9.2.5.";
    incomplete_airy_slice, incomplete_airy, [Complex64; 2] => IncompleteAiry<Complex64>, |[x, a]| incomplete_airy(x, a), "[[Complex64::ZERO; 2], [Complex64::ONE; 2]]", ".i0.re", 1.115353525912248, 1e-15, "The real part is pi Ai(0): DLMF 9.5.1, 9.2.3.";
    incomplete_airy_extended_slice, incomplete_airy_extended, [Complex64; 2] => IncompleteAiry<Scaled>, |[x, a]| incomplete_airy_extended(x, a), "[[Complex64::ZERO; 2], [Complex64::ONE; 2]]", ".i0.to_complex().re", 1.115353525912248, 1e-15, "The real part is pi Ai(0): DLMF 9.5.1, 9.2.3.";
}

//! The same functions over slices: one call for many points, nothing allocated.

use super::*;
use crate::special::slices::over_slices;

over_slices! { "faddeeva", infallible;
    w_slice, w, Complex64 => Complex64, "", 1.0, "w(0) = 1: DLMF 7.2.3.";
    w_extended_slice, w_extended, Complex64 => Scaled, ".to_complex()", 1.0, "w(0) = 1: DLMF 7.2.3.";
    erf_slice, erf, Complex64 => Complex64, "", 0.0, "erf 0 = 0: DLMF 7.2.1.";
    erf_extended_slice, erf_extended, Complex64 => Scaled, ".to_complex()", 0.0, "erf 0 = 0: DLMF 7.2.1.";
    erf_real_slice, erf_real, f64 => f64, "", 0.0, "erf 0 = 0: DLMF 7.2.1.";
    erfc_slice, erfc, Complex64 => Complex64, "", 1.0, "erfc 0 = 1: DLMF 7.2.2.";
    erfc_extended_slice, erfc_extended, Complex64 => Scaled, ".to_complex()", 1.0, "erfc 0 = 1: DLMF 7.2.2.";
    erfc_real_slice, erfc_real, f64 => f64, "", 1.0, "erfc 0 = 1: DLMF 7.2.2.";
    erfc_scaled_slice, erfc_scaled, Complex64 => Complex64, "", 1.0, "w(0) = 1: DLMF 7.2.3.";
    erfc_scaled_extended_slice, erfc_scaled_extended, Complex64 => Scaled, ".to_complex()", 1.0, "w(0) = 1: DLMF 7.2.3.";
    erfc_scaled_real_slice, erfc_scaled_real, f64 => f64, "", 1.0, "w(0) = 1: DLMF 7.2.3.";
    dawson_slice, dawson, Complex64 => Complex64, "", 0.0, "F(0) = 0: DLMF 7.2.5.";
    dawson_extended_slice, dawson_extended, Complex64 => Scaled, ".to_complex()", 0.0, "F(0) = 0: DLMF 7.2.5.";
    dawson_real_slice, dawson_real, f64 => f64, "", 0.0, "F(0) = 0: DLMF 7.2.5.";
    complex_fresnel_slice, complex_fresnel, Complex64 => Complex64, ".re", 0.5, "F(0) = (1 + i)/2: DLMF 7.2.6, 7.2.9.";
    complex_fresnel_extended_slice, complex_fresnel_extended, Complex64 => Scaled, ".to_complex().re", 0.5, "F(0) = (1 + i)/2: DLMF 7.2.6, 7.2.9.";
    fresnel_slice, fresnel, Complex64 => Fresnel<Complex64>, ".c", 0.0, "C(0) = 0: DLMF 7.2.7.";
    fresnel_extended_slice, fresnel_extended, Complex64 => Fresnel<Scaled>, ".s.to_complex()", 0.0, "S(0) = 0: DLMF 7.2.8.";
    fresnel_real_slice, fresnel_real, f64 => Fresnel<f64>, ".c", 0.0, "C(0) = 0: DLMF 7.2.7.";
}

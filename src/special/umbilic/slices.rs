//! The same functions over slices: one call for many points, nothing allocated.

use super::*;
use crate::special::slices::over_slices;

over_slices! { "umbilic";
    elliptic_slice, elliptic, [f64; 3] => Umbilic, |[x, y, z]| elliptic(x, y, z), "[[0.0; 3], [1.0; 3]]", ".psi", 3.28868, 1e-5, "Psi^(E)(0) = 3.28868: DLMF 36.2.17.";
    hyperbolic_slice, hyperbolic, [f64; 3] => Umbilic, |[x, y, z]| hyperbolic(x, y, z), "[[0.0; 3], [1.0; 3]]", ".psi", 2.39224, 1e-5, "Psi^(H)(0) = 2.39224: DLMF 36.2.18.";
}

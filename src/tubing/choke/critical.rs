//! Critical two-phase flow through a choke: the five relations of one form.
//!
//! # Equation
//! `p_wh = C q R^m / S^n`: q liquid rate, STB/d; R producing gas-liquid ratio, scf/STB; S opening, 1/64 in.; p_wh upstream, psia.
//!
//! # Sources
//! Gilbert (1954), Drilling and Production Practice; Baxendell (1957); Ros (1960), Applied Scientific Research; Achong (1961), internal
//! report; Pilehvari (1981), University of Tulsa; constants as tabulated together by Guo, Lyons and Ghalambor (2007), table 5.1 (recalled).
//! Some books print the columns of m and n swapped.
//!
//! # Range
//! Critical flow: pressure downstream below about 0.55 of that upstream. The relation knows nothing of the line; below critical flow it
//! does not hold. Gilbert stated gauge pressures; all are taken as absolute here, as later tables do, which moves low wellhead pressures
//! by up to 15 psi: less than the scatter of the relations (7 to 9 % after tuning to one field).

use super::spec::ChokeMethod;

/// Pressure ratio, downstream over upstream, up to which the flow counts as critical.
pub const CRITICAL_RATIO: f64 = 0.55;

/// C, m and n; `None` for a method that is not of this form.
pub const fn constants(method: ChokeMethod) -> Option<(f64, f64, f64)> {
    match method {
        ChokeMethod::Gilbert => Some((10.0, 0.546, 1.89)),
        ChokeMethod::Ros => Some((17.40, 0.500, 2.00)),
        ChokeMethod::Baxendell => Some((9.56, 0.546, 1.93)),
        ChokeMethod::Achong => Some((3.82, 0.650, 1.88)),
        ChokeMethod::Pilehvari => Some((46.67, 0.313, 2.11)),
        ChokeMethod::Sachdeva => None,
    }
}

/// Pressure upstream of a choke in critical flow, psia.
pub fn upstream_psia((c, m, n): (f64, f64, f64), rate_stb_d: f64, glr_scf_stb: f64, size_in: f64) -> f64 {
    c * rate_stb_d * glr_scf_stb.powf(m) / (64.0 * size_in).powf(n)
}

//! Darcy's productivity index in pseudo-steady flow, and what skin does to it.
//!
//! # Method
//! ```text
//! J = 0.00708*k*h*kro/(mu_o*Bo*(r + s)),   r = 0.5*ln(4*A/(1.781*CA*rw^2)),   A = pi*re^2
//! ```
//! k in mD, h, re and rw in ft, mu_o in cp, Bo in rb/STB, J in STB/d/psi. CA is the shape factor of Dietz (1965, JPT August),
//! 31.62 for a well in the middle of a circle, where r = ln(0.472*re/rw). Mobility and volume factor are those at reservoir
//! pressure, since J is the slope of the curve at vanishing drawdown. Pseudo-steady flow of a vertical well through the whole thickness.

/// Shape factor of a well in the middle of a circle.
pub const CIRCLE: f64 = 31.62;
/// 2*pi*0.001127: STB/d of 1 mD ft/cp and psi.
const DARCY: f64 = 0.007_08;
/// r where no radii are given (a common-practice figure).
const USUAL: f64 = 7.0;

/// Words for shape factors, well in the middle unless said otherwise. Dietz (1965) as Earlougher (1977, Monograph 5, table C.1) lists them, from memory.
pub const SHAPE_FACTORS: [(&str, f64); 10] = [
    ("circle", CIRCLE),
    ("hexagon", 31.6),
    ("square", 30.8828),
    ("triangle", 27.6),
    ("rhombus", 27.1),
    ("square-side", 12.9851),
    ("square-corner", 4.5132),
    ("rectangle-2-1", 21.8369),
    ("rectangle-4-1", 5.3790),
    ("rectangle-5-1", 2.3606),
];

/// r of the equations above from drainage and wellbore radius, ft, and the shape factor.
pub fn drainage_term(radii_ft: Option<(f64, f64)>, shape_factor: f64) -> f64 {
    radii_ft.map_or(USUAL, |(drainage, wellbore)| (0.472 * drainage / wellbore).ln())
        + 0.5 * (CIRCLE / shape_factor).ln()
}

/// J, STB/d/psi. `oil_mobility_1_cp` is kro/(mu_o*Bo).
pub fn darcy_index_stb_d_psi(
    permeability_md: f64,
    thickness_ft: f64,
    oil_mobility_1_cp: f64,
    drainage_term: f64,
    skin: f64,
) -> f64 {
    DARCY * permeability_md * thickness_ft * oil_mobility_1_cp / (drainage_term + skin)
}

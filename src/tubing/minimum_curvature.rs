//! Vertical depths of a directional survey by minimum curvature.
//!
//! Between two stations the path is a circular arc that leaves and arrives along the measured directions:
//!
//! ```text
//! dTVD = dMD/2 (cos I1 + cos I2) RF,  RF = (2/beta) tan(beta/2)
//! cos beta = cos(I2 - I1) - sin I1 sin I2 [1 - cos(A2 - A1)]
//! ```
//!
//! with the inclination I from vertical and the azimuth A. Without azimuths the well is taken to stay in one vertical
//! plane; a turn would shorten the vertical depth by far less than a foot in a thousand.
//!
//! # Source
//! Mason and Taylor (1971) and Zaremba (1973); textbook, see Bourgoyne et al., Applied Drilling Engineering (1986), ch. 8.

/// One station of a directional survey.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Station {
    /// Measured depth, ft.
    pub md_ft: f64,
    /// Angle from vertical, degrees.
    pub inclination_deg: f64,
    /// Direction from north, degrees.
    pub azimuth_deg: f64,
}

/// Measured and vertical depths, ft, of the stations; the first lies at no vertical depth.
pub fn vertical_depths(stations: &[Station]) -> Vec<(f64, f64)> {
    let mut tvd_ft = 0.0;
    let mut out = Vec::with_capacity(stations.len());
    for (i, station) in stations.iter().enumerate() {
        if let Some(above) = i.checked_sub(1).map(|i| stations[i]) {
            tvd_ft += fall_ft(&above, station);
        }
        out.push((station.md_ft, tvd_ft));
    }
    out
}

fn fall_ft(above: &Station, below: &Station) -> f64 {
    let (i1, i2) = (above.inclination_deg.to_radians(), below.inclination_deg.to_radians());
    let turn = (below.azimuth_deg - above.azimuth_deg).to_radians();
    // 1 - cos, without its loss of digits at small angles.
    let versed = |angle: f64| 2.0 * (0.5 * angle).sin().powi(2);
    let half_versed = 0.5 * (versed(i2 - i1) + i1.sin() * i2.sin() * versed(turn));
    let half_beta = half_versed.clamp(0.0, 1.0).sqrt().asin();
    let ratio = if half_beta > 1e-9 { half_beta.tan() / half_beta } else { 1.0 };
    0.5 * (below.md_ft - above.md_ft) * (i1.cos() + i2.cos()) * ratio
}

#[cfg(test)]
mod tests {
    use super::*;

    fn station(md_ft: f64, inclination_deg: f64, azimuth_deg: f64) -> Station {
        Station { md_ft, inclination_deg, azimuth_deg }
    }

    #[test]
    fn textbook_step_is_found() {
        // A step used in many drilling texts (from memory): 3,500 ft, 15 degrees, N20E to 3,600 ft, 25 degrees, N45E
        // falls by 94.01 ft.
        let found = fall_ft(&station(3500.0, 15.0, 20.0), &station(3600.0, 25.0, 45.0));
        assert!((found - 94.01).abs() < 0.005, "{found}");
    }

    #[test]
    fn an_arc_in_a_plane_is_exact() {
        // Exact: an arc of radius R from I1 to I2 falls by R (sin I2 - sin I1); stations at any spacing agree.
        let radius_ft = 100.0 / 3.0_f64.to_radians();
        let md = |degrees: f64| degrees / 3.0 * 100.0;
        let whole = vertical_depths(&[station(0.0, 0.0, 0.0), station(md(60.0), 60.0, 0.0)]);
        let parts = vertical_depths(&[
            station(0.0, 0.0, 0.0),
            station(md(7.0), 7.0, 0.0),
            station(md(33.0), 33.0, 0.0),
            station(md(60.0), 60.0, 0.0),
        ]);
        let exact = radius_ft * 60.0_f64.to_radians().sin();
        assert!((whole[1].1 - exact).abs() < 1e-9, "{whole:?} {exact}");
        assert!((parts[3].1 - exact).abs() < 1e-9, "{parts:?} {exact}");
    }

    #[test]
    fn a_straight_hole_is_its_cosine() {
        let found =
            vertical_depths(&[station(0.0, 60.0, 10.0), station(500.0, 60.0, 10.0), station(2000.0, 60.0, 10.0)]);
        assert!((found[2].1 - 1000.0).abs() < 1e-9, "{found:?}");
    }
}

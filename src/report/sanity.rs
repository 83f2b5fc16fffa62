//! Checks that every finished forecast must pass, whatever was asked.

use crate::forecast::{EventKind, Forecast};

/// Largest accepted relative residual of the material balance.
pub const BALANCE_LIMIT: f64 = 1e-8;
/// Largest accepted distance of the sum of drive indices from one.
pub const DRIVE_LIMIT: f64 = 1e-6;

/// What failed, in words; empty when everything holds.
pub fn sanity(forecast: &Forecast) -> Vec<String> {
    let mut failed: Vec<String> = forecast
        .events
        .iter()
        .filter(|event| event.kind == EventKind::BalanceStopped)
        .map(|event| format!("the run stopped on {}: {}", event.date, event.note))
        .collect();
    // Not "residual > limit": a NaN must fail too.
    if forecast.balance_residual.is_nan() || forecast.balance_residual > BALANCE_LIMIT {
        failed.push(format!(
            "the material balance does not close: relative residual {:.1e}, allowed {BALANCE_LIMIT:.0e}",
            forecast.balance_residual
        ));
    }
    let worst = forecast
        .tank
        .iter()
        .zip(&forecast.periods)
        .filter_map(|(t, period)| t.drive_indices.map(|d| (d, period)))
        .map(|(d, period)| (d.depletion + d.gas_cap + d.rock_and_water + d.aquifer + d.injection, period))
        .find(|(sum, _)| sum.is_nan() || (sum - 1.0).abs() > DRIVE_LIMIT);
    if let Some((sum, period)) = worst {
        failed.push(format!("the drive indices of the period from {} add up to {sum:.8}", period.start));
    }
    failed.extend(bad_volume(forecast));
    failed
}

/// The first volume that is negative or not a number.
fn bad_volume(forecast: &Forecast) -> Option<String> {
    let bad = |v: f64| v.is_nan() || v < 0.0;
    let found = |name: &str, index: usize, what: &str| {
        let from = forecast.periods.get(index).map_or_else(String::new, |p| format!(" in the period from {}", p.start));
        Some(format!("{name}: the volume of {what}{from} is negative or not a number"))
    };
    for well in &forecast.wells {
        for (i, r) in well.rows.iter().enumerate() {
            for (what, v) in [("oil", r.oil_stb), ("water", r.water_stb), ("gas", r.gas_scf)] {
                if bad(v) {
                    return found(&well.name, i, what);
                }
            }
        }
    }
    for injector in &forecast.injectors {
        for (i, r) in injector.rows.iter().enumerate() {
            for (what, v) in [("injected water", r.water_stb), ("injected gas", r.gas_scf)] {
                if bad(v) {
                    return found(&injector.name, i, what);
                }
            }
        }
    }
    for (i, t) in forecast.tank.iter().enumerate() {
        for (what, v) in [("oil", t.oil_stb), ("water", t.water_stb), ("gas", t.gas_scf)] {
            if bad(v) {
                return found("tank", i, what);
            }
        }
    }
    None
}

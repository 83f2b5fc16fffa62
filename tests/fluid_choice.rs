//! The selectable correlations: each as published, tuned to what was measured, with one root of the balance.
#![allow(clippy::unwrap_used)]

use proptest::prelude::*;
use wane::fluid::{
    BlackOil, Correlations, DeadOilCorrelation, FluidSpec, LiveOilCorrelation, OilCorrelation, ReservoirFluid,
    UndersaturatedCorrelation, ZCorrelation, al_marhoun, beal_standing, beggs_robinson::BeggsRobinson, chew_connally,
    glaso, hall_yarborough, petrosky_farshad, sutton, vasquez_beggs,
};

fn spec(oil: OilCorrelation) -> FluidSpec {
    FluidSpec { correlations: Correlations { oil, ..Correlations::default() }, ..FluidSpec::new(34.0, 0.80, 620.0) }
}

const DEGF: f64 = 190.0;

/// The published Rs and Bo of each family, in its own function.
fn published(oil: OilCorrelation, p: f64, rs: f64, api: f64, g: f64, t: f64) -> (f64, f64) {
    match oil {
        OilCorrelation::Standing => {
            let a = 0.00091 * t - 0.0125 * api;
            let go = 141.5 / (131.5 + api);
            let bo = 0.9759 + 0.00012 * (rs * (g / go).sqrt() + 1.25 * t).powf(1.2);
            (g * ((p / 18.2 + 1.4) * 10f64.powf(-a)).powf(1.0 / 0.83), bo)
        }
        OilCorrelation::VasquezBeggs => {
            (vasquez_beggs::rs_scf_stb(p, t, api, g), vasquez_beggs::bo_rb_stb(rs, t, api, g))
        }
        OilCorrelation::Glaso => (glaso::rs_scf_stb(p, t, api, g), glaso::bo_rb_stb(rs, t, api, g)),
        OilCorrelation::AlMarhoun => (al_marhoun::rs_scf_stb(p, t, api, g), al_marhoun::bo_rb_stb(rs, t, api, g)),
        OilCorrelation::PetroskyFarshad => {
            (petrosky_farshad::rs_scf_stb(p, t, api, g), petrosky_farshad::bo_rb_stb(rs, t, api, g))
        }
    }
}

#[test]
fn every_family_is_its_publication_in_tank_and_tubing() {
    for &oil in OilCorrelation::ALL {
        let fluid = BlackOil::new(&spec(oil), DEGF).unwrap();
        for p in [50.0, 400.0, 1200.0, 2000.0] {
            for t in [80.0, 140.0, DEGF] {
                let in_situ = fluid.in_situ(p, t, f64::INFINITY);
                let (rs, bo) = published(oil, p, in_situ.rs_scf_stb, 34.0, 0.80, t);
                // Glaso's printed inverse rounds its constants to four digits or so.
                let near = if oil == OilCorrelation::Glaso { 1e-3 } else { 1e-5 };
                assert!(
                    (in_situ.rs_scf_stb / rs - 1.0).abs() < near,
                    "{oil:?} rs {p} {t}: {} {rs}",
                    in_situ.rs_scf_stb
                );
                assert!((in_situ.bo_rb_stb / bo - 1.0).abs() < 1e-6, "{oil:?} bo {p} {t}");
            }
            let (rs, _) = published(oil, p, 0.0, 34.0, 0.80, DEGF);
            assert!((fluid.rs_saturated(p) / rs - 1.0).abs() < 1e-3);
            assert!((fluid.bubble_point_psia(fluid.rs_saturated(p)) / p - 1.0).abs() < 1e-9, "{oil:?} {p}");
        }
    }
}

#[test]
fn viscosities_and_z_are_their_publications() {
    for &dead_oil in DeadOilCorrelation::ALL {
        for &live_oil in LiveOilCorrelation::ALL {
            for &undersaturated in UndersaturatedCorrelation::ALL {
                let correlations = Correlations { dead_oil, live_oil, undersaturated, ..Correlations::default() };
                let fluid = BlackOil::new(&FluidSpec { correlations, ..spec(OilCorrelation::Standing) }, DEGF).unwrap();
                let dead = |t: f64| match dead_oil {
                    DeadOilCorrelation::BeggsRobinson => BeggsRobinson::new(34.0).dead_cp(t.ln()),
                    DeadOilCorrelation::Beal => beal_standing::dead_oil_viscosity_cp(34.0, t),
                    DeadOilCorrelation::Glaso => glaso::dead_oil_viscosity_cp(34.0, t),
                };
                let live = |t: f64, rs: f64| match live_oil {
                    LiveOilCorrelation::BeggsRobinson => BeggsRobinson::live_cp(dead(t).ln(), rs),
                    LiveOilCorrelation::ChewConnally => chew_connally::live_cp(dead(t), rs),
                };
                for (p, t) in [(300.0, 100.0), (1500.0, DEGF), (4000.0, 150.0), (4000.0, DEGF)] {
                    let in_situ = fluid.in_situ(p, t, 620.0);
                    let pb = fluid.bubble_point_at_psia(620.0, t);
                    let mu_b = live(t, in_situ.rs_scf_stb);
                    let above = match undersaturated {
                        _ if p <= pb => 1.0,
                        UndersaturatedCorrelation::VasquezBeggs => {
                            let m = 2.6 * p.powf(1.187) * (-11.513 - 8.98e-5 * p).exp();
                            (p / pb).powf(m)
                        }
                        UndersaturatedCorrelation::Beal => {
                            (mu_b + 0.001 * (p - pb) * (0.024 * mu_b.powf(1.6) + 0.038 * mu_b.powf(0.56))) / mu_b
                        }
                    };
                    assert!((in_situ.mu_o_cp / (mu_b * above) - 1.0).abs() < 1e-6, "{correlations:?} {p} {t}");
                    if t == DEGF {
                        assert!((fluid.mu_o(p, in_situ.rs_scf_stb) / in_situ.mu_o_cp - 1.0).abs() < 1e-6);
                    }
                }
            }
        }
    }
    let correlations = Correlations { z: ZCorrelation::HallYarborough, ..Correlations::default() };
    let fluid = BlackOil::new(&FluidSpec { correlations, ..spec(OilCorrelation::Standing) }, DEGF).unwrap();
    let critical = sutton::mixture(0.80, 0.0, 0.0);
    for (p, t) in [(100.0, 80.0), (1000.0, 120.0), (3000.0, DEGF), (5000.0, DEGF)] {
        let z = hall_yarborough::z_factor(p / critical.pressure_psia, (t + 459.67) / critical.temperature_degr);
        assert!((fluid.in_situ(p, t, 620.0).z / z - 1.0).abs() < 2e-7, "{p} {t}");
    }
}

/// Oils no. 1 and 2 of the viscosity set of T. Ahmed, "Reservoir Engineering Handbook" (2001), chapter 2 (from memory, to its three digits).
#[test]
fn chew_and_connally_begins_at_the_dead_oil_and_thins_with_gas() {
    let (a, b) = chew_connally::live_coefficients(0.0);
    assert!((a - 1.0).abs() < 1e-12 && (b - 0.992).abs() < 1e-12, "{a} {b}");
    let mut before = f64::INFINITY;
    for i in 0..200 {
        let mu = chew_connally::live_cp(2.0, 20.0 * f64::from(i));
        assert!(mu < before, "{i}");
        before = mu;
    }
    for (dead_cp, rs, printed_cp) in [(0.765, 751.0, 0.313), (1.286, 768.0, 0.426)] {
        let mu = chew_connally::live_cp(dead_cp, rs);
        assert!((mu - printed_cp).abs() < 0.001, "{mu} against {printed_cp}");
    }
}

#[test]
fn measured_values_are_met() {
    for &oil in OilCorrelation::ALL {
        for &live_oil in LiveOilCorrelation::ALL {
            let measured = FluidSpec {
                bubble_point_psia: Some(2650.0),
                bubble_point_bo_rb_stb: Some(1.40),
                bubble_point_mu_o_cp: Some(0.40),
                dead_oil_mu_cp: Some(1.9),
                correlations: Correlations { oil, live_oil, ..Correlations::default() },
                ..FluidSpec::new(34.0, 0.80, 620.0)
            };
            let fluid = BlackOil::new(&measured, DEGF).unwrap();
            assert!((fluid.rs_saturated(2650.0) / 620.0 - 1.0).abs() < 1e-9, "{oil:?}");
            assert!((fluid.bo(2650.0, 620.0) - 1.40).abs() < 1e-9);
            assert!((fluid.mu_o(2650.0, 620.0) - 0.40).abs() < 1e-9);
            let in_situ = fluid.unprepared().in_situ(2650.0, DEGF, 620.0);
            assert!((in_situ.bo_rb_stb - 1.40).abs() < 1e-9 && (in_situ.mu_o_cp - 0.40).abs() < 1e-9);
            // Without gas the measured dead oil; Chew and Connally's b of 0.992 leaves 0.5 % there.
            assert!((fluid.mu_o(14.7, 0.0) / 1.9 - 1.0).abs() < 0.006, "{}", fluid.mu_o(14.7, 0.0));
            // One factor on all oil where the dead oil was not measured.
            let plain = BlackOil::new(
                &FluidSpec { bubble_point_mu_o_cp: None, dead_oil_mu_cp: None, ..measured.clone() },
                DEGF,
            );
            let alone = BlackOil::new(&FluidSpec { dead_oil_mu_cp: None, ..measured.clone() }, DEGF);
            let (plain, alone) = (plain.unwrap(), alone.unwrap());
            let factor = 0.40 / plain.mu_o(2650.0, 620.0);
            for p in [200.0, 1500.0, 3500.0] {
                let (a, b) = (plain.in_situ(p, 120.0, 620.0), alone.in_situ(p, 120.0, 620.0));
                assert!((b.mu_o_cp / a.mu_o_cp / factor - 1.0).abs() < 1e-6, "{oil:?} {p}");
            }
        }
    }
}

#[test]
fn what_no_factor_can_explain_is_refused() {
    let refused = |change: fn(&mut FluidSpec)| {
        let mut spec = spec(OilCorrelation::Standing);
        change(&mut spec);
        BlackOil::new(&spec, DEGF).unwrap_err().iter().map(|fault| fault.key.clone()).collect::<Vec<_>>()
    };
    assert_eq!(refused(|spec| spec.bubble_point_bo_rb_stb = Some(3.5)), ["bubble_point_bo"]);
    assert_eq!(refused(|spec| spec.bubble_point_mu_o_cp = Some(60.0)), ["bubble_point_viscosity"]);
    assert_eq!(refused(|spec| spec.dead_oil_mu_cp = Some(400.0)), ["dead_oil_viscosity"]);
    assert_eq!(
        refused(|spec| (spec.dead_oil_mu_cp, spec.bubble_point_mu_o_cp) = (Some(0.5), Some(0.6))),
        ["bubble_point_viscosity"]
    );
}

#[test]
fn every_correlation_says_when_it_leaves_its_range() {
    let notes = |spec: &FluidSpec, degf: f64| {
        let fluid = BlackOil::new(spec, degf).unwrap();
        fluid.range_notes().iter().map(|n| format!("{}: {}: {}", n.property, n.correlation, n.text)).collect::<Vec<_>>()
    };
    for &oil in OilCorrelation::ALL {
        let found = notes(&spec(oil), DEGF);
        let own: Vec<_> = found
            .iter()
            .filter(|note| note.contains(oil.authors()) && note.contains("solution gas-oil ratio and"))
            .collect();
        // Within all ranges, but that Petrosky and Farshad always say how far down they were fitted.
        assert_eq!(own.len(), usize::from(oil == OilCorrelation::PetroskyFarshad), "{found:#?}");
        let cool = FluidSpec {
            correlations: Correlations { oil, ..Correlations::default() },
            ..FluidSpec::new(15.0, 0.55, 150.0)
        };
        let found = notes(&cool, 70.0);
        assert!(
            found.iter().any(|note| note.contains(oil.authors()) && note.contains("temperature 70.000 degF")),
            "{found:#?}"
        );
    }
    let hall = Correlations { z: ZCorrelation::HallYarborough, ..Correlations::default() };
    let heavy = FluidSpec { correlations: hall, ..FluidSpec::new(34.0, 1.1, 620.0) };
    assert!(notes(&heavy, DEGF).iter().any(|note| note.contains("Hall-Yarborough") && note.contains("at 60 degF")));
    let chew = Correlations { live_oil: LiveOilCorrelation::ChewConnally, ..Correlations::default() };
    let lean = FluidSpec { correlations: chew, ..FluidSpec::new(34.0, 0.7, 40.0) };
    assert!(notes(&lean, DEGF).iter().any(|note| note.contains("Chew-Connally") && note.contains("51 to 3544")));
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]
    /// Every choice over random fluids: numbers where numbers are due, gas rises with pressure, pb and Rs inverse, no jump at the
    /// bubble point, and one root of the balance wherever the fluid is accepted.
    #[test]
    fn every_choice_is_sound(
        family in 0..5_usize, dead in 0..3_usize, live in 0..2_usize, under in 0..2_usize, z in 0..2_usize,
        api in 18.0..48.0f64, g in 0.6..1.1f64, rs in 60.0..1400.0f64, tank in 100.0..270.0f64,
        tuning in 0.8..1.25f64, swell in 0.9..1.1f64,
    ) {
        let correlations = Correlations {
            oil: OilCorrelation::ALL[family],
            dead_oil: DeadOilCorrelation::ALL[dead],
            live_oil: LiveOilCorrelation::ALL[live],
            undersaturated: UndersaturatedCorrelation::ALL[under],
            z: ZCorrelation::ALL[z],
        };
        let mut spec = FluidSpec { correlations, ..FluidSpec::new(api, g, rs) };
        if let Ok(own) = BlackOil::new(&spec, tank) {
            spec.bubble_point_psia = Some(own.initial_bubble_point_psia() * tuning);
            spec.bubble_point_bo_rb_stb = Some(1.0 + (own.bo(own.initial_bubble_point_psia(), rs) - 1.0) * swell);
        }
        let Ok(fluid) = BlackOil::new(&spec, tank) else { return Ok(()) };
        let pb = fluid.initial_bubble_point_psia();
        let (mut before, mut total) = (0.0, f64::INFINITY);
        for i in 0..120 {
            let p = 15.0 * (pb / 15.0).powf(f64::from(i) / 119.0);
            let found = fluid.rs_saturated(p);
            prop_assert!(found.is_finite() && found > before, "{correlations:?} rs {found} at {p}");
            prop_assert!((fluid.bubble_point_psia(found) / p - 1.0).abs() < 1e-7);
            before = found;
            // Volume of a barrel of stock-tank oil with all its gas: must fall, else the balance has several roots.
            let volume = fluid.bo(p, found) + (rs - found) * fluid.bg(p);
            prop_assert!(volume < total, "{correlations:?} {volume} after {total} at {p} of {pb}");
            total = volume;
            for t in [60.0, 0.5 * (60.0 + tank), tank] {
                let here = fluid.in_situ(p, t, rs);
                for value in [here.rs_scf_stb, here.bo_rb_stb, here.mu_o_cp, here.z, here.mu_g_cp, here.oil_density_lb_ft3] {
                    prop_assert!(value.is_finite() && value > 0.0, "{correlations:?} {here:?}");
                }
            }
        }
        for t in [60.0, tank] {
            let pb = fluid.bubble_point_at_psia(rs, t).max(15.0);
            let (below, above) = (fluid.in_situ(pb * (1.0 - 1e-9), t, rs), fluid.in_situ(pb * (1.0 + 1e-9), t, rs));
            prop_assert!((below.bo_rb_stb / above.bo_rb_stb - 1.0).abs() < 1e-6, "{correlations:?} bo at {pb}");
            prop_assert!((below.mu_o_cp / above.mu_o_cp - 1.0).abs() < 1e-5, "{correlations:?} mu at {pb}");
        }
    }
}

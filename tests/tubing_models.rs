//! Drift flux (Shi et al.), Ansari, Mukherjee-Brill and Gray: cases of `tests/data/flow.json`, identities and limits.
//!
//! No published numbers of these four were found: the file's values are exact identities, or were recomputed from the
//! published equations by another program, which is said at each check (regression).
#![allow(clippy::unwrap_used)]

mod common;

use common::tubing::flow;
use std::fs::File;
use std::io::BufReader;
use wane::tubing::ansari::{self, Ansari};
use wane::tubing::ansari_annular::{self, Film};
use wane::tubing::ansari_slug::Unit;
use wane::tubing::drift_flux::{self, DriftFlux, Parameters};
use wane::tubing::gray::{self, Gray};
use wane::tubing::model::{Flow, Gradient, Hydraulics, Pipe};
use wane::tubing::mukherjee_brill::{self, MukherjeeBrill};
use wane::tubing::no_slip::NoSlip;
use wane::tubing::{hasan_kabir, liquid};

/// Compares with an expected value of the file, within the tolerance that it states.
fn check(id: &str, name: &str, found: f64) {
    let file = File::open("tests/data/flow.json").expect("test data");
    let cases: serde_json::Value = serde_json::from_reader(BufReader::new(file)).expect("valid json");
    let case = cases.as_array().expect("a list").iter().find(|case| case["id"] == id).expect(id);
    let item = case["expected"].as_array().expect("values").iter().find(|item| item["name"] == name).expect(name);
    let expected = item["value"].as_f64().expect("a number");
    let tolerance = item["tol_abs"].as_f64().unwrap_or_else(|| item["tol_rel"].as_f64().expect("one") * expected.abs());
    assert!((found - expected).abs() <= tolerance, "{id} {name}: found {found}, expected {expected}");
}

/// The running example of Brill and Mukherjee (1999), Multiphase Flow in Wells, Example 3.2 (from memory).
fn monograph() -> (Flow, Pipe) {
    (flow(3.97, 3.86, 47.61, 5.88, 0.97, 0.016, 8.41, 1700.0), Pipe::new(6.0, 6e-5 * 12.0, 1.0))
}

/// The wet gas of B08b and B07c.
fn wet_gas() -> (Flow, Pipe) {
    (flow(0.1, 20.0, 50.0, 5.0, 0.6, 0.016, 20.0, 1500.0), Pipe::new(2.441, 0.0018, 1.0))
}

fn gradient(model: &impl Hydraulics, (flow, pipe): &(Flow, Pipe)) -> Gradient {
    model.gradient(flow, pipe, model.branch(flow, pipe))
}

#[test]
fn mukherjee_brill_of_the_monograph() {
    // Regression: recomputed from the published equations.
    let at = monograph();
    let map = mukherjee_brill::Map::new(&at.0, &at.1);
    check("B04", "NGvSM", map.ln_annular.exp());
    check("B04", "NLvBS", map.ln_bubble(&at.1).exp());
    let found = gradient(&MukherjeeBrill, &at);
    check("B04", "HL", found.holdup);
    check("B04", "dp/dz psi/ft", found.total_psi_ft());
    assert_eq!(MukherjeeBrill.pattern(&at.0, &at.1), "slug");
}

#[test]
fn mukherjee_brill_annular_friction_follows_the_table() {
    // Table of the 1985 paper (from memory), as formulas sections list it, and straight lines between.
    let table = [(0.005, 1.0), (0.01, 1.0), (0.2, 0.98), (0.3, 1.2), (0.4, 1.25), (0.5, 1.3), (0.7, 1.25), (1.0, 1.0)];
    for (ratio, expected) in table.into_iter().chain([(10.0, 1.0), (0.25, 1.09), (0.85, 1.125), (0.105, 0.99)]) {
        let found = mukherjee_brill::annular_friction_ratio(ratio);
        assert!((found - expected).abs() < 1e-12, "{ratio}: {found}");
    }
    // Annular friction is that of no slip times the ratio, at rho_n.
    let at = (flow(0.3, 90.0, 50.0, 1.0, 0.8, 0.013, 25.0, 300.0), Pipe::new(2.441, 0.0018, 1.0));
    assert_eq!(MukherjeeBrill.pattern(&at.0, &at.1), "annular");
    let found = gradient(&MukherjeeBrill, &at);
    let ratio = mukherjee_brill::annular_friction_ratio(at.0.no_slip_holdup / found.holdup);
    let expected = gradient(&NoSlip, &at).friction_psi_ft * ratio;
    assert!((found.friction_psi_ft / expected - 1.0).abs() < 1e-12, "{found:?} {expected}");
}

#[test]
fn gray_of_the_monograph_and_of_a_wet_gas() {
    // Regression: recomputed from the published equations, whose digits are from memory.
    let at = monograph();
    let numbers = gray::numbers(&at.0, &at.1);
    check("B08", "N1", numbers.velocity);
    check("B08", "N2", numbers.diameter);
    check("B08", "N3", numbers.exponent);
    check("B08", "HL", numbers.holdup);
    check("B08", "effective roughness ft", gray::effective_roughness_ft(&at.0, &at.1));
    check("B08", "dp/dz psi/ft", gradient(&Gray, &at).total_psi_ft());
    let at = wet_gas();
    check("B08b", "HL", gray::numbers(&at.0, &at.1).holdup);
    check("B08b", "effective roughness ft", gray::effective_roughness_ft(&at.0, &at.1));
    check("B08b", "dp/dz psi/ft", gradient(&Gray, &at).total_psi_ft());
}

#[test]
fn gray_roughness_has_its_limits() {
    // Stated with the equations: at least 2.77e-5 ft, k0 from Rv = 0.007 up, and the two branches join there.
    let pipe = Pipe::new(2.441, 0.0, 1.0);
    let at =
        |vsl: f64, vsg: f64| gray::effective_roughness_ft(&flow(vsl, vsg, 50.0, 5.0, 0.6, 0.016, 20.0, 1500.0), &pipe);
    assert_eq!(at(1e-9, 30.0), 2.77e-5);
    assert!((at(0.07 - 1e-9, 10.0) / at(0.07 + 1e-9, 10.0) - 1.0).abs() < 1e-6);
    assert_eq!(at(0.001, 0.01), 0.05 * pipe.diameter_ft);
}

/// The air and water of B24.
fn air_water() -> (Flow, Pipe) {
    (flow(1.0, 2.0, 62.4, 0.075, 1.0, 0.018, 72.0, 14.7), Pipe::new(6.0, 0.0006, 1.0))
}

#[test]
fn drift_flux_sets_of_parameters() {
    // Regression: recomputed from the published equations.
    let (flow, pipe) = air_water();
    let earlier = drift_flux::void(&flow, &pipe, &Parameters::EARLIER);
    check("B24a", "Ku", earlier.kutateladze);
    check("B24a", "C0", earlier.distribution);
    check("B24a", "Vd ft/s", earlier.drift_ft_s);
    check("B24a", "alpha", earlier.fraction);
    let fitted = drift_flux::void(&flow, &pipe, &Parameters::FITTED);
    check("B24b", "C0", fitted.distribution);
    check("B24b", "alpha", fitted.fraction);
}

#[test]
fn drift_flux_model_solves_its_equations() {
    // The model's closed form and iteration against the bisection of the full equations, over 4,000 flows.
    let mut patterns = std::collections::BTreeSet::new();
    for diameter in [1.0, 1.995, 2.441, 6.0] {
        for sin in [0.0, 0.1, 0.7, 1.0] {
            for vsl in [0.0, 0.01, 0.3, 2.0, 10.0] {
                for vsg in [0.0, 0.01, 0.1, 0.3, 0.6, 1.0, 3.0, 20.0, 150.0] {
                    for (rhog, sigma) in [(0.075, 72.0), (4.0, 20.0), (14.0, 2.0)] {
                        let flow = Flow {
                            no_slip_holdup: 0.5, // not used by the void fraction; 0/0 at rest
                            ..flow(vsl, vsg, 48.0, rhog, 0.8, 0.015, sigma, 800.0)
                        };
                        let pipe = Pipe::new(diameter, 0.0006, sin);
                        let at = (flow, pipe);
                        let found = gradient(&DriftFlux, &at);
                        patterns.insert(DriftFlux.pattern(&flow, &pipe));
                        let void = drift_flux::void(&flow, &pipe, &Parameters::FITTED);
                        let carried = void.fraction * (flow.mixture_velocity_ft_s() + void.drift_ft_s);
                        assert!((carried - vsg).abs() < 1e-9 || void.fraction > 1.0 - 1e-9, "{flow:?}");
                        // No liquid flows, or nothing at all: the pipe may hold any column, the least gas is meant.
                        if vsl > 0.0 || (vsg > 0.0 && vsg < 1.0 && sin > 0.0) {
                            let difference = found.holdup - (1.0 - void.fraction);
                            assert!(difference.abs() < 1e-9, "{diameter} {sin} {flow:?}: {difference}");
                        }
                        assert!(found.total_psi_ft().is_finite());
                    }
                }
            }
        }
    }
    assert_eq!(patterns.len(), 3, "{patterns:?}");
}

#[test]
fn drift_flux_limits_agree_with_flooding_and_bubble_rise() {
    // Few bubbles rise at Harmathy's velocity times m0; exact by the equations.
    let (_, pipe) = air_water();
    let few = flow(1.0, 1e-6, 62.4, 0.075, 1.0, 0.018, 72.0, 14.7);
    let void = drift_flux::void(&few, &pipe, &Parameters::FITTED);
    assert!((void.drift_ft_s / (1.85 * hasan_kabir::small_bubble_ft_s(&few)) - 1.0).abs() < 1e-5, "{void:?}");
    // Table of Ku (from memory of the paper), and straight lines between.
    for (diameter, ku) in [(1.0, 0.0), (2.0, 0.0), (3.0, 0.5), (12.0, 2.3), (39.0, 3.1), (50.0, 3.2), (500.0, 3.2)] {
        assert!((drift_flux::kutateladze(diameter) - ku).abs() < 1e-12, "{diameter}");
    }
}

#[test]
fn ansari_slug_unit_of_the_monograph() {
    // Regression: recomputed from the published equations; the gas balance (B07b) is an exact identity.
    let at = monograph();
    let unit = Unit::new(&at.0, &at.1);
    check("B07", "vTB ft/s", unit.bubble_ft_s);
    check("B07", "HgLS", unit.slug_void);
    check("B07", "HLTB", unit.film_holdup);
    check("B07", "beta", unit.bubble_part);
    assert_eq!(ansari::pattern(&at.0, &at.1), ansari::Pattern::Slug);
    check("B07", "dp/dz psi/ft", gradient(&Ansari, &at).total_psi_ft());
    check("B07b", "residual ft/s", unit.gas_residual_ft_s(&at.0));
    for (vsl, vsg) in [(0.05, 0.9), (0.5, 2.0), (2.0, 6.0), (10.0, 30.0)] {
        let flow = flow(vsl, vsg, 48.0, 4.0, 1.2, 0.015, 18.0, 800.0);
        check("B07b", "residual ft/s", Unit::new(&flow, &Pipe::new(2.441, 0.0006, 1.0)).gas_residual_ft_s(&flow));
    }
}

#[test]
fn ansari_film_of_a_wet_gas() {
    // Regression, and an exact identity: film and core feel one gradient.
    let at = wet_gas();
    let film = Film::new(&at.0, &at.1, ansari_annular::bits(&at.0, &at.1));
    let (core, wall) = film.balances_psi_ft(&at.0, &at.1);
    check("B07c", "film minus core (relative)", wall / core - 1.0);
    check("B07c", "FE", film.entrained);
    check("B07c", "film thickness delta", film.thickness());
    check("B07c", "HL", film.holdup());
    assert_eq!(ansari::pattern(&at.0, &at.1), ansari::Pattern::Annular);
    let found = gradient(&Ansari, &at);
    // The case leaves out the kinetic term.
    check("B07c", "dp/dz psi/ft", found.gravity_psi_ft + found.friction_psi_ft);
}

#[test]
fn ansari_film_balances_wherever_it_is_annular() {
    let mut count = 0;
    for vsl in [1e-6, 0.01, 0.05, 0.2, 1.0] {
        for vsg in [10.0, 20.0, 40.0, 80.0, 160.0] {
            for (rhog, sigma) in [(0.5, 40.0), (2.0, 25.0), (6.0, 15.0)] {
                for sin in [0.4, 1.0] {
                    let flow = flow(vsl, vsg, 48.0, rhog, 0.8, 0.015, sigma, 800.0);
                    let pipe = Pipe::new(2.441, 0.0006, sin);
                    if ansari::pattern(&flow, &pipe) != ansari::Pattern::Annular {
                        continue;
                    }
                    let film = Film::new(&flow, &pipe, ansari_annular::bits(&flow, &pipe));
                    let (core, wall) = film.balances_psi_ft(&flow, &pipe);
                    // Film terms of 1/x^3 nearly cancel where the film is thin.
                    let scale = (film.x_squared / film.share.powi(3) * film.core_friction_psi_ft).max(core);
                    assert!((wall - core).abs() < 1e-9 * scale, "{flow:?}: {core} {wall}");
                    assert!(film.holdup() <= 0.12);
                    count += 1;
                }
            }
        }
    }
    assert!(count > 60, "{count}");
}

#[test]
fn ansari_bubble_holdup_solves_its_equation_and_is_harmathys() {
    // The definition: gas rises at 1.53 [..]^1/4 HL^1/2 relative to 1.2 vm.
    for (vsl, vsg) in [(1.0, 0.1), (5.0, 1.0), (0.1, 0.05), (0.0, 0.1)] {
        let flow = flow(vsl, vsg, 48.0, 4.0, 1.2, 0.015, 18.0, 800.0);
        let holdup = ansari::bubble_holdup(&flow);
        let rise = vsg / (1.0 - holdup) - 1.2 * flow.mixture_velocity_ft_s();
        assert!((rise - hasan_kabir::small_bubble_ft_s(&flow) * holdup.sqrt()).abs() < 1e-10, "{flow:?}");
    }
    let wide = (flow(2.0, 0.2, 48.0, 4.0, 1.2, 0.015, 18.0, 800.0), Pipe::new(6.0, 0.0006, 1.0));
    assert_eq!(Ansari.pattern(&wide.0, &wide.1), "bubble");
    assert_eq!(gradient(&Ansari, &wide).holdup, ansari::bubble_holdup(&wide.0));
    // Turbulence keeps fast mixtures dispersed, without slip.
    let fast = (flow(15.0, 5.0, 48.0, 4.0, 1.2, 0.015, 18.0, 800.0), Pipe::new(2.441, 0.0006, 1.0));
    assert_eq!(Ansari.pattern(&fast.0, &fast.1), "dispersed bubble");
    let (found, none) = (gradient(&Ansari, &fast), gradient(&NoSlip, &fast));
    assert!((found.total_psi_ft() / none.total_psi_ft() - 1.0).abs() < 1e-12, "{found:?} {none:?}");
}

#[test]
fn hardly_any_gas_is_liquid_for_all_but_gray() {
    let pipe = Pipe::new(2.441, 0.0006, 0.8);
    let at = |gas: f64| flow(2.0, gas, 48.0, 7.0, 1.1, 0.018, 12.0, 1500.0);
    let dry = at(0.0);
    let alone = liquid::gradient(&dry, &pipe, liquid::branch(&dry, &pipe)).total_psi_ft();
    let here = (at(1e-12), pipe);
    for found in [gradient(&DriftFlux, &here), gradient(&Ansari, &here)] {
        assert!((found.total_psi_ft() / alone - 1.0).abs() < 1e-9, "{found:?} {alone}");
    }
    // The power law of the gas velocity number falls slowly: 1e-12 ft/s leave 4e-6 of the holdup.
    assert!((gradient(&MukherjeeBrill, &here).total_psi_ft() / alone - 1.0).abs() < 1e-5);
    // Gray's friction is that of an effective roughness at Re 1e7 throughout; its gravity goes to the liquid's.
    assert!((gradient(&Gray, &here).gravity_psi_ft / pipe.gravity_psi_ft_of(48.0) - 1.0).abs() < 1e-9);
}

/// Weight of a column along a pipe.
trait Weight {
    fn gravity_psi_ft_of(&self, density_lb_ft3: f64) -> f64;
}

impl Weight for Pipe {
    fn gravity_psi_ft_of(&self, density_lb_ft3: f64) -> f64 {
        density_lb_ft3 * self.sin_inclination / 144.0
    }
}

#[test]
fn models_stay_finite_and_within_bounds_anywhere() {
    // Corners of what a traverse can meet, rest and horizontal pipe included.
    for vsl in [0.0, 1e-9, 0.1, 3.0, 60.0] {
        for vsg in [0.0, 1e-9, 0.1, 3.0, 60.0, 900.0] {
            for (rhol, rhog) in [(62.0, 0.05), (45.0, 12.0), (40.0, 39.9), (40.0, 41.0)] {
                for mul in [0.2, 1.0, 50.0, 5000.0] {
                    for sigma in [1.0, 70.0] {
                        for sin in [0.0, 0.02, 1.0] {
                            let lam = if vsl + vsg > 0.0 { vsl / (vsl + vsg) } else { 0.4 };
                            let at = (
                                Flow { no_slip_holdup: lam, ..flow(vsl, vsg, rhol, rhog, mul, 0.015, sigma, 500.0) },
                                Pipe::new(2.441, 0.0006, sin),
                            );
                            for (name, found) in [
                                ("drift-flux", gradient(&DriftFlux, &at)),
                                ("ansari", gradient(&Ansari, &at)),
                                ("mukherjee-brill", gradient(&MukherjeeBrill, &at)),
                                ("gray", gradient(&Gray, &at)),
                            ] {
                                let finite = [found.total_psi_ft(), found.kinetic, found.margin].map(f64::is_finite);
                                assert_eq!(finite, [true; 3], "{name} {at:?}: {found:?}");
                                let bounds = -1e-12..=1.0 + 1e-12;
                                assert!(bounds.contains(&found.holdup), "{name} {at:?}: {found:?}");
                                assert!(found.gravity_psi_ft >= 0.0 && found.friction_psi_ft >= 0.0, "{name} {at:?}");
                                // The holdup told is the one that weighs: the slip factor counts on it.
                                let weight = at.1.gravity_psi_ft_of(at.0.density_at_holdup_lb_ft3(found.holdup));
                                assert!((found.gravity_psi_ft - weight).abs() < 1e-12, "{name} {at:?}: {found:?}");
                                assert!(found.margin >= -1e-6, "{name} {at:?}: {found:?}");
                            }
                        }
                    }
                }
            }
        }
    }
}

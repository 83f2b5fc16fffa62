//! Where curves meet: constructed pairs with closed forms, and the tangency in time.
#![allow(clippy::unwrap_used)]

mod common;

use common::{case, near};
use wane::forecast::integrate::{Effort, End, Problem, Settings, State, integrate};
use wane::well::{crossings, survey};

/// Straight inflow a - q against a tubing curve b + c/q + d*q.
fn height(a: f64, b: f64, c: f64, d: f64) -> impl Fn(f64) -> f64 {
    move |q| (a - q) - (b + c / q + d * q)
}

#[test]
fn none_one_and_two_crossings_are_told_apart() {
    // (a - b) q - c - (1 + d) q^2 = 0
    let roots = |a: f64, b: f64, c: f64, d: f64| {
        let root = ((a - b).powi(2) - 4.0 * (1.0 + d) * c).sqrt();
        [((a - b) - root) / (2.0 * (1.0 + d)), ((a - b) + root) / (2.0 * (1.0 + d))]
    };
    let found = crossings(height(2000.0, 900.0, 1e5, 0.2), 2000.0);
    let expected = roots(2000.0, 900.0, 1e5, 0.2);
    assert_eq!(found.len(), 2);
    near(found[0].rate_stb_d, expected[0], 1e-8, "left crossing");
    near(found[1].rate_stb_d, expected[1], 1e-8, "right crossing");
    assert!(!found[0].stable && found[1].stable, "only the right-hand crossing is stable");
    let land = survey(height(2000.0, 900.0, 1e5, 0.2), 2000.0);
    near(land.right_crossing_stb_d.unwrap(), expected[1], 1e-8, "operating point");
    near(land.margin_rate_stb_d, (1e5_f64 / 1.2).sqrt(), 1e-4, "where the margin is");
    near(land.margin_psi, 1100.0 - 2.0 * (1e5_f64 * 1.2).sqrt(), 1e-9, "margin");

    // A tubing curve that only rises meets the inflow once.
    let found = crossings(height(2000.0, 900.0, 0.0, 0.2), 2000.0);
    assert_eq!(found.len(), 1);
    assert!(found[0].stable);
    near(found[0].rate_stb_d, 1100.0 / 1.2, 1e-8, "single crossing");

    assert!(crossings(height(2000.0, 1500.0, 1e5, 0.2), 2000.0).is_empty());
    let land = survey(height(2000.0, 1500.0, 1e5, 0.2), 2000.0);
    assert!(land.right_crossing_stb_d.is_none() && land.margin_psi < 0.0);
}

#[test]
fn the_right_most_of_several_humps_is_the_operating_point() {
    // Two humps of height 30 around q = 300 and 12 around q = 1400, -40 between.
    let bump = |q: f64, at: f64, width: f64| (-((q - at) / width).powi(2)).exp();
    let h = |q: f64| -40.0 + 70.0 * bump(q, 300.0, 150.0) + 52.0 * bump(q, 1400.0, 120.0);
    let land = survey(h, 2000.0);
    near(land.margin_psi, 30.0, 1e-6, "margin of the higher hump");
    near(land.top_rate_stb_d, 1400.0, 1e-3, "the hump that the well flows on");
    let edge = 1400.0 + 120.0 * (52.0_f64 / 40.0).ln().sqrt();
    near(land.right_crossing_stb_d.unwrap(), edge, 1e-6, "right-most crossing");
    assert!(land.hump_stb_d.0 > 600.0 && land.hump_stb_d.0 < 1250.0, "valley at {}", land.hump_stb_d.0);
    assert_eq!(crossings(h, 2000.0).iter().filter(|c| c.stable).count(), 2);
}

/// Mach, Proano and Brown (1979), SPE 8025, oil-well example: published table of readings, answer about 900 bbl/d at 1300 psi
/// (inputs retrieved from a course document that reproduces it, readings from memory).
#[test]
fn operating_point_of_the_published_example() {
    let c = case("flow.json", "D01");
    let list = |k: &str| common::numbers(&c["inputs"][k]);
    let (q, inflow, tubing) = (list("q [bbl/d]"), list("inflow pwf [psi]"), list("tubing intake [psi]"));
    let linear = |y: &[f64], x: f64| {
        let i = q.partition_point(|v| *v <= x).clamp(1, q.len() - 1);
        y[i - 1] + (y[i] - y[i - 1]) * (x - q[i - 1]) / (q[i] - q[i - 1])
    };
    let found = survey(|x| linear(&inflow, x) - linear(&tubing, x), 1500.0);
    let rate = found.right_crossing_stb_d.unwrap();
    near(rate, c["expected"][0]["value"].as_f64().unwrap(), 0.02, "rate");
    near(linear(&inflow, rate), c["expected"][1]["value"].as_f64().unwrap(), 0.02, "flowing pressure");
}

/// A field in miniature: reservoir pressure falls in proportion to the rate, inflow and tubing curve part at a known instant.
struct Miniature;

impl Miniature {
    const B: f64 = 900.0;
    const C: f64 = 1e5;

    fn height(a: f64) -> impl Fn(f64) -> f64 {
        height(a, Self::B, Self::C, 0.0)
    }
}

impl Problem for Miniature {
    type Error = ();

    /// y = a/1000; a' = -q, with q the right-hand crossing, held at the tangent rate once the curves have parted.
    fn derivative(&self, _t: f64, y: &[f64], dy: &mut [f64]) -> Result<(), ()> {
        let a = 1000.0 * y[0];
        let land = survey(Self::height(a), a.max(1000.0));
        let q = land.right_crossing_stb_d.unwrap_or(land.top_rate_stb_d);
        dy[0] = -q / 1000.0;
        Ok(())
    }

    fn watch_count(&self) -> usize {
        1
    }

    fn watches(&self, t: f64, y: &[f64], out: &mut [f64]) -> Result<(), ()> {
        out[0] = self.watch(0, t, y)?;
        Ok(())
    }

    fn watch(&self, _index: usize, _t: f64, y: &[f64]) -> Result<f64, ()> {
        let a = 1000.0 * y[0];
        Ok(survey(Self::height(a), a.max(1000.0)).margin_psi)
    }
}

#[test]
fn tangency_is_found_within_a_hundredth_of_a_day_of_its_closed_form() {
    // With u = a - b and q = (u + sqrt(u^2 - 4c))/2: u = q + c/q, du = (1 - c/q^2) dq = -q dt, so
    // t = integral from q_end to q_start of (1/q - c/q^3) dq = ln(q0/q1) + c/2 (1/q0^2 - 1/q1^2), q1 = sqrt(c).
    let (b, c, a0) = (Miniature::B, Miniature::C, 2600.0_f64);
    let u0 = a0 - b;
    let q0 = 0.5 * (u0 + (u0 * u0 - 4.0 * c).sqrt());
    let q1 = c.sqrt();
    // Days: the miniature's rate is per 1000 days to make the life long enough for 0.01 day to be a sharp test.
    let exact = (q0 / q1).ln() + 0.5 * c * (1.0 / (q0 * q0) - 1.0 / (q1 * q1));
    struct Slow;
    impl Problem for Slow {
        type Error = ();
        fn derivative(&self, t: f64, y: &[f64], dy: &mut [f64]) -> Result<(), ()> {
            Miniature.derivative(t, y, dy)?;
            dy[0] /= 1000.0;
            Ok(())
        }
        fn watch_count(&self) -> usize {
            1
        }
        fn watches(&self, t: f64, y: &[f64], out: &mut [f64]) -> Result<(), ()> {
            Miniature.watches(t, y, out)
        }
        fn watch(&self, i: usize, t: f64, y: &[f64]) -> Result<f64, ()> {
            Miniature.watch(i, t, y)
        }
    }
    let settings = Settings { rtol: 1e-7, atol: 1e-9, longest_step_days: 122.0, first_step_days: 1.0 };
    let mut effort = Effort::default();
    let start = State::from_element(1, a0 / 1000.0);
    let (stretch, end) = integrate(&Slow, 0.0, &start, 5000.0, &settings, &mut effort).unwrap();
    assert!(matches!(end, End::Watch(0)));
    assert!((stretch.to_days - 1000.0 * exact).abs() < 0.01, "{} against {}", stretch.to_days, 1000.0 * exact);
}

/// A margin that dips below zero and recovers inside a long step is not stepped over.
#[test]
fn a_dip_inside_a_long_step_is_found() {
    struct Dip;
    impl Problem for Dip {
        type Error = ();
        fn derivative(&self, _t: f64, _y: &[f64], dy: &mut [f64]) -> Result<(), ()> {
            dy[0] = 1.0;
            Ok(())
        }
        fn watch_count(&self) -> usize {
            1
        }
        fn watches(&self, t: f64, y: &[f64], out: &mut [f64]) -> Result<(), ()> {
            out[0] = self.watch(0, t, y)?;
            Ok(())
        }
        fn watch(&self, _i: usize, _t: f64, y: &[f64]) -> Result<f64, ()> {
            Ok((y[0] - 700.0).powi(2) / 1000.0 - 0.9)
        }
    }
    let settings = Settings { rtol: 1e-7, atol: 1e-9, longest_step_days: 122.0, first_step_days: 1.0 };
    let (stretch, end) = integrate(&Dip, 0.0, &State::zeros(1), 5000.0, &settings, &mut Effort::default()).unwrap();
    assert!(matches!(end, End::Watch(0)), "{end:?}");
    assert!((stretch.to_days - (700.0 - 30.0)).abs() < 1e-5, "found at {}", stretch.to_days);
}

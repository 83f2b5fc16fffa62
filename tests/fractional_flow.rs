//! Fractional flow, its front and Welge's construction, against closed forms, the graphical construction solved in the test, and a
//! published exercise.
#![allow(clippy::unwrap_used)]

mod common;

use common::near;
use wane::rock::{CoreySpec, FractionalFlow, RelativePermeability};

/// Corey fractional flow written out by the quotient rule, apart from the program's own forms.
struct Curve {
    ratio: f64,
    nw: f64,
    no: f64,
}

impl Curve {
    fn f(&self, s: f64) -> f64 {
        1.0 / (1.0 + (1.0 - s).powf(self.no) / (self.ratio * s.powf(self.nw)))
    }

    fn slope(&self, s: f64) -> f64 {
        let (w, o) = (self.ratio * s.powf(self.nw), (1.0 - s).powf(self.no));
        let (dw, d_o) = (self.ratio * self.nw * s.powf(self.nw - 1.0), -self.no * (1.0 - s).powf(self.no - 1.0));
        (dw * o - w * d_o) / ((w + o) * (w + o))
    }

    /// The tangent from the origin: the chord of greatest slope, found on a fine grid and then by bisection of f' - f/S.
    fn tangent(&self) -> f64 {
        let chord = |s: f64| self.f(s) / s;
        let best = (1..20_000).map(|k| f64::from(k) / 20_000.0).max_by(|a, b| chord(*a).total_cmp(&chord(*b))).unwrap();
        let (mut low, mut high) = (best - 1e-4, (best + 1e-4).min(1.0 - 1e-12));
        for _ in 0..100 {
            let middle = 0.5 * (low + high);
            // Left of the tangent point the curve is steeper than its chord.
            if self.slope(middle) > self.f(middle) / middle { low = middle } else { high = middle }
        }
        0.5 * (low + high)
    }
}

const CASES: [(f64, f64, f64); 7] = [
    (0.67, 3.0, 2.5),
    (3.75, 2.0, 2.3),
    (0.15, 2.0, 2.3),
    (37.5, 2.0, 2.3),
    (5.0, 4.0, 1.5),
    (1.0, 1.5, 4.0),
    (200.0, 6.0, 3.0),
];

#[test]
fn the_front_is_the_tangent_from_connate_water() {
    for (ratio, nw, no) in CASES {
        let (curve, flow) = (Curve { ratio, nw, no }, FractionalFlow::new(ratio, nw, no));
        let (front, s) = (flow.front(), curve.tangent());
        near(front.saturation, s, 1e-10, "saturation of the front");
        near(front.fraction, curve.f(s), 1e-10, "fraction at the front");
        near(front.movable_volumes, 1.0 / curve.slope(s), 1e-10, "volumes at breakthrough");
        near(flow.slope(0.4), curve.slope(0.4), 1e-12, "slope");
    }
}

/// Quadratic curves have the front at 1/sqrt(1 + A): f' = f/S gives A*S^2 = (1 - S)^2 ... = 1 - S^2 when written out.
#[test]
fn quadratic_curves_have_their_front_at_a_closed_form() {
    for ratio in [0.05_f64, 0.5, 1.0, 4.0, 60.0] {
        let front = FractionalFlow::new(ratio, 2.0, 2.0).front();
        near(front.saturation, 1.0 / (1.0 + ratio).sqrt(), 1e-12, "front");
    }
}

#[test]
fn straight_curves_have_no_front_and_piston_curves_nothing_behind_it() {
    // With straight curves and A = 3 the first water comes after 1/f'(0) = 1/3 of the movable volume, at no fraction.
    let flow = FractionalFlow::new(3.0, 1.0, 1.0);
    let front = flow.front();
    near(front.movable_volumes, 1.0 / 3.0, 1e-9, "first water");
    assert!(front.fraction < 1e-9);
    // f'(S) = A/(1 + (A-1)S)^2: Q = 1/f' gives S, and the mean is S + Q(1 - f).
    let s: f64 = 0.3;
    let q = (1.0 + 2.0 * s).powi(2) / 3.0;
    let f = 3.0 * s / (1.0 + 2.0 * s);
    near(flow.fraction_behind(&front, s + q * (1.0 - f)), f, 1e-10, "behind");
    // A = 0.5 with straight curves: the shock goes all the way.
    let piston = FractionalFlow::new(0.5, 1.0, 1.0).front();
    near(piston.movable_volumes, 1.0, 1e-12, "piston");
    near(piston.fraction, 1.0, 1e-12, "piston");
}

/// Welge's graphical construction behind the front: the tangent at the outlet saturation meets f = 1 at the mean saturation. The mean itself
/// is also the integral of the saturation profile x = Q*f'(S) over the length, which knows nothing of tangents.
#[test]
fn behind_the_front_the_outlet_follows_welges_tangent_and_the_profile() {
    for (ratio, nw, no) in CASES {
        let (curve, flow) = (Curve { ratio, nw, no }, FractionalFlow::new(ratio, nw, no));
        let (front, start) = (flow.front(), curve.tangent());
        for k in 1..40 {
            let s = start + (0.995 - start) * f64::from(k) / 40.0;
            let volumes = 1.0 / curve.slope(s);
            let mean = s + (1.0 - curve.f(s)) * volumes;
            near(flow.mean_saturation(s), mean, 1e-10, "mean saturation");
            near(flow.fraction_behind(&front, mean), curve.f(s), 1e-10, "fraction at the outlet");
        }
        // Simpson over S from the outlet to 1 of x(S) = Q*f'(S): mean = S2 + integral of x dS.
        let s = start + 0.4 * (1.0 - start);
        let (n, volumes) = (4000, 1.0 / curve.slope(s));
        let h = (1.0 - s) / f64::from(n);
        let x = |i: i32| if i == n { 0.0 } else { volumes * curve.slope(s + h * f64::from(i)) };
        let sum: f64 = (0..=n)
            .map(|i| {
                x(i) * if i == 0 || i == n {
                    1.0
                } else if i % 2 == 1 {
                    4.0
                } else {
                    2.0
                }
            })
            .sum();
        near(flow.mean_saturation(s), s + sum * h / 3.0, 1e-7, "mean of the profile");
    }
}

/// Water in less water out stays behind: d(mean)/dQ = 1 - f, Welge's own premise.
#[test]
fn what_comes_in_and_does_not_go_out_stays() {
    for (ratio, nw, no) in CASES {
        let flow = FractionalFlow::new(ratio, nw, no);
        let front = flow.front();
        let s = front.saturation + 0.5 * (1.0 - front.saturation);
        let d = 1e-5;
        let (before, after) = (1.0 / flow.slope(s - d), 1.0 / flow.slope(s + d));
        let rise = flow.mean_saturation(s + d) - flow.mean_saturation(s - d);
        near(rise / (after - before), 1.0 - flow.fraction(s), 1e-6, "retained part");
    }
}

#[test]
fn the_fraction_never_falls_with_the_water_and_stays_between_zero_and_one() {
    for (ratio, nw, no) in CASES {
        let flow = FractionalFlow::new(ratio, nw, no);
        let front = flow.front();
        let mut last = 0.0;
        for k in 0..=2400 {
            let f = flow.fraction_behind(&front, f64::from(k) / 2000.0);
            assert!((0.0..=1.0).contains(&f) && f >= last - 1e-13, "A {ratio}: {f} after {last}");
            last = f;
        }
        near(last, 1.0, 1e-12, "all water in the end");
    }
}

/// Dake (1978), Fundamentals of Reservoir Engineering, exercises 10.1 and 10.2, given from memory: a rock with Swc = Sor = 0.2 and a table of
/// krw and kro; viscosities of oil and water 50 and 0.5, 5 and 0.5, 0.4 and 1 cp. Read off the graph there: saturation at breakthrough 0.28,
/// 0.45, 0.80, oil recovered 0.14, 0.35, 0.60 pore volumes. The table's krw lies on 0.3*S^2; its kro on 0.8*(1 - S)^n with an n that falls
/// along the table: each case takes the n through the point next to its front. Read from a graph, so the bars are 0.04.
#[test]
fn dakes_exercise_is_met_as_far_as_its_table_lies_on_power_laws() {
    // Sw and kro next to each front.
    let cases = [
        (50.0, 0.5, (0.30, 0.47), 0.28, 0.14),
        (5.0, 0.5, (0.45, 0.22), 0.45, 0.35),
        (0.4, 1.0, (0.75, 0.010), 0.80, 0.60),
    ];
    for (mu_o, mu_w, (sw, kro), saturation, recovered) in cases {
        let oil_exponent = f64::ln(kro / 0.8) / f64::ln(1.0 - (sw - 0.2) / 0.6);
        let spec = CoreySpec {
            residual_oil_to_water: 0.2,
            oil_end: 0.8,
            water_end: 0.3,
            oil_exponent,
            water_exponent: 2.0,
            ..CoreySpec::default()
        };
        let front = RelativePermeability::corey(&spec, 0.2).displacement(mu_o, mu_w).unwrap().front();
        let (found, volumes) = (0.2 + 0.6 * front.saturation, 0.6 * front.movable_volumes);
        assert!((found - saturation).abs() < 0.04, "front at {found}, {saturation} read");
        assert!((volumes - recovered).abs() < 0.04, "recovered {volumes}, {recovered} read");
    }
}

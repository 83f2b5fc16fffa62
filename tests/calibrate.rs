//! Slip factor and roughness fitted to measured pressures: known figures come back, intervals hold what they promise.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::one_well;
use common::near;
use jiff::civil::date;
use wane::fluid::BlackOil;
use wane::forecast::{DoubtKind, Field, FieldSpec};
use wane::inflow::{Coefficient, InflowTest, Measured};
use wane::report::{Provenance, UnitSystem, calibration_picture};
use wane::study::calibrate::{
    Finding, Fitted, Held, Kind, Measurement, Misses, Tuning, WellCalibration, calibrate, fit, tubing_doubts,
};
use wane::tubing::beggs_brill::BeggsBrill;
use wane::tubing::drift_flux::DriftFlux;
use wane::tubing::hasan_kabir::HasanKabir;
use wane::tubing::model::{Flow, Hydraulics, Pipe};
use wane::tubing::{Stream, TubingMethod, TubingSection};
use wane::well::{FlowingSurvey, SurveyPoint};

const DEPTH_FT: f64 = 8000.0;
const WELLHEAD_DEGF: f64 = 110.0;

/// A vertical well of one string, whose traverse is easily integrated by hand.
fn field(method: TubingMethod, surveys: Vec<FlowingSurvey>) -> FieldSpec {
    let mut spec = one_well();
    let well = &mut spec.wells[0];
    well.tubing.method = method;
    well.tubing.survey = vec![(0.0, 0.0), (DEPTH_FT, DEPTH_FT)];
    well.tubing.wellhead_temperature_degf = WELLHEAD_DEGF;
    well.flowing_surveys = surveys;
    spec
}

fn fluid(spec: &FieldSpec) -> BlackOil {
    BlackOil::new(&spec.fluid, spec.tank.temperature_degf).unwrap()
}

/// The pressure a foot at a time by the classical fourth-order rule of Runge and Kutta: the definition of slip factor and
/// roughness written out, without any part of the program's own march. HL' = lam + s (HL - lam), at most 1, in weight and Ek.
fn by_hand<M: Hydraulics>(
    model: &M,
    spec: &FieldSpec,
    (slip, roughness_in): (f64, f64),
    stream: &Stream,
    wellhead_psia: f64,
    every_ft: f64,
) -> Vec<(f64, f64)> {
    let fluid = fluid(spec).unprepared();
    let pipe = Pipe::new(spec.wells[0].tubing.sections[0].diameter_in, roughness_in, 1.0);
    let area_ft2 = std::f64::consts::PI / 4.0 * pipe.diameter_ft.powi(2);
    let slope = |depth_ft: f64, psia: f64| -> f64 {
        let degf = WELLHEAD_DEGF + (spec.tank.temperature_degf - WELLHEAD_DEGF) * depth_ft / DEPTH_FT;
        let s = fluid.in_situ(psia, degf, stream.gor_scf_stb);
        let (fo, fw) = (1.0 - stream.water_cut, stream.water_cut);
        let (oil, water) = (5.614583 * fo * s.bo_rb_stb, 5.614583 * fw * s.bw_rb_stb);
        let gas = fo * (stream.gor_scf_stb - s.rs_scf_stb).max(0.0) * s.bg_ft3_scf;
        assert!(gas > 0.0, "the streams here are two-phase all the way");
        let per_s_ft2 = stream.liquid_rate_stb_d / 86_400.0 / area_ft2;
        let (share_o, share_w) = (oil / (oil + water), water / (oil + water));
        let flow = Flow {
            liquid_velocity_ft_s: per_s_ft2 * (oil + water),
            gas_velocity_ft_s: per_s_ft2 * gas,
            no_slip_holdup: (oil + water) / (oil + water + gas),
            liquid_density_lb_ft3: share_o * s.oil_density_lb_ft3 + share_w * s.water_density_lb_ft3,
            gas_density_lb_ft3: s.gas_density_lb_ft3,
            liquid_viscosity_cp: share_o * s.mu_o_cp + share_w * s.mu_w_cp,
            gas_viscosity_cp: s.mu_g_cp,
            tension_dyn_cm: share_o * s.sigma_oil_gas_dyn_cm + share_w * s.sigma_water_gas_dyn_cm,
            pressure_psia: psia,
        };
        let g = model.gradient(&flow, &pipe, model.branch(&flow, &pipe));
        let holdup = (flow.no_slip_holdup + slip * (g.holdup - flow.no_slip_holdup)).min(1.0);
        let heavier = (flow.liquid_density_lb_ft3 - flow.gas_density_lb_ft3) * (holdup - g.holdup);
        let kinetic = g.kinetic + flow.kinetic(heavier);
        (g.gravity_psi_ft + heavier / 144.0 + g.friction_psi_ft) / (1.0 - kinetic)
    };
    let (mut psia, mut out) = (wellhead_psia, Vec::new());
    for foot in 0..DEPTH_FT as usize {
        let z = foot as f64;
        let k1 = slope(z, psia);
        let k2 = slope(z + 0.5, psia + 0.5 * k1);
        let k3 = slope(z + 0.5, psia + 0.5 * k2);
        let k4 = slope(z + 1.0, psia + k3);
        psia += (k1 + 2.0 * k2 + 2.0 * k3 + k4) / 6.0;
        if (z + 1.0) % every_ft == 0.0 {
            out.push((z + 1.0, psia));
        }
    }
    out
}

fn survey(stream: &Stream, wellhead_psia: f64, points: &[(f64, f64)]) -> FlowingSurvey {
    FlowingSurvey {
        on: date(2026, 10, 6),
        rate_stb_d: stream.liquid_rate_stb_d,
        gor_scf_stb: stream.gor_scf_stb,
        water_cut: stream.water_cut,
        wellhead_psia,
        wellhead_temperature_degf: None,
        reservoir_psia: None,
        points: points
            .iter()
            .map(|&(md_ft, pressure_psia)| SurveyPoint { md_ft, pressure_psia, temperature_degf: None })
            .collect(),
    }
}

/// A fast and a slow stream, so that friction and weight are told apart.
const STREAMS: [(Stream, f64); 2] = [
    (Stream { liquid_rate_stb_d: 1500.0, water_cut: 0.1, gor_scf_stb: 1400.0 }, 300.0),
    (Stream { liquid_rate_stb_d: 300.0, water_cut: 0.1, gor_scf_stb: 1400.0 }, 180.0),
];

/// Surveys of a model with known figures.
fn known<M: Hydraulics>(model: &M, spec: &FieldSpec, figures: (f64, f64)) -> Vec<FlowingSurvey> {
    STREAMS
        .iter()
        .map(|(stream, wellhead)| survey(stream, *wellhead, &by_hand(model, spec, figures, stream, *wellhead, 500.0)))
        .collect()
}

fn measurements(spec: &FieldSpec) -> Vec<Measurement> {
    let field = Field::new(spec).unwrap();
    Measurement::of(&field.wells()[0], &field)
}

fn fitted(method: TubingMethod, spec: &FieldSpec) -> Fitted {
    fit(&Tuning::published(method, &spec.wells[0].tubing), &measurements(spec), &fluid(spec), 0.0006).unwrap()
}

#[test]
fn known_slip_and_roughness_come_back() {
    fn check<M: Hydraulics>(method: TubingMethod, model: &M) {
        for figures in [(0.75, 0.0018), (1.0, 0.0006), (1.35, 0.006)] {
            let mut spec = field(method, Vec::new());
            spec.wells[0].flowing_surveys = known(model, &spec, figures);
            let fit = fitted(method, &spec);
            let what = format!("{} {figures:?}: {fit:?}", method.name());
            near(fit.slip_factor, figures.0, 1e-3, &what);
            // The well's own roughness need not be fitted where it is the right one already.
            near(fit.roughness_in.unwrap_or(0.0006), figures.1, 1e-2, &what);
            assert!(fit.deviation_psi.unwrap() < 0.02, "{what}");
            assert!(fit.plausible(), "{what}");
        }
    }
    check(TubingMethod::HasanKabir, &HasanKabir);
    check(TubingMethod::DriftFlux, &DriftFlux);
    check(TubingMethod::BeggsBrill, &BeggsBrill { payne: true });
}

/// Uniform numbers (Knuth's 64-bit linear congruence, high bits) made normal as the sum of twelve.
struct Noise(u64);

impl Noise {
    fn next(&mut self) -> f64 {
        let mut uniform = || {
            self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            (self.0 >> 33) as f64 / (1_u64 << 31) as f64
        };
        (0..12).map(|_| uniform()).sum::<f64>() - 6.0
    }
}

#[test]
fn intervals_hold_the_truth_as_often_as_they_say() {
    // 95 % of 300 seeds with a gauge's noise of 4 psi. A binomial count with p = 0.95 lies within 272 and 297 with a
    // probability above 0.998.
    let truth = (1.2, 0.0018);
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    let exact = known(&HasanKabir, &spec, truth);
    let fluid = fluid(&spec);
    let mut noise = Noise(20_261_006);
    let (mut slip_held, mut both_held, mut both, mut deviations) = (0, 0, 0, 0.0);
    const SEEDS: usize = 300;
    for _ in 0..SEEDS {
        let mut surveys = exact.clone();
        for point in surveys.iter_mut().flat_map(|s| &mut s.points) {
            point.pressure_psia += 4.0 * noise.next();
        }
        spec.wells[0].flowing_surveys = surveys;
        spec.wells[0].tubing.sections[0].roughness_in = truth.1;
        let fit = fit(
            &Tuning::published(TubingMethod::HasanKabir, &spec.wells[0].tubing),
            &measurements(&spec),
            &fluid,
            truth.1,
        )
        .unwrap();
        let (low, high) = fit.alone.1.unwrap();
        slip_held += usize::from(low <= truth.0 && truth.0 <= high);
        deviations += fit.deviation_psi.unwrap().powi(2) / SEEDS as f64;
        // The fit of both, whether or not it is taken.
        if let Some((_, Some(free))) = &fit.held
            && let Some((low, high)) = free.roughness_interval_in
        {
            both += 1;
            both_held += usize::from(low <= truth.1 && truth.1 <= high);
        }
    }
    assert!((272..=297).contains(&slip_held), "{slip_held} of {SEEDS} intervals hold the slip factor");
    // Where the second figure brings no gain the truth is inside by construction of the same test: all but a few.
    assert!(both > SEEDS * 8 / 10 && both_held * 100 >= both * 95, "{both_held} of {both} hold the roughness");
    near(deviations.sqrt(), 4.0, 0.03, "the noise is found again");
}

#[test]
fn what_the_points_cannot_tell_is_held_and_said() {
    // One slow stream: there is no friction to speak of, so the roughness is not told.
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    let (stream, wellhead) = STREAMS[1];
    let mut noise = Noise(7);
    let mut points = by_hand(&HasanKabir, &spec, (1.2, 0.0018), &stream, wellhead, 1000.0);
    for point in &mut points {
        point.1 += 2.0 * noise.next();
    }
    spec.wells[0].flowing_surveys = vec![survey(&stream, wellhead, &points)];
    let fit = fitted(TubingMethod::HasanKabir, &spec);
    assert!(
        fit.roughness_in.is_none() && matches!(fit.held, Some((Held::NoGain | Held::Undetermined, Some(_)))),
        "{fit:?}"
    );
    assert!(fit.findings.contains(&Finding::ExcludesOne), "{fit:?}");
    let (low, high) = fit.slip_interval.unwrap();
    assert!(low < 1.2 && 1.2 < high && high - low < 0.1, "{fit:?}");

    // Two points and one: no interval for two figures, none at all.
    spec.wells[0].flowing_surveys[0].points.truncate(2);
    let fit = fitted(TubingMethod::HasanKabir, &spec);
    assert!(matches!(fit.held, Some((Held::TooFewPoints, None))) && fit.slip_interval.is_some(), "{fit:?}");
    spec.wells[0].flowing_surveys[0].points.truncate(1);
    let fit = fitted(TubingMethod::HasanKabir, &spec);
    assert!(fit.findings.contains(&Finding::NoInterval) && fit.slip_interval.is_none(), "{fit:?}");
    let model = measurements(&spec)[0].pressures(&fluid(&spec), &fit.tuning(TubingMethod::HasanKabir));
    near(model[0], spec.wells[0].flowing_surveys[0].points[0].pressure_psia, 1e-6, "one point is met");
}

#[test]
fn one_rate_tells_slip_from_roughness_worse_than_two() {
    // Both make the column heavier all the way down: only the rate parts them.
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    let both = known(&HasanKabir, &spec, (1.2, 0.004));
    let correlation = |fit: &Fitted| fit.correlation.or(fit.held.and_then(|(_, free)| free?.correlation)).unwrap();
    spec.wells[0].flowing_surveys = both.clone();
    let two = fitted(TubingMethod::HasanKabir, &spec);
    spec.wells[0].flowing_surveys = vec![both[0].clone()];
    let one = fitted(TubingMethod::HasanKabir, &spec);
    assert!(correlation(&two) < 0.0 && correlation(&one) < correlation(&two), "{one:?} {two:?}");
    assert!(!two.findings.contains(&Finding::Exchangeable), "{two:?}");
    assert_eq!(one.findings.contains(&Finding::Exchangeable), correlation(&one) < -0.95, "{one:?}");
    assert!(one.findings.contains(&Finding::Exchangeable), "{one:?}");
}

#[test]
fn unphysical_wishes_are_named() {
    // Rougher than any tubing: 0.05 in.
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    spec.wells[0].flowing_surveys = known(&HasanKabir, &spec, (1.0, 0.05));
    let fit = fitted(TubingMethod::HasanKabir, &spec);
    let Some((Held::Unphysical, Some(free))) = fit.held else { panic!("{fit:?}") };
    assert!((free.roughness_in - 0.05).abs() < 0.002 && fit.roughness_in.is_none(), "{free:?}");

    // Slip that repairs something else.
    spec.wells[0].flowing_surveys = known(&HasanKabir, &spec, (2.6, 0.0006));
    let fit = fitted(TubingMethod::HasanKabir, &spec);
    assert!(fit.findings.contains(&Finding::UnlikelySlip) && !fit.plausible(), "{fit:?}");

    // Half the weight of anything that flows there: no slip factor will do.
    for point in spec.wells[0].flowing_surveys.iter_mut().flat_map(|s| &mut s.points) {
        point.pressure_psia = 180.0 + 0.02 * point.md_ft;
    }
    let fit = fitted(TubingMethod::HasanKabir, &spec);
    assert!(fit.findings.contains(&Finding::SlipOnBound) && !fit.plausible(), "{fit:?}");
}

#[test]
fn misses_are_those_of_arithmetic() {
    // By hand: misses -10, 20, 30 psi on 100, 200, 600 psia.
    let m = Misses::of(&[(-10.0, 100.0), (20.0, 200.0), (30.0, 600.0)]);
    assert_eq!((m.count, m.worst_psi), (3, 30.0));
    near(m.bias_psi, 40.0 / 3.0, 1e-14, "bias");
    near(m.mean_absolute_psi, 20.0, 1e-14, "mean size");
    near(m.bias, (-0.1 + 0.1 + 0.05) / 3.0, 1e-12, "relative bias");
    near(m.mean_absolute, 0.25 / 3.0, 1e-14, "relative mean size");
    near(m.worst, 0.05, 1e-14, "of the station that misses most psi");
    near(m.worst_relative, 0.1, 1e-14, "largest relative");
    assert!(Misses::of(&[(f64::NAN, 100.0), (1.0, 100.0)]).worst_relative.is_nan(), "NaN is seen");
}

#[test]
fn temperatures_of_the_day_count() {
    // Hotter oil is lighter: the same slip factor gives less pressure.
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    let (stream, wellhead) = STREAMS[0];
    spec.wells[0].flowing_surveys = vec![survey(&stream, wellhead, &[(DEPTH_FT, 2000.0)])];
    let published = Tuning::published(TubingMethod::HasanKabir, &spec.wells[0].tubing);
    let cool = measurements(&spec)[0].pressures(&fluid(&spec), &published)[0];
    spec.wells[0].flowing_surveys[0].wellhead_temperature_degf = Some(160.0);
    let warm = measurements(&spec)[0].pressures(&fluid(&spec), &published)[0];
    spec.wells[0].flowing_surveys[0].points[0].temperature_degf = Some(185.0);
    let measured = measurements(&spec)[0].pressures(&fluid(&spec), &published)[0];
    assert!((warm - cool).abs() > 1.0 && (measured - warm).abs() > 0.05, "{cool} {warm} {measured}");
}

#[test]
fn wells_without_and_with_measurements_are_doubted_as_they_deserve() {
    let kinds = |spec: &FieldSpec| -> Vec<(DoubtKind, String)> {
        tubing_doubts(spec).unwrap().into_iter().map(|d| (d.kind, d.seen)).collect()
    };
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    let found = kinds(&spec);
    assert!(
        found.len() == 1 && found[0].0 == DoubtKind::ModelChoice && found[0].1.contains("no measurement"),
        "{found:?}"
    );
    // A separator test without a gauge measures the well, not its tubing; with one it does.
    let test = |measured| InflowTest { on: None, reservoir_psia: 3800.0, rate_stb_d: 1500.0, water_cut: 0.1, measured };
    let (stream, wellhead) = STREAMS[0];
    let separator = Measured::Separator { wellhead_psia: wellhead, gor_scf_stb: stream.gor_scf_stb };
    spec.wells[0].inflow.coefficient = Coefficient::Tests(vec![test(separator)]);
    assert_eq!(kinds(&spec).len(), 1);
    let bottom = by_hand(&HasanKabir, &spec, (1.0, 0.0006), &stream, wellhead, DEPTH_FT)[0].1;
    let both = Measured::Both { flowing_psia: bottom, wellhead_psia: wellhead, gor_scf_stb: stream.gor_scf_stb };
    spec.wells[0].inflow.coefficient = Coefficient::Tests(vec![test(both)]);
    assert_eq!(measurements(&spec)[0].kind, Kind::Test);
    assert_eq!(kinds(&spec), []);

    // Surveys of a lighter column: the model as published misses them, and its slip factor is not the fitted one.
    spec.wells[0].inflow = one_well().wells[0].inflow.clone();
    spec.wells[0].flowing_surveys = known(&HasanKabir, &spec, (0.7, 0.0006));
    let found = kinds(&spec);
    // Which surveys the published model misses by more than 5 % somewhere, by hand.
    let far = STREAMS.iter().zip(&spec.wells[0].flowing_surveys).filter(|((stream, wellhead), survey)| {
        let published = by_hand(&HasanKabir, &spec, (1.0, 0.0006), stream, *wellhead, 500.0);
        published.iter().zip(&survey.points).any(|(p, s)| (p.1 / s.pressure_psia - 1.0).abs() > 0.05)
    });
    let far = far.count();
    assert!(far > 0);
    assert_eq!(found.iter().filter(|d| d.0 == DoubtKind::TestMismatch).count(), far, "{found:?}");
    assert!(found.iter().any(|d| d.0 == DoubtKind::WeakFit && d.1.contains("0.700")), "{found:?}");
    spec.wells[0].tubing.slip_factor = 0.7;
    assert_eq!(kinds(&spec), []);
    // Measured temperatures far from the straight line.
    spec.wells[0].flowing_surveys[0].points[8].temperature_degf = Some(185.0);
    assert!(kinds(&spec).iter().any(|d| d.1.contains("185 degF at 4500 ft")), "{:?}", kinds(&spec));
}

fn one(spec: &FieldSpec) -> WellCalibration {
    calibrate(spec, &[]).unwrap().remove(0)
}

#[test]
fn the_well_keeps_its_model_unless_another_is_clearly_better() {
    let mut spec = field(TubingMethod::BeggsBrill, Vec::new());
    spec.wells[0].flowing_surveys = known(&DriftFlux, &spec, (0.9, 0.0018));
    let found = one(&spec);
    assert_eq!(found.chosen().unwrap().method, TubingMethod::DriftFlux);
    assert_eq!(found.models[0].method, TubingMethod::BeggsBrill, "its own comes first");
    assert!(found.models.iter().all(|m| m.method != TubingMethod::NoSlip && m.method != TubingMethod::Gray));
    // No model may be worse after its fit than before, in the sum that the fit minimises.
    let squares = |pressures: &[Vec<f64>]| -> f64 {
        let pairs = found.measurements.iter().zip(pressures);
        pairs.flat_map(|(m, p)| m.stations.iter().zip(p)).map(|(s, p)| (p - s.pressure_psia).powi(2)).sum()
    };
    for model in &found.models {
        let tuned = squares(&model.fitted.as_ref().unwrap().pressures_psia);
        assert!(tuned <= squares(&model.published.pressures_psia) * (1.0 + 1e-9), "{}", model.method.name());
    }
    spec.wells[0].tubing.method = TubingMethod::DriftFlux;
    assert_eq!(one(&spec).chosen, Some(0));
    // A tuned tubing is tuned for its own model alone: the others are as before, with the roughness of new pipe.
    let before = one(&spec);
    (spec.wells[0].tubing.slip_factor, spec.wells[0].tubing.sections[0].roughness_in) = (0.9, 0.0018);
    let after = one(&spec);
    for (a, b) in before.models.iter().zip(&after.models).skip(1) {
        assert_eq!(a.published.all, b.published.all, "{}", a.method.name());
        assert_eq!(a.fitted.as_ref().map(|f| f.all), b.fitted.as_ref().map(|f| f.all), "{}", a.method.name());
    }
    // Asked for no-slip, it is shown, though it never is among the others.
    spec.wells[0].tubing.method = TubingMethod::NoSlip;
    assert_eq!(one(&spec).models[0].method, TubingMethod::NoSlip);
}

#[test]
fn one_roughness_for_the_whole_string_and_surveys_give_an_inflow() {
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    let section =
        |to_md_ft: f64, roughness_in: f64| TubingSection { to_md_ft, roughness_in, ..spec.wells[0].tubing.sections[0] };
    let sections = vec![section(4000.0, 0.0006), section(f64::INFINITY, 0.002)];
    let surveys = known(&HasanKabir, &spec, (1.1, 0.0018));
    spec.wells[0].tubing.sections = sections;
    spec.wells[0].flowing_surveys = surveys;
    let found = one(&spec);
    let score = found.models[0].fitted.as_ref().unwrap();
    near(score.tuning.roughness_in.unwrap(), 0.0018, 1e-2, "effective roughness");
    assert_eq!(found.stated_roughness_in, [0.0006, 0.002]);
    assert!(found.inflow.is_none(), "no test and no reservoir pressure");

    // With a reservoir pressure the fast survey gives the productivity index: above the bubble point q = J (pr - pwf), by hand.
    let bottom = spec.wells[0].flowing_surveys[0].points.last().unwrap().pressure_psia;
    spec.wells[0].flowing_surveys[0].reservoir_psia = Some(3500.0);
    spec.wells[0].flowing_surveys.truncate(1);
    spec.wells[0].inflow.method = wane::inflow::InflowMethod::Straight;
    spec.wells[0].inflow.exponent = None;
    let found = one(&spec);
    let inflow = found.inflow.unwrap();
    assert!(inflow.from_surveys);
    near(inflow.coefficient, 1500.0 / (3500.0 - bottom), 1e-3, "back-calculated index");
    assert_eq!(found.survey_inflow.len(), 1);
}

#[test]
fn odd_measurements_are_answered_and_never_panic() {
    let mut noise = Noise(99);
    for round in 0..16 {
        let mut spec = field(TubingMethod::ALL[round % 8], Vec::new());
        let mut between = |low: f64, high: f64| {
            let share = (0.5 + noise.next() / 6.0).clamp(0.0, 1.0);
            (low.ln() + share * (high / low).ln()).exp()
        };
        let stream = Stream {
            liquid_rate_stb_d: between(1e-3, 3e4),
            water_cut: if round % 3 == 0 { 0.999 } else { 0.2 },
            gor_scf_stb: between(1.0, 3e4),
        };
        let points: Vec<(f64, f64)> = (1..=1 + round % 7).map(|i| (1000.0 * i as f64, between(15.0, 2e4))).collect();
        spec.wells[0].flowing_surveys = vec![survey(&stream, between(15.0, 3000.0), &points)];
        let found = one(&spec);
        for model in &found.models {
            if let Ok(fit) = &model.fit {
                assert!(fit.slip_factor.is_finite() && fit.slip_factor > 0.0, "{stream:?} {fit:?}");
                assert!(fit.roughness_in.is_none_or(|x| x > 0.0 && x <= 0.015), "{stream:?} {fit:?}");
            }
        }
        tubing_doubts(&spec).unwrap();
    }
}

#[test]
fn the_picture_holds_its_words_however_many_measurements_there_are() {
    let mut spec = field(TubingMethod::HasanKabir, Vec::new());
    spec.wells[0].name = "a well whose name is as long as a name may be, sixty letters".to_owned();
    let (stream, wellhead) = STREAMS[0];
    let whole = survey(&stream, wellhead, &by_hand(&HasanKabir, &spec, (1.2, 0.0018), &stream, wellhead, 1000.0));
    for count in [1, 2, 7] {
        spec.wells[0].flowing_surveys = vec![whole.clone(); count];
        // One of them has a single station.
        spec.wells[0].flowing_surveys[0].points.truncate(1);
        for units in [UnitSystem::Field, UnitSystem::Metric] {
            let provenance = Provenance {
                title: "A title that goes on for longer than the picture is wide, ".repeat(4),
                scenario_name: "long-name.toml".to_owned(),
                units,
                ..Provenance::default()
            };
            let drawing = calibration_picture(&one(&spec), &provenance);
            assert_eq!(drawing.clipped_texts(), Vec::<&str>::new(), "{count}");
            let rows = drawing.texts().filter(|t| t.starts_with("Flowing survey of")).count();
            assert_eq!(rows, count.min(4));
            assert_eq!(drawing.texts().any(|t| t.contains("3 further measurements")), count == 7);
            assert!(drawing.to_svg().unwrap().len() > 1000);
        }
    }
}

#[test]
fn pressures_at_depths_are_those_of_the_traverse() {
    // Tapered and deviated: at the depths of the profile the profile's pressures, at the perforations the flowing pressure.
    let mut spec = one_well();
    let section = spec.wells[0].tubing.sections[0];
    spec.wells[0].tubing.sections = vec![TubingSection { to_md_ft: 5000.0, diameter_in: 2.992, ..section }, section];
    let field = Field::new(&spec).unwrap();
    let tubing = &field.wells()[0].tubing;
    for method in TubingMethod::ALL {
        let tubing = tubing.with_method(method);
        let (stream, wellhead) = STREAMS[0];
        let profile = tubing.profile(field.fluid(), &stream, wellhead);
        let found = tubing.pressures_at(field.fluid(), &stream, wellhead, profile.iter().map(|p| p.md_ft));
        for (a, b) in found.iter().zip(&profile) {
            assert!((a - b.pressure_psia).abs() < 0.02, "{}: {a} {b:?}", method.name());
            let (tvd_ft, degf) = tubing.place(b.md_ft);
            assert!((tvd_ft - b.tvd_ft).abs() < 1e-6 && (degf - b.temperature_degf).abs() < 1e-6, "{b:?}");
        }
        let bottom = tubing.flowing_pressure(field.fluid(), &stream, wellhead).pressure_psia;
        let few =
            tubing.pressures_at(field.fluid(), &stream, wellhead, [0.0, 1234.5, 1234.5, tubing.perforations_md_ft()]);
        assert!((few[0] - wellhead).abs() < 1e-9 && few[1] == few[2] && (few[3] - bottom).abs() < 0.02, "{few:?}");
    }
}

//! The spread over tubing models: each model carries its own calibration, and nobody else's.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::one_well;
use jiff::civil::date;
use wane::fluid::BlackOil;
use wane::forecast::{Change, ChangeSpec, Field, FieldSpec, ModelOutcome, run};
use wane::study::add_spread;
use wane::study::calibrate::{Measurement, Tuning, fit};
use wane::tubing::{Stream, Tubing, TubingMethod};
use wane::well::{FlowingSurvey, SurveyPoint};

/// A field whose well stops within its ten years, with a change of string half-way.
fn field() -> FieldSpec {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 6e6;
    spec.period.end = date(2037, 1, 1);
    let mut later = spec.wells[0].clone();
    later.tubing.sections[0].diameter_in = 1.995;
    later.tubing.sections[0].roughness_in = 0.002;
    spec.changes = vec![ChangeSpec {
        on: date(2028, 6, 1),
        name: "OP-1".to_owned(),
        text: "tubing".to_owned(),
        change: Change::Well(0, Box::new(later)),
    }];
    spec
}

/// Surveys that lie between two models, so that every model has something to be tuned to.
fn surveys(spec: &FieldSpec) -> Vec<FlowingSurvey> {
    let fluid = BlackOil::new(&spec.fluid, spec.tank.temperature_degf).unwrap();
    let depths: Vec<f64> = (1..=8).map(|i| 1000.0 * f64::from(i)).collect();
    let one = |rate: f64, gor: f64, wellhead: f64| {
        let stream = Stream { liquid_rate_stb_d: rate, water_cut: 0.0, gor_scf_stb: gor };
        let of = |method| {
            let tubing = Tubing::new(&spec.wells[0].tubing, None, 190.0, 1e-3).unwrap().with_method(method);
            tubing.pressures_at(&fluid, &stream, wellhead, depths.iter().copied())
        };
        let (a, b) = (of(TubingMethod::HasanKabir), of(TubingMethod::Ansari));
        let pressures = a.iter().zip(&b).map(|(a, b)| 0.5 * (a + b));
        FlowingSurvey {
            on: date(2026, 11, 2),
            rate_stb_d: rate,
            gor_scf_stb: gor,
            water_cut: 0.0,
            wellhead_psia: wellhead,
            wellhead_temperature_degf: None,
            reservoir_psia: None,
            points: depths
                .iter()
                .zip(pressures)
                .map(|(md_ft, pressure_psia)| SurveyPoint { md_ft: *md_ft, pressure_psia, temperature_degf: None })
                .collect(),
        }
    };
    vec![one(900.0, 900.0, 240.0), one(400.0, 1500.0, 230.0)]
}

/// The end with a model set by hand at the start and after the event, days.
fn by_hand(spec: &FieldSpec, first: Tuning, later: Tuning) -> f64 {
    let mut other = spec.clone();
    other.wells[0].tubing = first.applied(&other.wells[0].tubing);
    let Change::Well(_, well) = &mut other.changes[0].change else { panic!("a well") };
    well.tubing = later.applied(&well.tubing);
    run(&other).unwrap().wells[0].natural_flow_end.unwrap().days
}

fn spread(spec: &FieldSpec) -> (bool, Vec<(&'static str, ModelOutcome)>) {
    let mut forecast = run(spec).unwrap();
    add_spread(spec, &mut forecast).unwrap();
    let spread = forecast.wells[0].spread.clone().unwrap();
    (spread.calibrated, spread.models.into_iter().map(|m| (m.method, m.outcome)).collect())
}

fn days(models: &[(&'static str, ModelOutcome)], method: TubingMethod) -> f64 {
    match models.iter().find(|m| m.0 == method.name()) {
        Some((_, ModelOutcome::Ends(end))) => end.days,
        other => panic!("{}: {other:?}", method.name()),
    }
}

#[test]
fn with_surveys_each_model_runs_with_its_own_fit_and_new_strings_keep_their_roughness() {
    let mut spec = field();
    spec.wells[0].flowing_surveys = surveys(&spec);
    let (calibrated, models) = spread(&spec);
    assert!(calibrated);
    let prepared = Field::new(&spec).unwrap();
    let measurements = Measurement::of(&prepared.wells()[0], &prepared);
    let mut compared = 0;
    for method in [TubingMethod::DriftFlux, TubingMethod::Ansari, TubingMethod::BeggsBrill] {
        if models.iter().any(|m| m.0 == method.name() && matches!(m.1, ModelOutcome::Failed(_))) {
            continue;
        }
        let untuned = Tuning::published(method, &spec.wells[0].tubing);
        let tuning = fit(&untuned, &measurements, prepared.fluid(), 0.0006).unwrap().tuning(method);
        assert!(tuning.slip_factor != 1.0);
        let expected = by_hand(&spec, tuning, Tuning { roughness_in: None, ..tuning });
        assert_eq!(days(&models, method), expected, "{}", method.name());
        compared += 1;
    }
    assert!(compared >= 2, "{models:?}");
    // The well's own model is the forecast itself.
    let own = run(&spec).unwrap().wells[0].natural_flow_end.unwrap().days;
    assert_eq!(days(&models, TubingMethod::HasanKabir), own);
}

#[test]
fn without_measurements_a_stated_slip_factor_belongs_to_the_own_model_alone() {
    let mut spec = field();
    let untouched = spread(&spec).1;
    // The same with a tuned tubing of its own: the others do not move.
    spec.wells[0].tubing.slip_factor = 0.8;
    spec.wells[0].tubing.sections[0].roughness_in = 0.004;
    let Change::Well(_, well) = &mut spec.changes[0].change else { panic!("a well") };
    well.tubing.slip_factor = 0.8;
    let (calibrated, models) = spread(&spec);
    assert!(!calibrated);
    assert_ne!(days(&models, TubingMethod::HasanKabir), days(&untouched, TubingMethod::HasanKabir));
    for method in [TubingMethod::DriftFlux, TubingMethod::Ansari] {
        assert_eq!(days(&models, method), days(&untouched, method), "{}", method.name());
    }
}

#[test]
fn a_model_that_cannot_be_brought_to_the_measurements_is_named_and_not_counted() {
    let mut spec = field();
    spec.wells[0].flowing_surveys = surveys(&spec);
    // A column that no model with slip gives: light above, heavy below.
    for survey in &mut spec.wells[0].flowing_surveys {
        for (i, point) in survey.points.iter_mut().enumerate() {
            point.pressure_psia = survey.wellhead_psia + if i < 4 { 5.0 * i as f64 } else { 600.0 * (i as f64 - 3.0) };
        }
    }
    let (_, models) = spread(&spec);
    for (method, outcome) in &models[1..] {
        let ModelOutcome::Failed(why) = outcome else { panic!("{method}: {outcome:?}") };
        assert!(why.contains("measurements"), "{why}");
    }
    assert!(matches!(models[0].1, ModelOutcome::Ends(_)), "its own always counts: {models:?}");
}

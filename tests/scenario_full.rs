//! A scenario that states every key: each arrives in its own field, nothing is swapped, dropped or replaced.
#![allow(clippy::unwrap_used)]

use std::collections::BTreeSet;
use wane::fluid::{
    Correlations, DeadOilCorrelation, FluidSpec, LiveOilCorrelation, OilCorrelation, UndersaturatedCorrelation,
    ZCorrelation,
};
use wane::forecast::{Change, Every, FieldSpec, InjectedFluid, InjectionControl, InjectorSpec, PeriodSpec, Tolerance};
use wane::inflow::{Coefficient, FutureRule, InflowMethod, InflowSpec, InflowTest, Measured, RateBasis};
use wane::rock::CoreySpec;
use wane::scenario::{Document, schema};
use wane::tank::{ProducedSpec, TankSpec, Trend, TrendOver, WaterModel, WaterSpec, WaterTrend};
use wane::tubing::{
    ChokeMethod, ChokeSpec, ChokeTest, Discharge, RestrictionSpec, TubingMethod, TubingSection, TubingSpec,
};
use wane::units::UnitSystem;
use wane::well::{FlowingSurvey, LineRate, LineSpec, LossSpec, MakesSpec, ScreenSpec, SurveyPoint, WellSpec};

const FULL: &str = include_str!("data/full.toml");

fn date(year: i16, month: i8, day: i8) -> jiff::civil::Date {
    jiff::civil::date(year, month, day)
}

fn resolve() -> FieldSpec {
    let document = Document::parse("full.toml", FULL).unwrap_or_else(|problems| panic!("{problems}"));
    let scenario = document.resolve(None, &[]).unwrap_or_else(|problems| panic!("{problems}"));
    assert_eq!((scenario.title.as_str(), scenario.units), ("Everything", UnitSystem::Metric));
    assert_eq!(scenario.atmospheric_pressure_psia, 14.5);
    scenario.field
}

#[test]
fn the_scenario_states_every_key() {
    let mut stated = BTreeSet::new();
    let mut table = "";
    for line in FULL.lines() {
        let header = line.trim_start_matches('[').split(']').next().unwrap_or("");
        if line.starts_with('[') {
            table = header;
            stated.insert(header.to_owned());
        }
        for key in
            line.replace(['{', ','], "\n").lines().filter_map(|part| part.split_once('=')).map(|(key, _)| key.trim())
        {
            let dot = if table.is_empty() { "" } else { "." };
            stated.insert(format!("{table}{dot}{key}"));
        }
    }
    // A laboratory's table excludes the measured values stated here: tests/fluid_lab_files.rs states its keys.
    for key in schema::KEYS.iter().filter(|key| !key.path.starts_with("fluid.lab")) {
        // Keys of the members of a list stand under the list in the reference, beside it in this simple search.
        let beside = key
            .path
            .replace(".test.", ".")
            .replace(".sections.", ".")
            .replace(".restrictions.", ".")
            .replace(".heat.", ".");
        // Aquifers go by different keys; gas goes to one place: tests/scenario_energy.rs.
        if key.path.starts_with("tank.aquifer")
            || ["tank.compaction", "tank.produced.aquifer_influx", "injector.gas_to"].contains(&key.path)
        {
            continue;
        }
        assert!(stated.contains(key.path) || stated.contains(&beside), "{} is not stated", key.path);
    }
}

#[test]
fn calendar_fluid_and_tank_arrive() {
    let field = resolve();
    let period = PeriodSpec { start: date(2027, 4, 1), end: date(2037, 4, 1), every: Every::Quarter };
    assert_eq!((field.period, field.tolerance), (period, Tolerance::Tight));
    let fluid = FluidSpec {
        oil_gravity_api: 31.0,
        gas_gravity: 0.81,
        solution_gor_scf_stb: 510.0,
        bubble_point_psia: Some(2310.0),
        salinity_ppm: 41_000.0,
        h2s_fraction: 0.01,
        co2_fraction: 0.02,
        separator: Some((114.0, 85.0)),
        standard_pressure_psia: 14.73,
        standard_temperature_degr: 518.67,
        correlations: Correlations {
            oil: OilCorrelation::VasquezBeggs,
            dead_oil: DeadOilCorrelation::Beal,
            live_oil: LiveOilCorrelation::ChewConnally,
            undersaturated: UndersaturatedCorrelation::Beal,
            z: ZCorrelation::HallYarborough,
        },
        bubble_point_bo_rb_stb: Some(1.31),
        bubble_point_mu_o_cp: Some(0.6),
        dead_oil_mu_cp: Some(2.4),
        lab: None,
    };
    assert_eq!(field.fluid, fluid);
    let tank = TankSpec {
        oil_in_place_stb: 21.0e6,
        pressure_psia: 3120.0,
        temperature_degf: 171.0,
        connate_water: 0.19,
        pore_compressibility_1_psi: 5.0e-6,
        compaction: Vec::new(),
        aquifer: None,
        gas_cap_ratio: 0.0,
        datum_tvd_ft: Some(7020.0),
        produced: Some(ProducedSpec {
            oil_stb: 1.1e6,
            gas_scf: 640.0e6,
            water_stb: 12.0e3,
            injected_water_stb: 300.0e3,
            injected_gas_scf: 5.0e6,
            aquifer_stb: 0.0,
            measured_pressure_psia: Some(2480.0),
        }),
        water_model: WaterModel::Trend,
        water: WaterSpec {
            contacted_fraction: 0.55,
            trend: Some(WaterTrend {
                over: TrendOver::Oil,
                water_oil_ratio: true,
                curve: Trend::new(vec![(0.0, 0.0), (1.5e6, 0.02), (4.0e6, 0.9)]).unwrap(),
            }),
        },
        relative_permeability: CoreySpec {
            critical_gas: 0.03,
            residual_oil_to_gas: 0.21,
            residual_oil_to_water: 0.24,
            oil_end: 0.85,
            gas_end: 0.65,
            water_end: 0.31,
            oil_exponent: 2.1,
            gas_exponent: 1.9,
            water_exponent: 2.7,
        },
    };
    assert_eq!(field.tank, tank);
}

#[test]
fn injectors_arrive() {
    let water = InjectorSpec {
        name: "W".to_owned(),
        fluid: InjectedFluid::Water,
        start: Some(date(2028, 2, 3)),
        end: Some(date(2035, 2, 3)),
        control: InjectionControl::Rate(1500.0),
        rate_limit: Some(1700.0),
        effective_fraction: 0.85,
        bottomhole_limit_psia: Some(4400.0),
        injectivity: Some(9.0),
        to_gas_cap: false,
        response_days: 45.0,
    };
    let gas = InjectorSpec {
        name: "G".to_owned(),
        fluid: InjectedFluid::Gas,
        start: None,
        end: None,
        control: InjectionControl::VoidageReplacement(0.4),
        rate_limit: None,
        effective_fraction: 1.0,
        bottomhole_limit_psia: None,
        injectivity: None,
        to_gas_cap: false,
        response_days: 0.0,
    };
    assert_eq!(resolve().injectors, [water, gas]);
}

fn point(md_ft: f64, pressure_psia: f64, temperature_degf: Option<f64>) -> SurveyPoint {
    SurveyPoint { md_ft, pressure_psia, temperature_degf }
}

#[test]
fn the_first_well_arrives() {
    let well = WellSpec {
        name: "A".to_owned(),
        line_pressure_psia: 205.0,
        shared_line: None,
        choke: Some(ChokeSpec {
            method: ChokeMethod::Ros,
            size_in: 28.0 / 64.0,
            discharge: Discharge::Tests(vec![
                ChokeTest {
                    on: Some(date(2026, 5, 7)),
                    size_in: 0.25,
                    wellhead_psia: 620.0,
                    line_psia: 205.0,
                    rate_stb_d: 510.0,
                    gor_scf_stb: 520.0,
                    water_cut: 0.02,
                },
                ChokeTest {
                    on: None,
                    size_in: 28.0 / 64.0,
                    wellhead_psia: 480.0,
                    line_psia: 204.0,
                    rate_stb_d: 900.0,
                    gor_scf_stb: 525.0,
                    water_cut: 0.0,
                },
            ]),
        }),
        target_rate_stb_d: Some(850.0),
        uptime: 0.91,
        perforations_md_ft: Some(7380.0),
        gor_factor: 1.2,
        water_factor: 0.8,
        start: Some(date(2027, 6, 1)),
        end: Some(date(2036, 6, 1)),
        may_flow_again: true,
        skin: 1.5,
        skin_at_test: 0.5,
        radii_ft: Some((1200.0, 4.25 / 12.0)),
        shape_factor: 21.8369,
        loss: LossSpec { yearly: 0.04, since: Some(date(2026, 5, 6)) },
        minimum_flowing_pressure_psia: Some(900.0),
        minimum_rate_stb_d: Some(45.0),
        maximum_water_cut: Some(0.87),
        maximum_gor_scf_stb: Some(4200.0),
        makes: MakesSpec { breakthrough_delay: 1.4, ..MakesSpec::default() },
        screens: ScreenSpec {
            heading_margin: 0.25,
            maximum_velocity_ft_s: Some(60.0),
            erosional_constant: Some(125.0),
        },
        inflow: InflowSpec {
            method: InflowMethod::Fetkovich,
            future: FutureRule::Mobility,
            basis: RateBasis::Oil,
            exponent: Some(0.88),
            flow_efficiency: None,
            turbulence_psi_d2_stb2: None,
            coefficient: Coefficient::Tests(vec![
                InflowTest {
                    on: Some(date(2026, 5, 4)),
                    reservoir_psia: 2600.0,
                    rate_stb_d: 410.0,
                    water_cut: 0.01,
                    measured: Measured::Gauged { flowing_psia: 2210.0 },
                },
                InflowTest {
                    on: Some(date(2026, 5, 6)),
                    reservoir_psia: 2600.0,
                    rate_stb_d: 640.0,
                    water_cut: 0.0,
                    measured: Measured::Separator { wellhead_psia: 330.0, gor_scf_stb: 515.0 },
                },
            ]),
        },
        tubing: TubingSpec {
            method: TubingMethod::BeggsBrill,
            sections: vec![
                TubingSection { to_md_ft: 5000.0, diameter_in: 2.992, roughness_in: 0.001, inner_pipe_in: 0.5 },
                TubingSection { to_md_ft: f64::INFINITY, diameter_in: 2.441, roughness_in: 0.002, inner_pipe_in: 0.0 },
            ],
            survey: vec![(0.0, 0.0), (3000.0, 2990.0), (7400.0, 7050.0)],
            slip_factor: 0.9,
            wellhead_temperature_degf: 102.0,
            temperatures: Vec::new(),
            heat: None,
            restrictions: Vec::new(),
        },
        flowing_surveys: vec![FlowingSurvey {
            on: date(2026, 6, 11),
            rate_stb_d: 520.0,
            gor_scf_stb: 530.0,
            water_cut: 0.03,
            wellhead_psia: 310.0,
            wellhead_temperature_degf: Some(105.0),
            reservoir_psia: Some(2590.0),
            points: vec![point(0.0, 311.0, None), point(3000.0, 960.0, Some(141.0)), point(7000.0, 2110.0, None)],
        }],
    };
    let mut found = resolve().wells.remove(0);
    // 4.25 in / 12 by two roads.
    let (drainage_ft, wellbore_ft) = found.radii_ft.unwrap_or((f64::NAN, f64::NAN));
    assert!((wellbore_ft - 4.25 / 12.0).abs() < 1.0e-15);
    found.radii_ft = Some((drainage_ft, 4.25 / 12.0));
    assert_eq!(found, well);
}

#[test]
fn the_other_wells_have_their_defaults_and_methods() {
    let wells = resolve().wells;
    let [_, b, c, d, e] = wells.as_slice() else { panic!("five wells") };
    assert_eq!((b.inflow.method, b.tubing.method), (InflowMethod::Vogel, TubingMethod::HagedornBrown));
    assert_eq!((c.inflow.method, c.tubing.method), (InflowMethod::Straight, TubingMethod::NoSlip));
    assert_eq!((d.inflow.method, d.tubing.method), (InflowMethod::Fetkovich, TubingMethod::HasanKabir));
    // 60 degrees over an arc of 6,100 ft: it falls by R sin 60 with R = 6100/(pi/3).
    let fall_ft = 6100.0 / (std::f64::consts::PI / 3.0) * 60.0_f64.to_radians().sin();
    assert_eq!(b.tubing.survey[1], (1000.0, 1000.0));
    assert!((b.tubing.survey[2].1 - 1000.0 - fall_ft).abs() < 1e-9, "{:?}", b.tubing.survey);
    let makes = MakesSpec {
        breakthrough_delay: 1.0,
        water_cut: Some(Trend::new(vec![(0.0, 0.02), (3e5, 0.4)]).unwrap()),
        gor: Some(Trend::new(vec![(0.0, 530.0), (3e5, 800.0)]).unwrap()),
    };
    assert_eq!((&b.makes, &c.makes, &d.makes), (&makes, &MakesSpec::default(), &MakesSpec::default()));
    let degf: Vec<f64> = b.tubing.temperatures.iter().map(|point| point.1).collect();
    assert_eq!((b.tubing.temperatures[0].0, b.tubing.temperatures[1].0), (0.0, 5000.0));
    assert!((degf[0] - 99.0).abs() < 1e-12 && (degf[1] - 158.0).abs() < 1e-12, "{degf:?}");
    assert!(d.tubing.temperatures.is_empty() && d.tubing.wellhead_temperature_degf == 97.0);
    assert!(d.tubing.heat.is_none() && d.tubing.restrictions.is_empty());
    let heat = c.tubing.heat.expect("stated");
    assert!((heat.surface_temperature_degf - 59.0).abs() < 1e-12);
    assert_eq!((heat.conductivity_btu_h_ft_degf, heat.diffusivity_ft2_h, heat.wellbore_radius_ft), (1.5, 0.05, 0.4));
    assert_eq!((heat.transfer_btu_h_ft2_degf, heat.producing_time_d), (3.0, 200.0));
    let restrictions =
        [(4000.0, 1.875, 0.826), (6000.0, 1.5, 0.9)].map(|(at_md_ft, diameter_in, discharge_coefficient)| {
            RestrictionSpec { at_md_ft, diameter_in, discharge_coefficient }
        });
    assert_eq!(c.tubing.restrictions, restrictions);
    let index = Coefficient::ProductivityIndex { j_stb_d_psi: 1.7, reservoir_psia: 3000.0 };
    let open_flow = Coefficient::OpenFlow { rate_stb_d: 1300.0, reservoir_psia: 3120.0 };
    let c_given = Coefficient::Fetkovich { c: 0.0011, reservoir_psia: 3120.0 };
    assert_eq!([&b.inflow.coefficient, &c.inflow.coefficient, &d.inflow.coefficient], [&index, &open_flow, &c_given]);
    assert_eq!(b.inflow.flow_efficiency, Some(0.8));
    let darcy = Coefficient::Darcy { permeability_md: 45.0, thickness_ft: 60.0, reservoir_psia: 3120.0 };
    assert_eq!(
        (e.inflow.method, e.inflow.future, &e.inflow.coefficient),
        (InflowMethod::Jones, FutureRule::Cubic, &darcy)
    );
    assert_eq!((e.inflow.turbulence_psi_d2_stb2, e.shape_factor), (Some(0.0004), 10.8374));
    assert_eq!((d.shape_factor, d.loss), (31.62, LossSpec::default()));
    for (well, diameter_in) in [(b, 1.995), (c, 2.1), (d, 2.2)] {
        let section = TubingSection { to_md_ft: f64::INFINITY, diameter_in, roughness_in: 0.0006, inner_pipe_in: 0.0 };
        assert_eq!(well.tubing.sections, [section]);
        assert_eq!(
            (well.uptime, well.gor_factor, well.water_factor, well.skin, well.skin_at_test),
            (1.0, 1.0, 1.0, 0.0, 0.0)
        );
        assert_eq!((well.target_rate_stb_d, well.perforations_md_ft, well.radii_ft), (None, None, None));
        assert_eq!((well.start, well.end, well.may_flow_again), (None, None, false));
        assert_eq!((well.minimum_flowing_pressure_psia, well.minimum_rate_stb_d), (None, None));
        assert_eq!((well.maximum_water_cut, well.maximum_gor_scf_stb), (None, None));
        assert_eq!((well.inflow.future, well.inflow.basis), (FutureRule::Pressure, RateBasis::Liquid));
    }
}

#[test]
fn lines_and_chokes_arrive() {
    let field = resolve();
    let line = LineSpec { name: "L".to_owned(), rate: LineRate::Gas, pressures: vec![(0.0, 140.0), (3e6, 190.0)] };
    assert_eq!(field.lines, [line]);
    let lines: Vec<_> = field.wells.iter().map(|well| well.shared_line.as_deref()).collect();
    assert_eq!(lines, [None, None, Some("L"), None, None]);
    let discharge = Discharge::Given(0.8);
    let choke = ChokeSpec { method: ChokeMethod::Sachdeva, size_in: 0.5, discharge };
    assert_eq!((field.wells[1].choke.as_ref(), field.wells[2].choke.as_ref()), (None, Some(&choke)));
    assert_eq!(field.wells[2].line_pressure_psia, 140.0, "the lowest stands in");
}

#[test]
fn events_arrive_in_whole_settings() {
    let field = resolve();
    let [well, line, injector, tank] = field.changes.as_slice() else { panic!("four changes") };
    assert_eq!((well.on, well.name.as_str()), (date(2029, 1, 1), "D"));
    let new = WellSpec { skin: 2.0, ..field.wells[3].clone() };
    assert_eq!(well.change, Change::Well(3, Box::new(new)));
    assert_eq!((line.on, line.name.as_str()), (date(2029, 6, 1), "L"));
    let new = LineSpec { pressures: vec![(0.0, 120.0)], ..field.lines[0].clone() };
    assert_eq!(line.change, Change::Line(0, new));
    assert_eq!((injector.on, injector.name.as_str()), (date(2030, 1, 1), "W"));
    let new = InjectorSpec { rate_limit: Some(1600.0), ..field.injectors[0].clone() };
    assert_eq!(injector.change, Change::Injector(0, new));
    assert_eq!((tank.on, tank.name.as_str()), (date(2031, 1, 1), "tank"));
    let new = TankSpec { water_model: WaterModel::Connate, ..field.tank.clone() };
    assert_eq!(tank.change, Change::Tank(Box::new(new)));
}

#[test]
fn every_word_of_a_choice_is_understood() {
    let document = Document::parse("full.toml", FULL).unwrap_or_else(|problems| panic!("{problems}"));
    let with = |set: &str| document.resolve(None, &[set.to_owned()]).unwrap_or_else(|problems| panic!("{problems}"));
    assert_eq!(with("period.every=month").field.period.every, Every::Month);
    assert_eq!(with("period.every=year").field.period.every, Every::Year);
    assert_eq!(with("numerics.tolerance=normal").field.tolerance, Tolerance::Normal);
    assert_eq!(with("units=field").units, UnitSystem::Field);
    assert_eq!(with("well.A.tubing.method=hasan-kabir").field.wells[0].tubing.method, TubingMethod::HasanKabir);
    assert_eq!(with("well.A.inflow.future=pressure").field.wells[0].inflow.future, FutureRule::Pressure);
    assert_eq!(with("well.A.inflow.basis=liquid").field.wells[0].inflow.basis, RateBasis::Liquid);
    assert_eq!(with("tank.water.model=displacement").field.tank.water_model, WaterModel::Displacement);
    assert!(!with("tank.water.trend_of=water-cut").field.tank.water.trend.unwrap().water_oil_ratio);
    for &oil in OilCorrelation::ALL {
        assert_eq!(with(&format!("fluid.oil_correlation={}", oil.word())).field.fluid.correlations.oil, oil);
    }
    for &dead_oil in DeadOilCorrelation::ALL {
        let set = format!("fluid.dead_oil_correlation={}", dead_oil.word());
        assert_eq!(with(&set).field.fluid.correlations.dead_oil, dead_oil);
    }
    assert_eq!(with("tank.water.model=connate").field.tank.water_model, WaterModel::Connate);
}

#[test]
fn heat_replaces_a_stated_temperature_and_the_other_way_round() {
    let document = Document::parse("full.toml", FULL).unwrap_or_else(|problems| panic!("{problems}"));
    let with = |set: &str| document.resolve(None, &[set.to_owned()]).unwrap_or_else(|problems| panic!("{problems}"));
    for set in
        ["well.A.tubing.heat={ surface_temperature = \"60 degF\" }", "well.A.tubing.heat.surface_temperature=60 degF"]
    {
        let tubing = with(set).field.wells.remove(0).tubing;
        let heat = tubing.heat.expect("set");
        // The defaults of the reference.
        assert_eq!((heat.surface_temperature_degf, heat.conductivity_btu_h_ft_degf), (60.0, 1.4));
        assert_eq!((heat.diffusivity_ft2_h, heat.wellbore_radius_ft), (0.04, 0.354));
        assert_eq!((heat.transfer_btu_h_ft2_degf, heat.producing_time_d), (f64::INFINITY, 365.2425));
    }
    assert!(with("well.C.tubing.wellhead_temperature=98 degF").field.wells[2].tubing.heat.is_none());
}

#[test]
fn tests_replace_a_stated_coefficient_and_what_belongs_to_it() {
    let document = Document::parse("full.toml", FULL).unwrap_or_else(|problems| panic!("{problems}"));
    let test = "well.B.inflow.test=[{ reservoir = \"2900 psia\", flowing = \"2200 psia\", rate = \"700 STB/d\" }]";
    let scenario = document.resolve(None, &[test.to_owned()]).unwrap_or_else(|problems| panic!("{problems}"));
    assert!(matches!(&scenario.field.wells[1].inflow.coefficient, Coefficient::Tests(tests) if tests.len() == 1));
}

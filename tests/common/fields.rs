//! Fields of our own for the tests of the engine, given in code.
#![allow(dead_code, missing_docs)]

use jiff::civil::date;
use wane::fluid::FluidSpec;
use wane::forecast::{
    Every, FieldSpec, InjectedFluid, InjectionControl, InjectorSpec, OnsetSpec, PeriodSpec, Tolerance,
};
use wane::inflow::{CIRCLE, Coefficient, FutureRule, InflowMethod, InflowSpec, RateBasis};
use wane::rock::CoreySpec;
use wane::tank::{TankSpec, WaterModel, WaterSpec};
use wane::tubing::{TubingMethod, TubingSection, TubingSpec};
use wane::well::{LossSpec, MakesSpec, ScreenSpec, WellSpec};

/// One well that drains an undersaturated tank.
pub fn one_well() -> FieldSpec {
    FieldSpec {
        period: PeriodSpec { start: date(2027, 1, 1), end: date(2042, 1, 1), every: Every::Month },
        fluid: FluidSpec {
            bubble_point_psia: Some(2650.0),
            salinity_ppm: 35_000.0,
            ..FluidSpec::new(34.0, 0.78, 620.0)
        },
        tank: TankSpec {
            oil_in_place_stb: 20e6,
            pressure_psia: 3800.0,
            temperature_degf: 190.0,
            connate_water: 0.22,
            pore_compressibility_1_psi: 4e-6,
            compaction: Vec::new(),
            aquifer: None,
            gas_cap_ratio: 0.0,
            datum_tvd_ft: None,
            produced: None,
            water_model: WaterModel::Connate,
            water: WaterSpec::default(),
            relative_permeability: CoreySpec {
                critical_gas: 0.04,
                residual_oil_to_gas: 0.25,
                residual_oil_to_water: 0.28,
                oil_end: 0.9,
                gas_end: 0.7,
                water_end: 0.35,
                oil_exponent: 2.5,
                gas_exponent: 2.0,
                water_exponent: 3.0,
            },
        },
        wells: vec![well("OP-1")],
        lines: Vec::new(),
        injectors: Vec::new(),
        changes: Vec::new(),
        onsets: OnsetSpec::default(),
        tolerance: Tolerance::Normal,
    }
}

pub fn well(name: &str) -> WellSpec {
    WellSpec {
        name: name.to_owned(),
        line_pressure_psia: 220.0,
        shared_line: None,
        choke: None,
        target_rate_stb_d: Some(1500.0),
        uptime: 0.95,
        perforations_md_ft: None,
        gor_factor: 1.0,
        water_factor: 1.0,
        start: None,
        end: None,
        may_flow_again: false,
        skin: 0.0,
        skin_at_test: 0.0,
        radii_ft: None,
        shape_factor: CIRCLE,
        loss: LossSpec::default(),
        minimum_flowing_pressure_psia: None,
        minimum_rate_stb_d: None,
        maximum_water_cut: None,
        maximum_gor_scf_stb: None,
        screens: ScreenSpec::default(),
        makes: MakesSpec::default(),
        inflow: InflowSpec {
            method: InflowMethod::Fetkovich,
            future: FutureRule::Pressure,
            basis: RateBasis::Liquid,
            exponent: Some(1.0),
            flow_efficiency: None,
            turbulence_psi_d2_stb2: None,
            coefficient: Coefficient::ProductivityIndex { j_stb_d_psi: 1.6, reservoir_psia: 3800.0 },
        },
        tubing: TubingSpec {
            method: TubingMethod::HasanKabir,
            sections: vec![TubingSection {
                to_md_ft: f64::INFINITY,
                diameter_in: 2.441,
                roughness_in: 0.0006,
                inner_pipe_in: 0.0,
            }],
            survey: vec![(0.0, 0.0), (4000.0, 4000.0), (8600.0, 8150.0)],
            slip_factor: 1.0,
            wellhead_temperature_degf: 110.0,
            temperatures: Vec::new(),
            heat: None,
            restrictions: Vec::new(),
        },
        flowing_surveys: Vec::new(),
    }
}

/// An injector without limits.
pub fn injector(name: &str, fluid: InjectedFluid, control: InjectionControl) -> InjectorSpec {
    InjectorSpec {
        name: name.to_owned(),
        fluid,
        start: None,
        end: None,
        control,
        rate_limit: None,
        effective_fraction: 1.0,
        bottomhole_limit_psia: None,
        injectivity: None,
        to_gas_cap: false,
        response_days: 0.0,
    }
}

//! Water at the wells: the flood inside the tank's balance, breakthrough as an event, trends, lags.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::{injector, one_well};
use common::near;
use jiff::civil::date;
use wane::forecast::{
    Change, ChangeSpec, DoubtKind, EventKind, Field, FieldSpec, Forecast, InjectedFluid, InjectionControl, StopReason,
    Tolerance, run,
};
use wane::rock::RelativePermeability;
use wane::tank::{Cumulatives, Trend, TrendOver, WaterModel, WaterTrend};
use wane::well::WellSpec;

/// A shallow well that flows with any water cut, on a tank held above its bubble point by water.
fn flooded(part: f64) -> FieldSpec {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 3e6;
    spec.tank.water_model = WaterModel::Displacement;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].tubing.survey = vec![(0.0, 0.0), (3000.0, 3000.0)];
    spec.injectors = vec![injector("WI", InjectedFluid::Water, InjectionControl::VoidageReplacement(part))];
    spec
}

fn checked(spec: &FieldSpec) -> Forecast {
    let f = run(spec).unwrap();
    assert!(f.balance_residual <= 1e-8, "balance residual {:e}", f.balance_residual);
    for t in &f.tank {
        let sum = t.oil_saturation + t.gas_saturation + t.water_saturation;
        assert!((sum - 1.0).abs() < 1e-9, "saturations sum to {sum}");
        if let Some(d) = t.drive_indices {
            let sum = d.depletion + d.gas_cap + d.rock_and_water + d.aquifer + d.injection;
            assert!((sum - 1.0).abs() <= 1e-6, "drive indices sum to {sum}");
        }
    }
    // The tank's totals are the sums over its wells.
    for (i, t) in f.tank.iter().enumerate() {
        let sum = |pick: fn(&wane::forecast::WellRow) -> f64| f.wells.iter().map(|w| pick(&w.rows[i])).sum::<f64>();
        near(sum(|r| r.water_cum_stb), t.water_cum_stb, 1e-12, "water of all wells");
        near(sum(|r| r.gas_cum_scf), t.gas_cum_scf, 1e-12, "gas of all wells");
        near(sum(|r| r.oil_cum_stb), t.oil_cum_stb, 1e-12, "oil of all wells");
    }
    f
}

fn breakthrough(f: &Forecast, name: &str) -> Option<f64> {
    f.events.iter().find(|e| e.kind == EventKind::WaterBreakthrough && e.name == name).map(|e| e.days)
}

/// With the voidage replaced above the bubble point nothing but water and oil moves at one pressure: Welge's case itself. The day of
/// breakthrough and the water cut of every month follow from the constructions, solved here apart from the program.
#[test]
fn with_full_replacement_the_well_makes_welges_water_cut() {
    let spec = flooded(1.0);
    let f = checked(&spec);
    let field = Field::new(&spec).unwrap();
    let (fluid, p) = (field.tank().fluid(), spec.tank.pressure_psia);
    let (bo, bw) = (fluid.bo(p, spec.fluid.solution_gor_scf_stb), fluid.bw(p));
    let kr = spec.tank.relative_permeability;
    let ratio = kr.water_end * fluid.mu_o(p, spec.fluid.solution_gor_scf_stb) / (kr.oil_end * fluid.mu_w(p));
    let fraction = |s: f64| 1.0 / (1.0 + (1.0 - s).powf(kr.oil_exponent) / (ratio * s.powf(kr.water_exponent)));
    let slope = |s: f64| {
        let f = fraction(s);
        f * (1.0 - f) * (kr.water_exponent / s + kr.oil_exponent / (1.0 - s))
    };
    let falls = |g: &dyn Fn(f64) -> f64, mut low: f64, mut high: f64| {
        for _ in 0..200 {
            let middle = 0.5 * (low + high);
            if g(middle) > 0.0 { low = middle } else { high = middle }
        }
        0.5 * (low + high)
    };
    let front = falls(&|s| slope(s) - fraction(s) / s, 0.2, 1.0 - 1e-9);
    let pore_rb = spec.tank.oil_in_place_stb * bo / (1.0 - spec.tank.connate_water);
    let movable_rb =
        spec.tank.water.contacted_fraction * pore_rb * (1.0 - spec.tank.connate_water - kr.residual_oil_to_water);
    // Until then the well makes 800 STB/d of oil 95 % of the time, and as much in place is injected.
    let day = movable_rb / slope(front) / (800.0 * 0.95 * bo);
    let found = breakthrough(&f, "OP-1").unwrap();
    assert!((found - day).abs() < 1e-3, "breakthrough after {found} days, {day} expected");
    let mut after = 0;
    for (period, (row, inj)) in f.periods.iter().zip(f.wells[0].rows.iter().zip(&f.injectors[0].rows)) {
        near(f.tank[0].pressure_psia, p, 1e-7, "pressure");
        let cut = row.water_cut.unwrap();
        if period.run_days < day {
            assert_eq!((cut, row.water_cum_stb), (0.0, 0.0), "dry before breakthrough");
            near(f.tank[0].oil_saturation, 1.0 - spec.tank.connate_water, 1e-4, "the unswept zone stays as it was");
            continue;
        }
        let volumes = inj.water_cum_stb * bw / movable_rb;
        let outlet = falls(&|s| 1.0 - volumes * slope(s), front, 1.0 - 1e-12);
        let outlet = if volumes * slope(front) < 1.0 {
            front
        } else {
            // The slope falls behind the front: where it is 1/Q.
            falls(&|s| volumes * slope(s) - 1.0, front, 1.0 - 1e-12).max(outlet.min(front))
        };
        let in_place = cut * bw / (cut * bw + (1.0 - cut) * bo);
        assert!((in_place - fraction(outlet)).abs() < 2e-5, "{}: {in_place} {}", period.start, fraction(outlet));
        after += 1;
    }
    assert!(after > 24, "{after} months after breakthrough");
    assert!(f.doubts.iter().any(|d| d.kind == DoubtKind::NotModelled && d.seen.contains("one front")));
}

/// The water in the tank is what came in less what went out, and never more goes out than came in (practice, check S11). Also with less
/// injected than withdrawn, with too much, and after injection has ended.
#[test]
fn no_more_water_comes_out_than_went_in() {
    for part in [0.3, 0.7, 1.0, 1.1] {
        let mut spec = flooded(part);
        spec.tank.water.contacted_fraction = 0.3;
        spec.injectors[0].end = Some(date(2033, 1, 1));
        spec.wells[0].may_flow_again = true;
        let f = checked(&spec);
        for (t, i) in f.tank.iter().zip(&f.injectors[0].rows) {
            assert!(t.water_cum_stb <= i.water_cum_stb * (1.0 + 1e-9), "{} of {}", t.water_cum_stb, i.water_cum_stb);
        }
        if part >= 0.7 {
            assert!(breakthrough(&f, "OP-1").is_some(), "no breakthrough at {part}");
            assert!(f.tank.last().unwrap().water_cum_stb > 0.0);
        }
        assert!(!f.doubts.iter().any(|d| d.seen.contains("of water, but only")), "at {part}");
    }
}

#[test]
fn a_front_that_ends_a_well_dates_both_and_tells_the_rate_before() {
    let mut spec = flooded(0.8);
    spec.wells[0].tubing.survey = vec![(0.0, 0.0), (6500.0, 6500.0)];
    spec.tank.water.contacted_fraction = 0.4;
    let f = checked(&spec);
    let end = f.wells[0].natural_flow_end.unwrap();
    assert_eq!(end.reason, StopReason::NoCrossing);
    assert_eq!(breakthrough(&f, "OP-1"), Some(end.days));
    assert!(end.liquid_rate_stb_d > 300.0, "{end:?}");
    assert_eq!(end.oil_rate_stb_d, end.liquid_rate_stb_d, "the last rate is the dry one");
    assert!(end.flow_margin_psi < 0.0, "the front leaves no margin");
}

#[test]
fn tolerances_agree_on_a_flood() {
    // Wells that the front kills, one that outlives it, and one that lives on for a while.
    for (part, contacted, depth_ft) in [(0.8, 0.4, 6500.0), (1.0, 0.6, 6500.0), (0.5, 0.3, 6500.0), (0.7, 0.3, 5000.0)]
    {
        let mut spec = flooded(part);
        spec.wells[0].tubing.survey = vec![(0.0, 0.0), (depth_ft, depth_ft)];
        spec.tank.water.contacted_fraction = contacted;
        let runs: Vec<Forecast> = [Tolerance::Normal, Tolerance::Tight, Tolerance::Reference]
            .into_iter()
            .map(|tolerance| checked(&FieldSpec { tolerance, ..spec.clone() }))
            .collect();
        let oil = |f: &Forecast| f.tank.last().unwrap().oil_cum_stb;
        let day = |f: &Forecast| breakthrough(f, "OP-1").unwrap();
        let end = |f: &Forecast| f.wells[0].natural_flow_end.map_or(f.end_days, |e| e.days);
        println!(
            "{part}: breakthrough {:.4} {:.4} {:.4}, end {:.4} {:.4} {:.4}, {:?}",
            day(&runs[0]),
            day(&runs[1]),
            day(&runs[2]),
            end(&runs[0]),
            end(&runs[1]),
            end(&runs[2]),
            runs[0].work
        );
        near(oil(&runs[0]), oil(&runs[1]), 1e-4, "oil");
        assert!((day(&runs[0]) - day(&runs[1])).abs() <= 0.5 && (day(&runs[1]) - day(&runs[2])).abs() <= 0.1);
        assert!((end(&runs[0]) - end(&runs[1])).abs() <= 0.5 && (end(&runs[1]) - end(&runs[2])).abs() <= 0.1);
    }
}

#[test]
fn wells_see_the_front_by_their_delays() {
    let pair = |delays: [f64; 2]| {
        let mut spec = flooded(1.0);
        spec.tank.oil_in_place_stb *= 2.0;
        spec.wells.push(WellSpec { name: "OP-2".to_owned(), ..spec.wells[0].clone() });
        for (well, delay) in spec.wells.iter_mut().zip(delays) {
            well.makes.breakthrough_delay = delay;
        }
        checked(&spec)
    };
    let one = breakthrough(&checked(&flooded(1.0)), "OP-1").unwrap();
    let alike = pair([1.0, 1.0]);
    for name in ["OP-1", "OP-2"] {
        near(breakthrough(&alike, name).unwrap(), one, 1e-7, "two equal wells on twice the tank");
    }
    let apart = pair([0.7, 1.2]);
    // Before any water comes out the volumes are the same: the first comes after 0.7 of the time.
    near(breakthrough(&apart, "OP-1").unwrap(), 0.7 * one, 1e-6, "the nearer well");
    let late = breakthrough(&apart, "OP-2").unwrap();
    assert!(late > 1.2 * one, "the nearer well takes water away from the farther one: {late}");
}

#[test]
fn a_trend_gives_the_water_cut_of_its_table() {
    let table = |ratio: bool, over, points: Vec<(f64, f64)>| WaterTrend {
        over,
        water_oil_ratio: ratio,
        curve: Trend::new(points).unwrap(),
    };
    let cases = [
        table(false, TrendOver::Oil, vec![(2e5, 0.0), (6e5, 0.3), (9e5, 0.6)]),
        table(true, TrendOver::Oil, vec![(2e5, 0.0), (6e5, 0.4), (9e5, 1.5)]),
        table(false, TrendOver::PoreVolumes, vec![(0.05, 0.0), (0.15, 0.4), (0.3, 0.7)]),
    ];
    for trend in cases {
        let mut spec = flooded(1.0);
        spec.tank.water_model = WaterModel::Trend;
        spec.tank.water.trend = Some(trend.clone());
        let f = checked(&spec);
        let field = Field::new(&spec).unwrap();
        let (fluid, p) = (field.tank().fluid(), spec.tank.pressure_psia);
        let pore_rb = 3e6 * fluid.bo(p, spec.fluid.solution_gor_scf_stb) / (1.0 - spec.tank.connate_water);
        let place = |i: usize| match trend.over {
            TrendOver::Oil => f.tank[i].oil_cum_stb,
            TrendOver::PoreVolumes => f.injectors[0].rows[i].water_cum_stb * fluid.bw(p) / pore_rb,
        };
        for (i, row) in f.wells[0].rows.iter().enumerate() {
            let value = trend.curve.at(place(i));
            let cut = if trend.water_oil_ratio { value / (1.0 + value) } else { value };
            assert!((row.water_cut.unwrap() - cut).abs() < 1e-6, "month {i}: {:?} {cut}", row.water_cut);
        }
        let day = breakthrough(&f, "OP-1").unwrap();
        for (period, row) in f.periods.iter().zip(&f.wells[0].rows) {
            assert!(period.run_days > day || row.water_cum_stb == 0.0, "{} STB of water", row.water_cum_stb);
            assert!(period.run_days < day + 31.0 || row.water_cum_stb > 1.0, "{} STB of water", row.water_cum_stb);
        }
    }
}

#[test]
fn measured_trends_of_a_well_hold_for_it_alone_and_the_tank_still_closes() {
    let mut spec = flooded(1.0);
    spec.tank.oil_in_place_stb *= 2.0;
    spec.wells.push(WellSpec { name: "OP-2".to_owned(), ..spec.wells[0].clone() });
    let cut = Trend::new(vec![(0.0, 0.05), (3e5, 0.2), (8e5, 0.5)]).unwrap();
    let gor = Trend::new(vec![(0.0, 640.0), (4e5, 700.0)]).unwrap();
    spec.wells[1].makes.water_cut = Some(cut.clone());
    spec.wells[1].makes.gor = Some(gor.clone());
    let f = checked(&spec);
    for (own, other) in f.wells[1].rows.iter().zip(&f.wells[0].rows) {
        assert!((own.water_cut.unwrap() - cut.at(own.oil_cum_stb)).abs() < 1e-9);
        near(own.gor_scf_stb.unwrap(), gor.at(own.oil_cum_stb), 1e-9, "gas-oil ratio");
        // The other well makes the tank's gas, of which the first takes more than its share.
        assert!((500.0..=620.0 + 1e-6).contains(&other.gor_scf_stb.unwrap()), "{:?}", other.gor_scf_stb);
    }
    assert_eq!(f.wells[0].rows[0].water_cut, Some(0.0));
}

/// A constant rate q that arrives with a first-order lag T has brought q*(t - T*(1 - exp(-t/T))) after t.
#[test]
fn an_injectors_response_lags_by_its_mean_time() {
    for lag_days in [20.0, 200.0] {
        let mut spec = flooded(0.0);
        spec.tank.water_model = WaterModel::Connate;
        spec.tank.oil_in_place_stb = 40e6;
        spec.injectors[0].control = InjectionControl::Rate(500.0);
        spec.injectors[0].response_days = lag_days;
        spec.injectors[0].effective_fraction = 0.9;
        let f = checked(&spec);
        let field = Field::new(&spec).unwrap();
        let fluid = field.tank().fluid();
        let rs = spec.fluid.solution_gor_scf_stb;
        for i in [0, 5, 23] {
            let (t, days) = (&f.tank[i], f.periods[i].run_days);
            near(f.injectors[0].rows[i].water_cum_stb, 500.0 * days, 1e-7, "injected at the surface");
            // Above the bubble point all gas is dissolved: the withdrawal is Np*Bo.
            let withdrawn = t.oil_cum_stb * fluid.bo(t.pressure_psia, rs);
            let arrived = t.drive_indices.unwrap().injection * withdrawn / fluid.bw(t.pressure_psia);
            let expected = 0.9 * 500.0 * (days + lag_days * (-days / lag_days).exp_m1());
            near(arrived, expected, 1e-5, "arrived");
        }
    }
}

#[test]
fn changing_the_water_model_on_a_date_starts_the_flood_there() {
    let mut spec = flooded(1.0);
    spec.tank.water_model = WaterModel::Connate;
    spec.tank.water.contacted_fraction = 0.2;
    let mut tank = spec.tank.clone();
    tank.water_model = WaterModel::Displacement;
    spec.changes.push(ChangeSpec {
        on: date(2030, 1, 1),
        name: "tank".to_owned(),
        text: "water.model".to_owned(),
        change: Change::Tank(Box::new(tank)),
    });
    let f = checked(&spec);
    let day = breakthrough(&f, "OP-1").unwrap();
    // By then more water is in than the contacted volume takes: the front is there at once.
    assert_eq!(day, 1096.0);
    assert!(f.wells[0].rows[35].water_cut.unwrap() < 1e-12 && f.wells[0].rows[36].water_cut.unwrap() > 0.5);
}

#[test]
fn a_table_that_asks_for_water_that_is_not_there_is_doubted() {
    let mut spec = flooded(0.0);
    spec.wells[0].makes.water_cut = Some(Trend::new(vec![(0.0, 0.6)]).unwrap());
    let f = checked(&spec);
    assert!(f.doubts.iter().any(|d| d.kind == DoubtKind::Sanity && d.seen.contains("of water, but only 0 STB")));
}

/// Below the bubble point gas is trapped behind the front as it was: the oil zone has the gas and the oil that it has without a flood at the
/// same pressure, as far as connate water and rock do not move with pressure.
#[test]
fn gas_is_trapped_behind_the_front_and_the_oil_zone_keeps_its_saturations() {
    let mut spec = flooded(1.0);
    spec.tank.pressure_psia = 2650.0;
    spec.tank.connate_water = 0.0;
    spec.tank.pore_compressibility_1_psi = 0.0;
    let tank = Field::new(&spec).unwrap().tank().clone();
    let dry = Cumulatives { oil_stb: 2e5, gas_scf: 1.4e8, ..Cumulatives::default() };
    let before = tank.state_after(&dry, 2500.0).unwrap();
    assert!(before.gas_saturation > 0.03, "{before:?}");
    // Water takes the place of oil with its dissolved gas: the pressure stays.
    for water_rb in [1e4, 2e5, 6e5, 1.1e6] {
        let oil_stb = water_rb / before.bo_rb_stb;
        let flood = Cumulatives {
            oil_stb: dry.oil_stb + oil_stb,
            gas_scf: dry.gas_scf + oil_stb * before.rs_scf_stb,
            injected_water_stb: water_rb / before.bw_rb_stb,
            ..dry
        };
        let state = tank.state_after(&flood, before.pressure_psia).unwrap();
        near(state.pressure_psia, before.pressure_psia, 1e-9, "pressure");
        near(state.gas_saturation, before.gas_saturation, 1e-9, "gas");
        near(state.oil_saturation, before.oil_saturation, 1e-9, "oil");
        near(state.free_gor_scf_stb, before.free_gor_scf_stb, 1e-6, "free gas");
    }
}

/// The swept zone holds its residual oil, the oil zone keeps connate water: their volumes add up to the tank's.
#[test]
fn swept_and_unswept_rock_share_the_oil() {
    let spec = flooded(1.0);
    let field = Field::new(&spec).unwrap();
    let tank = field.tank();
    let (fluid, p) = (tank.fluid(), spec.tank.pressure_psia);
    let (bo, bw) = (fluid.bo(p, spec.fluid.solution_gor_scf_stb), fluid.bw(p));
    let kr = spec.tank.relative_permeability;
    let rock = RelativePermeability::corey(&kr, spec.tank.connate_water);
    let front = rock.displacement(fluid.mu_o(p, spec.fluid.solution_gor_scf_stb), fluid.mu_w(p)).unwrap().front();
    let movable = 1.0 - spec.tank.connate_water - kr.residual_oil_to_water;
    let pore_rb = spec.tank.oil_in_place_stb * bo / (1.0 - spec.tank.connate_water);
    let contacted_rb = spec.tank.water.contacted_fraction * pore_rb;
    for part in [0.2, 0.5, 0.9, 1.1, 1.3] {
        let water_rb = part * front.movable_volumes * movable * contacted_rb;
        let oil_stb = water_rb / bo;
        let taken = Cumulatives {
            oil_stb,
            gas_scf: oil_stb * spec.fluid.solution_gor_scf_stb,
            injected_water_stb: water_rb / bw,
            ..Cumulatives::default()
        };
        let state = tank.state_after(&taken, p).unwrap();
        near(state.pressure_psia, p, 1e-9, "pressure");
        // The swept oil left and water entered where the front went: the rest is as at first.
        near(state.oil_saturation, 1.0 - spec.tank.connate_water, 1e-9, "oil zone");
        near(state.oil_mobility_1_cp, field.start().oil_mobility_1_cp, 1e-9, "mobility");
        assert_eq!(state.water_oil_ratio > 0.0, part > 1.0, "water at {part}");
    }
}

#[test]
fn trends_go_through_their_points_and_never_turn_between_them() {
    let points = vec![(0.0, 0.0), (1.0, 0.0), (2.0, 0.1), (2.5, 0.7), (6.0, 0.75), (7.0, 0.75)];
    let trend = Trend::new(points.clone()).unwrap();
    for (x, y) in &points {
        assert!((trend.at(*x) - y).abs() < 1e-15);
    }
    assert_eq!((trend.at(-5.0), trend.at(70.0)), (0.0, 0.75));
    let mut last = 0.0;
    for k in 0..=7000 {
        let y = trend.at(f64::from(k) / 1000.0);
        assert!(y >= last - 1e-15 && y <= 0.75 + 1e-15);
        last = y;
    }
    assert_eq!(trend.leaves_zero(), 1.0);
    assert!(Trend::new(vec![(1.0, 0.0), (1.0, 0.2)]).is_err());
}

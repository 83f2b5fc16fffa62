//! A well, prepared: its tubing, its inflow fitted to the tests, and how both look at one instant.

use super::fit::{bubble_point_then, fit_inflow, reference_mobility};
use super::meeting::{Landscape, survey_above};
use super::{Line, WellSpec};
use crate::fault::Fault;
use crate::fluid::BlackOil;
use crate::inflow::{
    Coefficient, Conditions, Fit, Inflow, InflowCurve, InflowTest, Measured, ProductivityLoss, TestPoint, drainage_term,
};
use crate::tank::{Tank, TankState};
use crate::tubing::{Choke, ChokeFlow, Stream, Traverse, TraversePoint, Tubing, TubingMethod};
use jiff::civil::Date;
use std::cell::Cell;

/// A measured test beside the model's rate at the same conditions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TestCheck {
    /// Date of the test.
    pub on: Option<Date>,
    /// Reservoir pressure at the perforations, psia.
    pub reservoir_psia: f64,
    /// Flowing pressure: measured, or computed with the well's own tubing, psia.
    pub flowing_psia: f64,
    /// Whether the flowing pressure was computed.
    pub computed: bool,
    /// Measured liquid rate, STB/d.
    pub rate_stb_d: f64,
    /// The model's liquid rate, STB/d.
    pub model_rate_stb_d: f64,
}

/// A well, prepared.
#[derive(Debug, Clone)]
pub struct WellModel {
    /// As the user stated it.
    pub spec: WellSpec,
    /// Its tubing.
    pub tubing: Tubing,
    /// The choke at its wellhead.
    pub choke: Option<Choke>,
    /// Its inflow.
    pub inflow: Inflow,
    /// How the coefficient was fitted, when it was.
    pub fit: Option<Fit>,
    /// Its tests beside the model's rates.
    pub tests: Vec<TestCheck>,
    skin_factor: f64,
    loss: ProductivityLoss,
    depth_below_datum_ft: f64,
}

/// What a well needs to know of the tank to be prepared.
#[derive(Debug, Clone, Copy)]
pub struct Surroundings<'a> {
    /// Fluid.
    pub fluid: &'a BlackOil,
    /// Tank.
    pub tank: &'a Tank,
    /// Tank temperature, degF.
    pub temperature_degf: f64,
    /// Datum of the tank's pressure, ft true vertical depth.
    pub datum_tvd_ft: Option<f64>,
    /// The tank at the start of the forecast.
    pub start: &'a TankState,
    /// Accuracy of the tubing's pressure, psi.
    pub accuracy_psi: f64,
    /// First day of the forecast.
    pub first_day: Date,
}

/// Pressure gradient of the reservoir's oil, psi/ft.
pub fn oil_gradient_psi_ft(fluid: &BlackOil, pressure_psia: f64, temperature_degf: f64, rs_scf_stb: f64) -> f64 {
    fluid.in_situ(pressure_psia, temperature_degf, rs_scf_stb).oil_density_lb_ft3 / 144.0
}

impl WellModel {
    /// Prepares the tubing and fits the inflow.
    ///
    /// # Errors
    /// Faults with keys of the `[[well]]` table.
    pub fn new(spec: &WellSpec, around: &Surroundings) -> Result<Self, Vec<Fault>> {
        let (tubing, depth_below_datum_ft) = completion(spec, around)?;
        let (inflow, fit, points) = fit_inflow(spec, &tubing, depth_below_datum_ft, around)?;
        let mut well = Self {
            spec: spec.clone(),
            choke: choke(spec, &tubing, around),
            tubing,
            inflow,
            fit,
            tests: Vec::new(),
            skin_factor: 1.0,
            loss: ProductivityLoss::new(spec.loss.yearly, days_to(around.first_day, spec.loss.since.or(spec.start))),
            depth_below_datum_ft,
        };
        well.tests = well.check_tests(&points, around);
        well.skin_factor = skin_factor(spec);
        Ok(well)
    }

    /// The same well under new settings from a day on. Tests are fitted again only where the settings of the inflow changed, so that an
    /// event that swaps the tubing does not reinterpret old separator tests. A new skin, a new coefficient, or a new day
    /// from which the loss of productivity counts is a stimulation that brings back what was lost.
    ///
    /// # Errors
    /// As [`new`](Self::new).
    pub fn changed(&self, spec: &WellSpec, on: Date, around: &Surroundings) -> Result<Self, Vec<Fault>> {
        let on_days = days_to(around.first_day, Some(on)).max(0.0);
        let (old, new) = (&self.spec, spec);
        let loss = if new.loss.since != old.loss.since {
            ProductivityLoss::new(new.loss.yearly, days_to(around.first_day, new.loss.since))
        } else if new.skin != old.skin || new.inflow.coefficient != old.inflow.coefficient {
            ProductivityLoss::new(new.loss.yearly, on_days)
        } else if new.loss.yearly != old.loss.yearly {
            self.loss.at_rate(new.loss.yearly, on_days)
        } else {
            self.loss
        };
        if spec.inflow != self.spec.inflow {
            return Ok(Self { loss, ..Self::new(spec, around)? });
        }
        let (tubing, depth_below_datum_ft) = completion(spec, around)?;
        let choke = choke(spec, &tubing, around);
        Ok(Self {
            spec: spec.clone(),
            tubing,
            choke,
            depth_below_datum_ft,
            skin_factor: skin_factor(spec),
            loss,
            ..self.clone()
        })
    }

    fn check_tests(&self, points: &[TestPoint], around: &Surroundings) -> Vec<TestCheck> {
        let Coefficient::Tests(tests) = &self.spec.inflow.coefficient else { return Vec::new() };
        tests.iter().zip(points).map(|(test, point)| self.check_test(test, point.flowing_psia, around)).collect()
    }

    /// A test, whose flowing pressure is given or computed, beside the model's rate at the same conditions.
    pub fn check_test(&self, test: &InflowTest, flowing_psia: f64, around: &Surroundings) -> TestCheck {
        let rs = around.fluid.spec().solution_gor_scf_stb;
        let gradient = oil_gradient_psi_ft(around.fluid, test.reservoir_psia, around.temperature_degf, rs);
        let then = Conditions {
            reservoir_psia: test.reservoir_psia + self.depth_below_datum_ft * gradient,
            bubble_point_psia: bubble_point_then(test.reservoir_psia, around),
            oil_mobility_1_cp: reference_mobility(test.reservoir_psia, around),
            water_cut: test.water_cut,
        };
        TestCheck {
            on: test.on,
            reservoir_psia: then.reservoir_psia,
            flowing_psia,
            computed: matches!(test.measured, Measured::Separator { .. }),
            rate_stb_d: test.rate_stb_d,
            model_rate_stb_d: self.inflow.curve(&then, 1.0).rate_stb_d(flowing_psia),
        }
    }

    /// The same well with the productivity of an instant for ever.
    pub fn frozen(self, days: f64) -> Self {
        Self { loss: self.loss.frozen(days), ..self }
    }

    /// Part of the productivity that scale and fines have left since the last stimulation.
    pub fn productivity_left(&self, days: f64) -> f64 {
        self.loss.left(days)
    }

    /// The well as it faces the tank's present state, `days` after the start of the forecast. `gradient_psi_ft` is the reservoir oil's.
    pub fn now<'a>(
        &'a self,
        fluid: &'a BlackOil,
        tank: &TankState,
        days: f64,
        gradient_psi_ft: f64,
        gauge: &'a Gauge,
    ) -> WellNow<'a> {
        let gor = tank.rs_scf_stb + tank.free_gor_scf_stb * self.spec.gor_factor;
        let wor = tank.water_oil_ratio * self.spec.water_factor;
        let water_cut = wor / (1.0 + wor);
        let conditions = Conditions {
            reservoir_psia: tank.pressure_psia + gradient_psi_ft * self.depth_below_datum_ft,
            bubble_point_psia: tank.bubble_point_psia,
            oil_mobility_1_cp: tank.oil_mobility_1_cp,
            water_cut,
        };
        let curve = self.inflow.curve(&conditions, self.skin_factor * self.loss.left(days));
        let line = Line::Fixed(self.spec.line_pressure_psia);
        WellNow { well: self, fluid, curve, gor_scf_stb: gor, water_cut, line, gauge }
    }
}

/// The tubing and the depth of the perforations below the datum, ft.
fn completion(spec: &WellSpec, around: &Surroundings) -> Result<(Tubing, f64), Vec<Fault>> {
    let tubing = Tubing::new(&spec.tubing, spec.perforations_md_ft, around.temperature_degf, around.accuracy_psi)
        .map_err(|faults| {
            faults.into_iter().map(|f| if f.key == "perforations" { f } else { f.under("tubing") }).collect::<Vec<_>>()
        })?;
    let depth_below_datum_ft = around.datum_tvd_ft.map_or(0.0, |datum| tubing.perforations_tvd_ft() - datum);
    Ok((tubing, depth_below_datum_ft))
}

fn choke(spec: &WellSpec, tubing: &Tubing, around: &Surroundings) -> Option<Choke> {
    let temperature = |stream: &Stream| tubing.wellhead_temperature_degf(around.fluid, stream);
    spec.choke.as_ref().map(|choke| Choke::new(choke, around.fluid, temperature))
}

/// Whole days to a date; zero without one.
fn days_to(first_day: Date, date: Option<Date>) -> f64 {
    date.and_then(|date| first_day.until((jiff::Unit::Day, date)).ok()).map_or(0.0, |span| f64::from(span.get_days()))
}

/// `(r + s_test)/(r + s)`: pseudo-steady radial flow with and without the present skin.
fn skin_factor(spec: &WellSpec) -> f64 {
    let r = drainage_term(spec.radii_ft, spec.shape_factor);
    (r + spec.skin_at_test) / (r + spec.skin)
}

/// Counts the traverses of a run.
#[derive(Debug, Default)]
pub struct Gauge {
    /// Traverses so far.
    pub traverses: Cell<u64>,
}

impl Gauge {
    fn count(&self) {
        self.traverses.set(self.traverses.get() + 1);
    }
}

/// A well facing the tank's present state.
#[derive(Debug, Clone, Copy)]
pub struct WellNow<'a> {
    well: &'a WellModel,
    fluid: &'a BlackOil,
    /// Its inflow curve now.
    pub curve: InflowCurve,
    /// Its producing gas-oil ratio, scf/STB.
    pub gor_scf_stb: f64,
    /// Its water cut.
    pub water_cut: f64,
    line: Line<'a>,
    gauge: &'a Gauge,
}

impl<'a> WellNow<'a> {
    /// The same inflow and stream in another tubing.
    pub fn with_well(self, well: &'a WellModel) -> Self {
        Self { well, ..self }
    }

    /// The same well on a line of another pressure.
    pub fn against(self, line: Line<'a>) -> Self {
        Self { line, ..self }
    }

    /// The line it faces.
    pub fn line(&self) -> Line<'a> {
        self.line
    }

    /// Pressure of the line while the well makes a rate, psia.
    pub fn line_psia(&self, liquid_rate_stb_d: f64) -> f64 {
        self.line.pressure_psia(&self.stream(liquid_rate_stb_d))
    }

    /// What a choke does to a rate that flows through it into the line.
    pub fn through_choke(&self, choke: &Choke, liquid_rate_stb_d: f64) -> ChokeFlow {
        let stream = self.stream(liquid_rate_stb_d);
        choke.flow(self.fluid, &stream, self.line.pressure_psia(&stream), self.wellhead_temperature_degf(&stream))
    }

    /// The opening that holds the choke's stream back to a wellhead pressure, in.
    pub fn choke_size_for(&self, liquid_rate_stb_d: f64, wellhead_psia: f64) -> Option<f64> {
        let stream = self.stream(liquid_rate_stb_d);
        let (line, temperature) = (self.line.pressure_psia(&stream), self.wellhead_temperature_degf(&stream));
        self.well.choke.as_ref()?.size_for(self.fluid, &stream, wellhead_psia, line, temperature)
    }

    fn wellhead_temperature_degf(&self, stream: &Stream) -> f64 {
        self.well.tubing.wellhead_temperature_degf(self.fluid, stream)
    }

    /// Lowest pressure at the wellhead that passes a stream into the line: the line's, or what the choke asks for, psia.
    fn back_pressure_psia(&self, stream: &Stream) -> f64 {
        let line_psia = self.line.pressure_psia(stream);
        match &self.well.choke {
            None => line_psia,
            Some(choke) => {
                choke.flow(self.fluid, stream, line_psia, self.wellhead_temperature_degf(stream)).upstream_psia
            }
        }
    }

    /// The same at a rate, psia.
    pub fn open_wellhead_psia(&self, liquid_rate_stb_d: f64) -> f64 {
        self.back_pressure_psia(&self.stream(liquid_rate_stb_d))
    }

    /// The tubing's method.
    pub fn method(&self) -> TubingMethod {
        self.well.tubing.method()
    }

    /// The traverse at line pressure (through the choke, where there is one).
    pub fn profile(&self, liquid_rate_stb_d: f64) -> Vec<TraversePoint> {
        let stream = self.stream(liquid_rate_stb_d);
        self.well.tubing.profile(self.fluid, &stream, self.back_pressure_psia(&stream))
    }

    /// The stream at a liquid rate.
    pub fn stream(&self, liquid_rate_stb_d: f64) -> Stream {
        Stream { liquid_rate_stb_d, water_cut: self.water_cut, gor_scf_stb: self.gor_scf_stb }
    }

    /// The march down from line pressure (through the choke, where there is one).
    fn traverse(&self, stream: &Stream) -> Traverse {
        self.gauge.count();
        self.well.tubing.flowing_pressure(self.fluid, stream, self.back_pressure_psia(stream))
    }

    /// Flowing pressure that the tubing asks for at line pressure, psia.
    pub fn tubing_psia(&self, liquid_rate_stb_d: f64) -> f64 {
        self.traverse(&self.stream(liquid_rate_stb_d)).pressure_psia
    }

    /// Whether the flow at this rate and wellhead pressure comes near to sonic speed somewhere in the tubing.
    pub fn near_sonic(&self, liquid_rate_stb_d: f64, wellhead_psia: f64) -> bool {
        self.gauge.count();
        self.well.tubing.flowing_pressure(self.fluid, &self.stream(liquid_rate_stb_d), wellhead_psia).near_sonic
    }

    /// Pressure at the perforations under a full column of the well's own dead oil and water at line pressure, psia: what a shut-in
    /// well has to push out before it flows (the gas has left the column).
    pub fn dead_column_psia(&self) -> f64 {
        self.traverse(&Stream { liquid_rate_stb_d: 0.0, water_cut: self.water_cut, gor_scf_stb: 0.0 }).pressure_psia
    }

    /// Height of the inflow curve above the tubing curve at line pressure, psi.
    pub fn height_psi(&self, liquid_rate_stb_d: f64) -> f64 {
        self.curve.flowing_psia(liquid_rate_stb_d) - self.tubing_psia(liquid_rate_stb_d)
    }

    /// Slope of the height at a rate, psi per STB/d, by a central difference.
    pub fn height_slope(&self, liquid_rate_stb_d: f64) -> f64 {
        let nudge = 1e-4 * liquid_rate_stb_d;
        (self.height_psi(liquid_rate_stb_d + nudge) - self.height_psi(liquid_rate_stb_d - nudge)) / (2.0 * nudge)
    }

    /// The landscape of heights over all rates.
    pub fn survey(&self) -> Landscape {
        self.survey_above(0.0)
    }

    /// The same, where a hump counts as a place to flow only when it reaches above `least_psi`.
    pub fn survey_above(&self, least_psi: f64) -> Landscape {
        if self.curve.open_flow_stb_d() <= 0.0 {
            // No rate at all: the tubing asks for a pressure and the inflow offers none.
            let margin_psi = -self.tubing_psia(0.0);
            return Landscape {
                margin_psi,
                margin_rate_stb_d: 0.0,
                right_crossing_stb_d: None,
                top_rate_stb_d: 0.0,
                hump_stb_d: (0.0, 0.0),
            };
        }
        survey_above(|q| self.height_psi(q), self.curve.open_flow_stb_d(), least_psi)
    }

    /// Wellhead pressure of the choked well, psia; line pressure where the march up does not reach the surface.
    pub fn wellhead_psia(&self, liquid_rate_stb_d: f64, flowing_psia: f64) -> f64 {
        self.gauge.count();
        self.well
            .tubing
            .wellhead_pressure(self.fluid, &self.stream(liquid_rate_stb_d), flowing_psia)
            .unwrap_or_else(|| self.open_wellhead_psia(liquid_rate_stb_d))
    }
}

//! The pressure traverse of one well.

use super::ansari::Ansari;
use super::beggs_brill::BeggsBrill;
use super::drift_flux::DriftFlux;
use super::gray::Gray;
use super::hagedorn_brown::HagedornBrown;
use super::hasan_kabir::HasanKabir;
use super::heat::Warmth;
use super::march::{March, Progress};
use super::model::{Flow, Hydraulics, KINETIC_LIMIT};
use super::mukherjee_brill::MukherjeeBrill;
use super::no_slip::NoSlip;
use super::path::{Path, Stretch};
use super::range::RangeCheck;
use super::{OutsideRange, TubingMethod, TubingSpec};
use crate::fault::Fault;
use crate::fluid::BlackOil;

/// What flows, at stock-tank conditions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stream {
    /// Oil and water, STB/d.
    pub liquid_rate_stb_d: f64,
    /// Water's share of the liquid.
    pub water_cut: f64,
    /// Producing gas-oil ratio, scf per STB of oil.
    pub gor_scf_stb: f64,
}

/// Where a traverse arrives.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Traverse {
    /// Pressure at the perforations, psia.
    pub pressure_psia: f64,
    /// Whether the kinetic term met its limit on the way: the flow comes so near to sonic velocity that no model
    /// here describes it.
    pub near_sonic: bool,
    /// Whether the flow through a restriction is critical: it goes at the speed of sound there.
    pub choked: bool,
}

/// One point of a traverse.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TraversePoint {
    /// Measured depth, ft.
    pub md_ft: f64,
    /// True vertical depth, ft.
    pub tvd_ft: f64,
    /// Pressure, psia.
    pub pressure_psia: f64,
    /// Temperature, degF.
    pub temperature_degf: f64,
    /// Flow pattern in the model's own words; "liquid" where all gas is dissolved.
    pub pattern: &'static str,
    /// Liquid holdup.
    pub holdup: f64,
    /// Superficial velocity of liquid, ft/s.
    pub liquid_velocity_ft_s: f64,
    /// Superficial velocity of gas, ft/s.
    pub gas_velocity_ft_s: f64,
    /// Weight of the mixture along the pipe, psi/ft of pipe.
    pub gravity_psi_ft: f64,
    /// Friction, psi/ft of pipe.
    pub friction_psi_ft: f64,
}

/// The tubing of one well, checked and prepared.
#[derive(Debug, Clone, PartialEq)]
pub struct Tubing {
    path: Path,
    method: TubingMethod,
    slip_factor: f64,
    accuracy_psi: f64,
}

/// Calls `$body` with `$model` bound to the model of a method.
macro_rules! with_model {
    ($method:expr, $model:ident => $body:expr) => {
        match $method {
            TubingMethod::HasanKabir => {
                let $model = &HasanKabir;
                $body
            }
            TubingMethod::HagedornBrown => {
                let $model = &HagedornBrown;
                $body
            }
            TubingMethod::BeggsBrill => {
                let $model = &BeggsBrill { payne: true };
                $body
            }
            TubingMethod::DriftFlux => {
                let $model = &DriftFlux;
                $body
            }
            TubingMethod::Ansari => {
                let $model = &Ansari;
                $body
            }
            TubingMethod::MukherjeeBrill => {
                let $model = &MukherjeeBrill;
                $body
            }
            TubingMethod::Gray => {
                let $model = &Gray;
                $body
            }
            TubingMethod::NoSlip => {
                let $model = &NoSlip;
                $body
            }
        }
    };
}

/// Points of a check of ranges, besides the ends of stretches.
const CHECK_INTERVALS: u32 = 12;
/// Points of a profile between wellhead and perforations, besides the ends of stretches.
const PROFILE_INTERVALS: u32 = 60;

impl Tubing {
    /// Checks the tubing and prepares the path down to the perforations (by default the end of the survey), where the
    /// temperature reaches `bottom_temperature_degf`. `accuracy_psi` is the error allowed in a computed pressure.
    ///
    /// # Errors
    /// Every impossible value, keyed relative to `[well.tubing]`, except `perforations`, which is the well's.
    pub fn new(
        spec: &TubingSpec,
        perforations_md_ft: Option<f64>,
        bottom_temperature_degf: f64,
        accuracy_psi: f64,
    ) -> Result<Self, Vec<Fault>> {
        let path = Path::new(spec, perforations_md_ft, bottom_temperature_degf)?;
        Ok(Self {
            path,
            method: spec.method,
            slip_factor: spec.slip_factor,
            accuracy_psi: if accuracy_psi > 1e-9 { accuracy_psi.min(1.0) } else { 1e-9 },
        })
    }

    /// Pressure at the perforations that lifts the stream to a wellhead pressure: the march down. Always finite; a
    /// rate of zero gives the column at rest.
    pub fn flowing_pressure(&self, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> Traverse {
        with_model!(self.method, model => self.down(model, fluid, stream, wellhead_psia))
    }

    /// Wellhead pressure that a flowing pressure leaves: the march up. `None` when it cannot reach the surface.
    pub fn wellhead_pressure(&self, fluid: &BlackOil, stream: &Stream, flowing_psia: f64) -> Option<f64> {
        with_model!(self.method, model => self.up(model, fluid, stream, flowing_psia))
    }

    /// The traverse in detail, from the wellhead down.
    pub fn profile(&self, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> Vec<TraversePoint> {
        with_model!(self.method, model => self.points(model, fluid, stream, wellhead_psia))
    }

    /// Pressures at measured depths, psia; depths rise and none lies below the perforations.
    pub fn pressures_at(
        &self,
        fluid: &BlackOil,
        stream: &Stream,
        wellhead_psia: f64,
        depths_md_ft: impl IntoIterator<Item = f64>,
    ) -> Vec<f64> {
        with_model!(self.method, model => {
            let march = self.march(model, fluid, stream);
            let mut progress = Progress::new(0.0, held(wellhead_psia));
            let mut stretches = self.path.stretches.iter().peekable();
            depths_md_ft
                .into_iter()
                .map(|depth_md_ft| {
                    while let Some(stretch) = stretches.peek() {
                        let end_md_ft = depth_md_ft.min(stretch.bottom_md_ft);
                        if end_md_ft > progress.md_ft {
                            march.advance(stretch, &mut progress, end_md_ft);
                        }
                        if depth_md_ft <= stretch.bottom_md_ft {
                            break;
                        }
                        stretches.next();
                    }
                    progress.pressure_psia
                })
                .collect()
        })
    }

    /// Vertical depth and temperature, ft and degF, at a measured depth.
    pub fn place(&self, md_ft: f64) -> (f64, f64) {
        let stretches = &self.path.stretches;
        let stretch = stretches.iter().find(|s| md_ft <= s.bottom_md_ft).or(stretches.last());
        stretch.map_or((f64::NAN, f64::NAN), |s| (s.tvd_ft(md_ft), s.temperature_degf(md_ft)))
    }

    /// The flow as it enters the wellhead.
    pub fn flow_at_wellhead(&self, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> Option<Flow> {
        let top = self.path.stretches.first()?;
        Some(
            with_model!(self.method, model => self.march(model, fluid, stream).describe(top, 0.0, held(wellhead_psia)).0),
        )
    }

    /// Steps that [`flowing_pressure`](Self::flowing_pressure) takes: a measure of its work.
    pub fn steps(&self, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> u32 {
        with_model!(self.method, model => self.march_down(model, fluid, stream, wellhead_psia).steps)
    }

    /// Temperature of the stream at the wellhead, degF.
    pub fn wellhead_temperature_degf(&self, fluid: &BlackOil, stream: &Stream) -> f64 {
        self.temperature_degf(fluid, stream, 0.0)
    }

    /// Temperature of the stream at a measured depth, degF; beyond the ends of the path that of the end.
    pub fn temperature_degf(&self, fluid: &BlackOil, stream: &Stream, md_ft: f64) -> f64 {
        let stretches = &self.path.stretches;
        let i = stretches
            .iter()
            .position(|stretch| md_ft <= stretch.bottom_md_ft)
            .unwrap_or(stretches.len().saturating_sub(1));
        let Some(stretch) = stretches.get(i) else { return f64::NAN };
        let warmed = Warmth::new(&self.path, fluid, stream).of(i, stretch);
        let md_ft = md_ft.clamp(0.0, self.path.perforations_md_ft);
        warmed.as_ref().unwrap_or(stretch).temperature_degf(md_ft)
    }

    /// Measured depth of the perforations, ft.
    pub fn perforations_md_ft(&self) -> f64 {
        self.path.perforations_md_ft
    }

    /// Vertical depth of the perforations, ft.
    pub fn perforations_tvd_ft(&self) -> f64 {
        self.path.perforations_tvd_ft
    }

    /// The hydraulics model.
    pub fn method(&self) -> TubingMethod {
        self.method
    }

    /// The same tubing with another hydraulics model.
    #[must_use]
    pub fn with_method(&self, method: TubingMethod) -> Self {
        Self { method, ..self.clone() }
    }

    /// The same tubing with another slip factor, held within 0 to 10.
    #[must_use]
    pub fn with_slip_factor(&self, slip_factor: f64) -> Self {
        let slip_factor = if slip_factor > 0.0 { slip_factor.min(10.0) } else { 0.0 };
        Self { slip_factor, ..self.clone() }
    }

    /// What leaves the range that the model states, somewhere along the traverse.
    pub fn outside_range(&self, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> Vec<OutsideRange> {
        with_model!(self.method, model => {
            let mut check = RangeCheck::new(model.range(), stream);
            self.walk(model, fluid, stream, wellhead_psia, CHECK_INTERVALS, |march, stretch, progress| {
                let (flow, gradient, _) = march.describe(stretch, progress.md_ft, progress.pressure_psia);
                check.point(&flow, &stretch.pipe, &gradient);
            });
            check.found()
        })
    }

    /// Whether a model belongs among those whose spread says how sure a forecast is: no-slip never, Gray only on wells
    /// within the range that it states, the others always.
    pub fn applicable(&self, method: TubingMethod, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> bool {
        match method {
            TubingMethod::NoSlip => false,
            // The ratio alone rules most wells out, without a traverse.
            TubingMethod::Gray if !RangeCheck::new(Gray.range(), stream).found().is_empty() => false,
            TubingMethod::Gray => self.with_method(method).outside_range(fluid, stream, wellhead_psia).is_empty(),
            _ => true,
        }
    }

    fn march<'a, M: Hydraulics>(&self, model: &'a M, fluid: &'a BlackOil, stream: &Stream) -> March<'a, M> {
        March::new(model, fluid, stream, self.slip_factor, self.accuracy_psi)
    }

    fn down<M: Hydraulics>(&self, model: &M, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> Traverse {
        let end = self.march_down(model, fluid, stream, wellhead_psia);
        let near_sonic = end.kinetic > KINETIC_LIMIT || end.choked;
        Traverse { pressure_psia: end.pressure_psia, near_sonic, choked: end.choked }
    }

    fn march_down<M: Hydraulics>(&self, model: &M, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> Progress {
        let march = self.march(model, fluid, stream);
        let warmth = Warmth::new(&self.path, fluid, stream);
        let mut progress = Progress::new(0.0, held(wellhead_psia));
        for (i, stretch) in self.path.stretches.iter().enumerate() {
            let warmed = warmth.of(i, stretch);
            let stretch = warmed.as_ref().unwrap_or(stretch);
            march.advance(stretch, &mut progress, stretch.bottom_md_ft);
            progress.pass_down(&march, stretch);
        }
        progress
    }

    fn up<M: Hydraulics>(&self, model: &M, fluid: &BlackOil, stream: &Stream, flowing_psia: f64) -> Option<f64> {
        let march = self.march(model, fluid, stream);
        let mut progress = Progress::new(self.path.perforations_md_ft, held(flowing_psia));
        let warmth = Warmth::new(&self.path, fluid, stream);
        for (i, stretch) in self.path.stretches.iter().enumerate().rev() {
            let warmed = warmth.of(i, stretch);
            let stretch = warmed.as_ref().unwrap_or(stretch);
            if let Some(throat) = &stretch.throat {
                progress.pressure_psia = throat.up(&march, stretch, progress.md_ft, progress.pressure_psia)?;
            }
            if !march.advance(stretch, &mut progress, stretch.top_md_ft) {
                return None;
            }
        }
        Some(progress.pressure_psia)
    }

    fn points<M: Hydraulics>(
        &self,
        model: &M,
        fluid: &BlackOil,
        stream: &Stream,
        wellhead_psia: f64,
    ) -> Vec<TraversePoint> {
        let mut points = Vec::new();
        self.walk(model, fluid, stream, wellhead_psia, PROFILE_INTERVALS, |march, stretch, progress| {
            points.push(point(march, stretch, progress));
        });
        points
    }

    /// Marches down and visits the wellhead, the ends of stretches and points between.
    fn walk<M: Hydraulics>(
        &self,
        model: &M,
        fluid: &BlackOil,
        stream: &Stream,
        wellhead_psia: f64,
        intervals: u32,
        mut visit: impl FnMut(&March<'_, M>, &Stretch, &Progress),
    ) {
        let march = self.march(model, fluid, stream);
        let mut progress = Progress::new(0.0, held(wellhead_psia));
        let spacing_ft = self.path.perforations_md_ft / f64::from(intervals);
        let warmth = Warmth::new(&self.path, fluid, stream);
        for (i, stretch) in self.path.stretches.iter().enumerate() {
            let warmed = warmth.of(i, stretch);
            let stretch = warmed.as_ref().unwrap_or(stretch);
            if i == 0 {
                visit(&march, stretch, &progress);
            }
            let steps = ((stretch.bottom_md_ft - stretch.top_md_ft) / spacing_ft).ceil().max(1.0);
            for i in 1..=steps as u32 {
                let part = f64::from(i) / steps;
                let end_md_ft = if part >= 1.0 {
                    stretch.bottom_md_ft
                } else {
                    stretch.top_md_ft + part * (stretch.bottom_md_ft - stretch.top_md_ft)
                };
                march.advance(stretch, &mut progress, end_md_ft);
                visit(&march, stretch, &progress);
            }
            // Both sides of a restriction are points of their own.
            if progress.pass_down(&march, stretch) {
                visit(&march, stretch, &progress);
            }
        }
    }
}

/// A pressure within what the traverse can start from.
fn held(pressure_psia: f64) -> f64 {
    if pressure_psia > 1.0 { pressure_psia.min(1e6) } else { 1.0 }
}

fn point<M: Hydraulics>(march: &March<'_, M>, stretch: &Stretch, progress: &Progress) -> TraversePoint {
    let (flow, gradient, pattern) = march.describe(stretch, progress.md_ft, progress.pressure_psia);
    TraversePoint {
        md_ft: progress.md_ft,
        tvd_ft: stretch.tvd_ft(progress.md_ft),
        pressure_psia: progress.pressure_psia,
        temperature_degf: stretch.temperature_degf(progress.md_ft),
        pattern,
        holdup: gradient.holdup,
        liquid_velocity_ft_s: flow.liquid_velocity_ft_s,
        gas_velocity_ft_s: flow.gas_velocity_ft_s,
        gravity_psi_ft: gradient.gravity_psi_ft,
        friction_psi_ft: gradient.friction_psi_ft,
    }
}

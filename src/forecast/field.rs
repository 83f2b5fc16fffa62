//! A field, prepared to run: fluid, tank, wells, injectors.

use super::modes::Layout;
use super::{Change, ChangeSpec, FieldSpec, InjectedFluid, InjectorSpec, Tolerance};
use crate::fault::Fault;
use crate::fluid::BlackOil;
use crate::rock::RelativePermeability;
use crate::tank::{ClosureError, Cumulatives, Tank, TankSpec, TankState, WaterModel};
use crate::well::{LineSpec, Surroundings, WellModel};
use std::sync::Arc;

/// Why a forecast could not be run.
#[derive(Debug, Clone, thiserror::Error)]
pub enum RunError {
    /// The input cannot be: each fault with the key it belongs to.
    #[error("{}", list(.0))]
    Input(Vec<Fault>),
    /// The balance gave no pressure at the start.
    #[error("at the start of the forecast, {0}")]
    Start(ClosureError),
    /// The integrator gave up.
    #[error("the integration stopped {days:.2} days after the start: {reason}")]
    Integration {
        /// Days from the start.
        days: f64,
        /// What the integrator said.
        reason: String,
    },
    /// Too many switches at one instant.
    #[error("the wells switch back and forth {days:.2} days after the start: {what}")]
    Flicker {
        /// Days from the start.
        days: f64,
        /// The last switch.
        what: String,
    },
    /// More was injected than the tank can take.
    #[error("{days:.1} days after the start, {source}")]
    TooMuchInjected {
        /// Days from the start.
        days: f64,
        /// The closure's own words.
        source: ClosureError,
    },
}

fn list(faults: &[Fault]) -> String {
    faults.iter().map(ToString::to_string).collect::<Vec<_>>().join("\n")
}

/// What may change at a dated event.
#[derive(Debug, Clone)]
pub(super) struct Setup {
    pub wells: Vec<WellModel>,
    pub lines: Vec<LineSpec>,
    /// The shared line of each well.
    pub line_of: Vec<Option<usize>>,
    pub injectors: Vec<InjectorSpec>,
    pub tank: Tank,
}

/// A field, prepared to run.
#[derive(Debug, Clone)]
pub struct Field {
    pub(super) spec: FieldSpec,
    pub(super) fluid: BlackOil,
    pub(super) setup: Arc<Setup>,
    pub(super) start: TankState,
}

impl Field {
    /// Prepares fluid, tank, wells and injectors and solves the state at the start.
    ///
    /// # Errors
    /// [`RunError::Input`] with every fault found, keys as in the scenario file.
    pub fn new(spec: &FieldSpec) -> Result<Self, RunError> {
        let fluid = BlackOil::new(&spec.fluid, spec.tank.temperature_degf)
            .map_err(|f| RunError::Input(f.into_iter().map(fluid_key).collect()))?;
        let pb = fluid.initial_bubble_point_psia();
        let p_i = spec.tank.pressure_psia;
        // A hair of rounding between "bubble point" and "pressure" written alike in other units is no fault.
        if pb > p_i * (1.0 + 1e-6) {
            return Err(RunError::Input(vec![
                Fault::new("tank.pressure", format!("the initial pressure {p_i:.1} psia is below the bubble point {pb:.1} psia"))
                    .help("oil cannot hold that much gas at this pressure; state a measured bubble point, or less solution gas"),
            ]));
        }
        if spec.tank.gas_cap_ratio > 0.0 && pb < p_i * (1.0 - 1e-3) {
            return Err(RunError::Input(vec![
                Fault::new(
                    "tank.gas_cap_ratio",
                    format!("a gas cap needs the bubble point ({pb:.1} psia) at the initial pressure ({p_i:.1} psia)"),
                )
                .help("state bubble_point equal to the pressure at the gas-oil contact"),
            ]));
        }
        let rel_perm = RelativePermeability::corey(&spec.tank.relative_permeability, spec.tank.connate_water);
        let tank = Tank::new(&spec.tank, Arc::new(fluid.clone()), rel_perm, spec.fluid.solution_gor_scf_stb)
            .map_err(|f| RunError::Input(under(f, "tank")))?;
        let start = tank.state_after(&Cumulatives::default(), p_i).map_err(|error| match error {
            ClosureError::NoRoot { .. } | ClosureError::AboveRange { .. } if spec.tank.produced.is_some() => {
                RunError::Input(vec![Fault::new("tank.produced", format!("with these volumes {error}"))])
            }
            other => RunError::Start(other),
        })?;
        let mut faults = Vec::new();
        let mut wells = Vec::new();
        let around = surroundings(spec, &fluid, &tank, &start);
        for (i, well) in spec.wells.iter().enumerate() {
            match WellModel::new(well, &around) {
                Ok(model) => wells.push(model),
                Err(found) => faults.extend(under(found, &format!("well[{i}]"))),
            }
        }
        for (i, line) in spec.lines.iter().enumerate() {
            faults.extend(under(line.check(), &format!("line[{i}]")));
        }
        if !faults.is_empty() {
            return Err(RunError::Input(faults));
        }
        let line_of = line_of(&wells, &spec.lines).map_err(RunError::Input)?;
        let setup =
            Arc::new(Setup { wells, lines: spec.lines.clone(), line_of, injectors: spec.injectors.clone(), tank });
        Ok(Self { spec: spec.clone(), fluid, setup, start })
    }

    /// The tank's state at the start of the forecast.
    pub fn start(&self) -> &TankState {
        &self.start
    }

    /// The wells as they are at the start of the forecast.
    pub fn wells(&self) -> &[WellModel] {
        &self.setup.wells
    }

    /// The tank.
    pub fn tank(&self) -> &Tank {
        &self.setup.tank
    }

    /// What the wells are prepared against.
    pub fn surroundings(&self) -> Surroundings<'_> {
        surroundings(&self.spec, &self.fluid, &self.setup.tank, &self.start)
    }

    /// The fluid.
    pub fn fluid(&self) -> &BlackOil {
        &self.fluid
    }

    /// Faults of the settings that dated events bring, keys under `change[i]`.
    pub fn change_faults(&self) -> Vec<Fault> {
        let check = |(i, change): (usize, &ChangeSpec)| match self.changed(&self.setup, change) {
            Err(RunError::Input(faults)) => faults
                .into_iter()
                .map(|f| {
                    // The change holds the whole well: its path replaces that of the well.
                    let key = f.key.split_once("].").map_or(f.key.clone(), |(_, key)| key.to_owned());
                    Fault { key, ..f }.under(&format!("change[{i}]"))
                })
                .collect(),
            _ => Vec::new(),
        };
        self.spec.changes.iter().enumerate().flat_map(check).collect()
    }

    /// Where each quantity stands in the state vector. It holds for the whole run, so that all dated events count.
    pub(super) fn layout(&self) -> Layout {
        let spec = &self.spec;
        let tanks = spec.changes.iter().filter_map(|c| match &c.change {
            Change::Tank(tank) => Some(tank.as_ref()),
            _ => None,
        });
        let injectors = spec.changes.iter().filter_map(|c| match &c.change {
            Change::Injector(_, injector) => Some(injector),
            _ => None,
        });
        Layout {
            wells: spec.wells.len(),
            injectors: spec.injectors.len(),
            aquifer: self.tank().aquifer().is_some_and(|aquifer| !aquifer.is_pot()),
            cap_gas: spec.injectors.iter().chain(injectors.clone()).any(to_cap),
            flood: std::iter::once(&spec.tank).chain(tanks).any(|t| t.water_model == WaterModel::Displacement),
            transit: spec.injectors.iter().chain(injectors).any(|i| i.lags()),
        }
    }

    /// The setup after a dated event.
    pub(super) fn changed(&self, setup: &Setup, event: &ChangeSpec) -> Result<Setup, RunError> {
        let mut next = setup.clone();
        match &event.change {
            Change::Well(i, spec) => {
                let around = surroundings(&self.spec, &self.fluid, &self.setup.tank, &self.start);
                next.wells[*i] = setup.wells[*i]
                    .changed(spec, event.on, &around)
                    .map_err(|f| RunError::Input(under(f, &format!("well[{i}]"))))?;
                next.line_of = line_of(&next.wells, &next.lines).map_err(RunError::Input)?;
            }
            Change::Line(i, spec) => {
                let faults = spec.check();
                if !faults.is_empty() {
                    return Err(RunError::Input(under(faults, &format!("line[{i}]"))));
                }
                next.lines[*i] = spec.clone();
            }
            Change::Injector(i, spec) => next.injectors[*i] = spec.clone(),
            Change::Tank(spec) => next.tank.set_flow(flow(spec), spec.water_model, &spec.water),
        }
        Ok(next)
    }
}

/// The shared line of each well.
fn line_of(wells: &[WellModel], lines: &[LineSpec]) -> Result<Vec<Option<usize>>, Vec<Fault>> {
    let find = |(i, well): (usize, &WellModel)| match &well.spec.shared_line {
        None => Ok(None),
        Some(name) => lines
            .iter()
            .position(|line| line.name == *name)
            .map(Some)
            .ok_or_else(|| vec![Fault::new(format!("well[{i}].line"), format!("there is no line named `{name}`"))]),
    };
    wells.iter().enumerate().map(find).collect()
}

/// The key of the scenario file at which a fault of the fluid is mended.
fn fluid_key(fault: Fault) -> Fault {
    let table = match fault.key.as_str() {
        "temperature" => "tank",
        "standard_pressure" | "standard_temperature" => "standard",
        _ => "fluid",
    };
    let key = fault.key.trim_start_matches("standard_").to_owned();
    Fault { key, ..fault }.under(table)
}

fn flow(spec: &TankSpec) -> RelativePermeability {
    RelativePermeability::corey(&spec.relative_permeability, spec.connate_water)
}

fn surroundings<'a>(spec: &FieldSpec, fluid: &'a BlackOil, tank: &'a Tank, start: &'a TankState) -> Surroundings<'a> {
    Surroundings {
        fluid,
        tank,
        temperature_degf: spec.tank.temperature_degf,
        datum_tvd_ft: spec.tank.datum_tvd_ft,
        start,
        first_day: spec.period.start,
        accuracy_psi: match spec.tolerance {
            Tolerance::Normal => 0.02,
            Tolerance::Tight => 2e-4,
            Tolerance::Reference => 2e-6,
        },
    }
}

fn under(faults: Vec<Fault>, prefix: &str) -> Vec<Fault> {
    faults.into_iter().map(|f| f.under(prefix)).collect()
}

/// Rate limits of an injector at a tank pressure: the highest surface rate, STB/d or scf/d.
pub(super) fn injection_limit(injector: &InjectorSpec, tank_psia: f64) -> f64 {
    let pressure = match (injector.bottomhole_limit_psia, injector.injectivity) {
        (Some(limit), Some(injectivity)) => (injectivity * (limit - tank_psia)).max(0.0),
        _ => f64::INFINITY,
    };
    injector.rate_limit.unwrap_or(f64::INFINITY).min(pressure)
}

/// Whether what it injects goes to the gas cap.
pub(super) fn to_cap(injector: &InjectorSpec) -> bool {
    injector.to_gas_cap && injector.fluid == InjectedFluid::Gas
}

/// Reservoir volume of one surface unit, rb/STB or rb/scf.
pub(super) fn injected_fvf(fluid: InjectedFluid, state: &TankState) -> f64 {
    match fluid {
        InjectedFluid::Water => state.bw_rb_stb,
        InjectedFluid::Gas => state.bg_rb_scf,
    }
}

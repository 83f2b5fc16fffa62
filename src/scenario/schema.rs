//! Every key of the scenario file: what it holds, whether it must be there, what it may be.
//!
//! Reading, checking and the reference in `docs/scenario.md` all go by this one list.

use crate::units::{Dimension, units_of};

/// One key.
#[derive(Debug, Clone, PartialEq)]
pub struct Key {
    /// Dotted path; members of a list have no index ("well.inflow.test.rate").
    pub path: &'static str,
    /// What it holds.
    pub kind: Kind,
    /// Whether it must be there.
    pub need: Need,
    /// What it means, in few words.
    pub about: &'static str,
}

impl Key {
    /// The row of this key in `docs/scenario.md`.
    pub fn row(&self) -> String {
        let holds = match self.kind {
            Kind::Text => "text".to_owned(),
            Kind::Name => "name".to_owned(),
            Kind::Flag => "true or false".to_owned(),
            Kind::Day => "date".to_owned(),
            Kind::Choice(words) => words.join(", "),
            Kind::Number(limits) => format!("number, {}", limits.text("")),
            Kind::Fraction(limits) => format!("fraction, {}", limits.text("")),
            Kind::Quantity(dimension, limits) => {
                let unit = units_of(dimension).next().map_or("", |unit| unit.name);
                let what = dimension.with_article().trim_start_matches("an ").trim_start_matches("a ");
                format!("{what}, {}", limits.text(unit))
            }
            Kind::Injected(..) if self.path.ends_with("injectivity") => {
                "liquid (water) or gas rate per pressure".to_owned()
            }
            Kind::Injected(..) => "liquid rate (water) or gas rate (gas)".to_owned(),
            Kind::FlowCoefficient => "rate per pressure^2n".to_owned(),
            Kind::Survey => "list of pairs, or a path".to_owned(),
            Kind::Temperatures | Kind::LinePressures | Kind::Compaction | Kind::WaterTrend | Kind::WellTrend => {
                "list of pairs".to_owned()
            }
            Kind::Stations => "list of pairs or triples, or a path".to_owned(),
            Kind::Onset => "pressure, or list of pairs".to_owned(),
            Kind::Table => "table".to_owned(),
            Kind::Tables => "list of tables".to_owned(),
            Kind::Overrides => "paths with values".to_owned(),
        };
        let need = match self.need {
            Need::Required => "required".to_owned(),
            Need::Optional => "none".to_owned(),
            Need::Default(text) => format!("`{text}`"),
        };
        format!("| `{}` | {holds} | {need} | {} |", self.path, self.about)
    }
}

/// Whether a key must be there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Need {
    /// It must.
    Required,
    /// It need not; `about` says what then happens.
    Optional,
    /// It need not: this value, written as in a scenario, takes its place.
    Default(&'static str),
}

/// What a key holds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Kind {
    /// Any text.
    Text,
    /// A name: no dot, not empty, not "tank".
    Name,
    /// `true` or `false`.
    Flag,
    /// A date.
    Day,
    /// One of these words.
    Choice(&'static [&'static str]),
    /// A bare number.
    Number(Limits),
    /// A fraction: 0.22 or "22 %".
    Fraction(Limits),
    /// A number with its unit; limits are in the program's unit.
    Quantity(Dimension, Limits),
    /// As `Quantity`, of the first dimension for water and of the second for gas.
    Injected(Dimension, Dimension, Limits),
    /// Fetkovich's coefficient.
    FlowCoefficient,
    /// Pairs of measured and vertical depth, or the path of a file.
    Survey,
    /// Pairs of measured depth and temperature.
    Temperatures,
    /// Measured depth and pressure, perhaps temperature, or the path of a file.
    Stations,
    /// A pressure, or pairs of temperature and pressure.
    Onset,
    /// Pairs of a total rate and a pressure.
    LinePressures,
    /// Pairs of pressure and pore-volume multiplier.
    Compaction,
    /// Pairs of cumulative oil or injected pore volumes and water.
    WaterTrend,
    /// Pairs of a well's cumulative oil and what it makes.
    WellTrend,
    /// A table of further keys.
    Table,
    /// A list of tables of further keys.
    Tables,
    /// Overrides: paths and values.
    Overrides,
}

/// Between what a value must lie.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limits {
    /// Lowest.
    pub low: f64,
    /// Whether the lowest itself is allowed.
    pub low_allowed: bool,
    /// Highest, always allowed.
    pub high: f64,
}

impl Limits {
    /// In words: "above 0 and at most 30000 psia".
    pub fn text(&self, unit: &str) -> String {
        let show = |x: f64| if x == 0.0 || (1e-3..1e7).contains(&x.abs()) { format!("{x}") } else { format!("{x:e}") };
        let low = if self.low_allowed { "at least" } else { "above" };
        let unit = if unit.is_empty() { String::new() } else { format!(" {unit}") };
        format!("{low} {} and at most {}{unit}", show(self.low), show(self.high))
    }

    /// Whether the value is allowed; NaN never is.
    pub fn allow(&self, value: f64) -> bool {
        (value > self.low || (self.low_allowed && value == self.low)) && value <= self.high
    }
}

const fn above(low: f64, high: f64) -> Limits {
    Limits { low, low_allowed: false, high }
}

const fn from(low: f64, high: f64) -> Limits {
    Limits { low, low_allowed: true, high }
}

/// What comes with a later version: refused with that word, not as unknown.
pub const LATER: &[(&str, &str)] = &[("history", "measured history"), ("odds", "the uncertainty study")];

/// Tubing methods that come with a later version.
pub const LATER_TUBING_METHODS: &[&str] = &["orkiszewski", "poettmann-carpenter"];

/// Pressures inside the ground, psia.
const PRESSURE: Limits = above(0.0, 30_000.0);
/// Depths, ft.
const DEPTH: Limits = above(0.0, 50_000.0);
/// Liquid volumes, STB; gas volumes, scf. Ten times the largest fields on Earth.
const LIQUID: Limits = above(0.0, 1.0e12);
const LIQUID_OR_NONE: Limits = from(0.0, 1.0e12);
const GAS_OR_NONE: Limits = from(0.0, 1.0e16);
/// Liquid rates of one well, STB/d.
const RATE: Limits = above(0.0, 1.0e6);
/// Gas-oil ratios, scf/STB.
const GOR: Limits = above(0.0, 1.0e6);
const FRACTION: Limits = from(0.0, 1.0);
const DIAMETER: Limits = above(0.0, 30.0);
const ROUGHNESS: Limits = from(0.0, 0.5);
const SKIN: Limits = from(-20.0, 1000.0);
const EXPONENT: Limits = from(0.5, 10.0);
const END: Limits = above(0.0, 1.0);

use Dimension as D;
use Kind::{
    Choice, Compaction, Day, Flag, FlowCoefficient, Fraction, Injected, LinePressures, Name, Number, Onset, Overrides,
    Quantity, Stations, Survey, Tables, Temperatures, Text,
};
use Need::{Default, Optional, Required};

const fn key(path: &'static str, kind: Kind, need: Need, about: &'static str) -> Key {
    Key { path, kind, need, about }
}

/// All keys, in the order of the reference.
#[rustfmt::skip]
pub const KEYS: &[Key] = &[
    key("title", Text, Optional, "Shown on every result; otherwise the file's name"),
    key("units", Choice(&["field", "metric"]), Default("\"field\""), "In what results are written; inputs carry their own units"),
    key("atmospheric_pressure", Quantity(D::Pressure, above(5.0, 20.0)), Default("\"14.696 psia\""), "Turns gauge pressures into absolute ones; itself absolute"),

    key("standard", Kind::Table, Optional, "Standard conditions of all surface volumes"),
    key("standard.pressure", Quantity(D::Pressure, from(13.0, 16.0)), Default("\"14.696 psia\""), "Standard pressure"),
    key("standard.temperature", Quantity(D::Temperature, from(32.0, 80.0)), Default("\"60 degF\""), "Standard temperature"),

    key("period", Kind::Table, Required, "The calendar of the forecast"),
    key("period.start", Day, Required, "First day"),
    key("period.end", Day, Required, "The day after the last"),
    key("period.every", Choice(&["month", "quarter", "year"]), Default("\"month\""), "Reporting period"),

    key("fluid", Kind::Table, Required, "Oil, gas and water"),
    key("fluid.oil_gravity", Quantity(D::OilGravity, above(0.0, 100.0)), Required, "Stock-tank oil gravity"),
    key("fluid.gas_gravity", Number(from(0.5, 2.0)), Required, "Gas gravity, air = 1"),
    key("fluid.solution_gor", Quantity(D::GasOilRatio, above(0.0, 20_000.0)), Required, "Solution gas-oil ratio at and above the bubble point"),
    key("fluid.bubble_point", Quantity(D::Pressure, PRESSURE), Optional, "Measured, at tank temperature; the correlation is tuned through it. Without it the correlation's own serves"),
    key("fluid.salinity", Quantity(D::Salinity, from(0.0, 350_000.0)), Default("\"0 ppm\""), "Dissolved solids of the water, by mass"),
    key("fluid.h2s", Fraction(FRACTION), Default("0.0"), "Mole fraction of hydrogen sulphide in the gas"),
    key("fluid.co2", Fraction(FRACTION), Default("0.0"), "Mole fraction of carbon dioxide in the gas"),
    key("fluid.separator_pressure", Quantity(D::Pressure, above(0.0, 5_000.0)), Optional, "With separator_temperature: corrects the gas gravity in the Vasquez-Beggs correlations"),
    key("fluid.separator_temperature", Quantity(D::Temperature, from(0.0, 400.0)), Optional, "Goes with separator_pressure"),
    key("fluid.oil_correlation", Choice(&["standing", "vasquez-beggs", "glaso", "al-marhoun", "petrosky-farshad"]), Default("\"standing\""), "Bubble point, dissolved gas and oil volume factor"),
    key("fluid.dead_oil_correlation", Choice(&["beggs-robinson", "beal", "glaso"]), Default("\"beggs-robinson\""), "Viscosity of oil without gas"),
    key("fluid.live_oil_correlation", Choice(&["beggs-robinson", "chew-connally"]), Default("\"beggs-robinson\""), "Viscosity of oil with its gas"),
    key("fluid.undersaturated_correlation", Choice(&["vasquez-beggs", "beal"]), Default("\"vasquez-beggs\""), "Viscosity of oil above its bubble point"),
    key("fluid.z_correlation", Choice(&["dranchuk-abou-kassem", "hall-yarborough"]), Default("\"dranchuk-abou-kassem\""), "Compressibility factor of the gas"),
    key("fluid.bubble_point_bo", Quantity(D::LiquidVolumeFactor, from(1.01, 10.0)), Optional, "Measured oil volume factor at the bubble point and tank temperature; the correlation's swell Bo - 1 is multiplied to meet it"),
    key("fluid.bubble_point_viscosity", Quantity(D::Viscosity, from(0.01, 1.0e5)), Optional, "Measured oil viscosity at the bubble point and tank temperature; the correlation is multiplied to meet it"),
    key("fluid.dead_oil_viscosity", Quantity(D::Viscosity, from(0.01, 1.0e5)), Optional, "Measured viscosity of the oil without gas at tank temperature; the correlation is multiplied to meet it"),
    key("fluid.lab", Kind::Table, Optional, "A laboratory's table, which rules at tank temperature"),
    key("fluid.lab.table", Text, Required, "Path of its CSV file"),
    key("fluid.lab.basis", Choice(&["flash", "differential"]), Required, "To what oil its rs and bo refer: \"flash\", the separator's oil, or \"differential\", the residual oil of a differential liberation, which is converted"),
    key("fluid.lab.separator_bo", Quantity(D::LiquidVolumeFactor, from(1.0, 10.0)), Optional, "Of the separator test, for basis \"differential\": volume of oil at the bubble point over stock-tank oil"),
    key("fluid.lab.separator_gor", Quantity(D::GasOilRatio, above(0.0, 20_000.0)), Optional, "Of the separator test, for basis \"differential\": gas of all stages and the stock tank"),
    key("fluid.asphaltene_onset", Onset, Optional, "Upper onset pressure of asphaltene, at reservoir temperature or as pairs of temperature and pressure; below it asphaltene may come out. A screen: it changes no flow"),
    key("fluid.asphaltene_lower_onset", Onset, Optional, "Lower onset pressure, below which asphaltene is dissolved again; goes with asphaltene_onset"),
    key("fluid.wax_appearance", Quantity(D::Temperature, from(-40.0, 300.0)), Optional, "Wax appearance temperature: below it wax may come out. A screen: it changes no flow"),

    key("tank", Kind::Table, Required, "The reservoir compartment"),
    key("tank.oil_in_place", Quantity(D::LiquidVolume, LIQUID), Required, "Oil initially in place"),
    key("tank.pressure", Quantity(D::Pressure, PRESSURE), Required, "Initial pressure at the datum"),
    key("tank.temperature", Quantity(D::Temperature, from(32.0, 600.0)), Required, "Temperature"),
    key("tank.connate_water", Fraction(Limits { low: 0.0, low_allowed: true, high: 0.95 }), Required, "Connate water saturation"),
    key("tank.pore_compressibility", Quantity(D::Compressibility, from(0.0, 1.0e-3)), Optional, "Pore compressibility; this or compaction"),
    key("tank.compaction", Compaction, Optional, "Pairs of pressure and pore-volume multiplier, by rising pressure; this or pore_compressibility"),
    key("tank.gas_cap_ratio", Number(from(0.0, 20.0)), Default("0.0"), "Primary gas cap over oil zone, by initial volume"),
    key("tank.datum", Quantity(D::Length, from(0.0, 50_000.0)), Optional, "True vertical depth at which pressures are stated; otherwise each well's perforations"),

    key("tank.produced", Kind::Table, Optional, "What the tank made before period.start"),
    key("tank.produced.oil", Quantity(D::LiquidVolume, LIQUID_OR_NONE), Default("\"0 STB\""), "Oil"),
    key("tank.produced.gas", Quantity(D::GasVolume, GAS_OR_NONE), Default("\"0 scf\""), "Gas"),
    key("tank.produced.water", Quantity(D::LiquidVolume, LIQUID_OR_NONE), Default("\"0 STB\""), "Water"),
    key("tank.produced.injected_water", Quantity(D::LiquidVolume, LIQUID_OR_NONE), Default("\"0 STB\""), "Water injected, the part that supports the tank"),
    key("tank.produced.injected_gas", Quantity(D::GasVolume, GAS_OR_NONE), Default("\"0 scf\""), "Gas injected, the part that supports the tank"),
    key("tank.produced.aquifer_influx", Quantity(D::LiquidVolume, LIQUID_OR_NONE), Default("\"0 STB\""), "Water that had come from the aquifer; must be stated with any aquifer but a pot"),
    key("tank.produced.measured_pressure", Quantity(D::Pressure, PRESSURE), Optional, "Measured at period.start: compared with the computed one, not imposed"),

    key("tank.aquifer", Kind::Table, Optional, "Aquifer"),
    key("tank.aquifer.method", Choice(&["pot", "schilthuis", "fetkovich", "carter-tracy"]), Required, "Influx law"),
    key("tank.aquifer.strength", Quantity(D::ProductivityIndex, from(0.0, 1.0e8)), Optional, "schilthuis: influx, in reservoir barrels, per pressure below the initial one"),
    key("tank.aquifer.water", Quantity(D::LiquidVolume, LIQUID), Optional, "pot, fetkovich: its water, in reservoir barrels; or by shape and rock"),
    key("tank.aquifer.productivity", Quantity(D::ProductivityIndex, from(0.0, 1.0e8)), Optional, "fetkovich with water: influx, in reservoir barrels, per pressure above the tank's"),
    key("tank.aquifer.compressibility", Quantity(D::Compressibility, above(0.0, 1.0e-3)), Optional, "Of its water and its pores together; all but schilthuis"),
    key("tank.aquifer.shape", Choice(&["radial", "linear"]), Default("\"radial\""), "A ring, or part of one, around the tank, or a slab on one side; pot and fetkovich"),
    key("tank.aquifer.porosity", Fraction(above(0.0, 1.0)), Optional, "Porosity"),
    key("tank.aquifer.permeability", Quantity(D::Permeability, above(0.0, 1.0e6)), Optional, "Permeability; fetkovich, carter-tracy"),
    key("tank.aquifer.viscosity", Quantity(D::Viscosity, above(0.0, 10.0)), Optional, "Viscosity of its water; fetkovich, carter-tracy"),
    key("tank.aquifer.thickness", Quantity(D::Length, above(0.0, 20_000.0)), Optional, "Thickness"),
    key("tank.aquifer.inner_radius", Quantity(D::Length, above(0.0, 1.0e6)), Optional, "radial: radius of the tank"),
    key("tank.aquifer.radius_ratio", Number(above(1.0, 1_000.0)), Optional, "radial pot and fetkovich: outer radius over inner radius"),
    key("tank.aquifer.angle", Quantity(D::Angle, above(0.0, 360.0)), Default("\"360 deg\""), "radial: angle over which it touches the tank"),
    key("tank.aquifer.width", Quantity(D::Length, above(0.0, 1.0e7)), Optional, "linear: width of the contact"),
    key("tank.aquifer.length", Quantity(D::Length, above(0.0, 1.0e7)), Optional, "linear: length away from the tank"),
    key("tank.aquifer.since", Day, Optional, "carter-tracy: day of the first production, from which its time runs; otherwise period.start"),

    key("tank.water", Kind::Table, Optional, "Water that flows to the wells"),
    key("tank.water.model", Choice(&["connate", "average", "displacement", "trend"]), Optional, "connate: none flows; average: fractional flow at the tank's average saturation; displacement: a front through the contacted volume; trend: a table. Otherwise displacement where water is injected or there is an aquifer, connate where not"),
    key("tank.water.contacted_fraction", Fraction(above(0.0, 0.95)), Default("0.6"), "Part of the oil zone's pore volume that inflowing water comes to; displacement and trend"),
    key("tank.water.trend", Kind::WaterTrend, Optional, "Pairs of the tank's cumulative oil since first production, or of injected pore volumes as a bare number, and water; used by the model trend alone"),
    key("tank.water.trend_of", Choice(&["water-cut", "water-oil-ratio"]), Default("\"water-cut\""), "What the second members of trend are"),

    key("tank.relative_permeability", Kind::Table, Optional, "Corey curves"),
    key("tank.relative_permeability.critical_gas", Fraction(FRACTION), Default("0.05"), "Gas saturation up to which free gas does not flow"),
    key("tank.relative_permeability.residual_oil_to_gas", Fraction(FRACTION), Default("0.25"), "Oil left behind by gas"),
    key("tank.relative_permeability.residual_oil_to_water", Fraction(FRACTION), Default("0.28"), "Oil left behind by water"),
    key("tank.relative_permeability.oil_end", Fraction(END), Default("0.9"), "Oil relative permeability at connate water"),
    key("tank.relative_permeability.gas_end", Fraction(END), Default("0.7"), "Gas relative permeability at residual oil"),
    key("tank.relative_permeability.water_end", Fraction(END), Default("0.35"), "Water relative permeability at residual oil"),
    key("tank.relative_permeability.oil_exponent", Number(EXPONENT), Default("2.5"), "Exponent of the oil curves"),
    key("tank.relative_permeability.gas_exponent", Number(EXPONENT), Default("2.0"), "Exponent of the gas curve"),
    key("tank.relative_permeability.water_exponent", Number(EXPONENT), Default("3.0"), "Exponent of the water curve"),

    key("injector", Tables, Optional, "Injectors"),
    key("injector.name", Name, Required, "Unique among lines, wells and injectors"),
    key("injector.fluid", Choice(&["water", "gas"]), Required, "What is injected"),
    key("injector.start", Day, Optional, "First day; otherwise the start of the period"),
    key("injector.end", Day, Optional, "Day from which it is shut; otherwise never"),
    key("injector.rate", Injected(D::LiquidRate, D::GasRate, from(0.0, 1.0e10)), Optional, "Surface rate; this or voidage_replacement"),
    key("injector.voidage_replacement", Number(from(0.0, 5.0)), Optional, "Share of the tank's current withdrawal; this or rate"),
    key("injector.rate_limit", Injected(D::LiquidRate, D::GasRate, above(0.0, 1.0e10)), Optional, "Highest surface rate; otherwise none"),
    key("injector.effective_fraction", Fraction(above(0.0, 1.0)), Default("1.0"), "Part of the injected volume that supports the tank; the rest is lost"),
    key("injector.response_days", Number(from(0.0, 3650.0)), Default("0.0"), "Mean time in days until what is injected reaches the tank: a first-order lag; below 1 at once"),
    key("injector.bottomhole_limit", Quantity(D::Pressure, PRESSURE), Optional, "Highest bottom-hole pressure, from the fracture figure; acts through injectivity"),
    key("injector.injectivity", Injected(D::ProductivityIndex, D::GasInjectivity, above(0.0, 1.0e8)), Optional, "Surface rate per pressure above the tank's"),
    key("injector.gas_to", Choice(&["oil-zone", "gas-cap"]), Default("\"oil-zone\""), "Gas: dispersed in the oil zone, or kept apart in the gas cap"),

    key("line", Tables, Optional, "Lines whose pressure rises with what all their wells make together"),
    key("line.name", Name, Required, "Unique among lines, wells and injectors"),
    key("line.pressure", LinePressures, Required, "Pairs of total rate (liquid, or gas) and pressure where the wells join it"),

    key("well", Tables, Required, "Producing wells"),
    key("well.name", Name, Required, "Unique among lines, wells and injectors"),
    key("well.line_pressure", Quantity(D::Pressure, PRESSURE), Optional, "Pressure of the line into which the well flows; this or line"),
    key("well.line", Text, Optional, "Name of the shared line into which it flows; this or line_pressure"),
    key("well.target_rate", Quantity(D::LiquidRate, RATE), Optional, "Producing-day liquid rate to which it is choked back while it can; otherwise wide open"),
    key("well.uptime", Fraction(above(0.0, 1.0)), Default("1.0"), "Fraction of the time on stream"),
    key("well.perforations", Quantity(D::Length, DEPTH), Optional, "Measured depth; otherwise the end of the survey"),
    key("well.gor_factor", Number(from(0.0, 100.0)), Default("1.0"), "This well's free gas against the tank's"),
    key("well.water_factor", Number(from(0.0, 100.0)), Default("1.0"), "This well's water-oil ratio against the tank's"),
    key("well.breakthrough_delay", Number(above(0.0, 100.0)), Default("1.0"), "Contacted volume to be swept before this well sees what the tank's average well sees, over the tank's; displacement"),
    key("well.water_trend", Kind::WellTrend, Optional, "Pairs of the oil this well makes from period.start on and its water cut, in place of the tank's"),
    key("well.gor_trend", Kind::WellTrend, Optional, "Pairs of that oil and its producing gas-oil ratio, in place of the tank's"),
    key("well.start", Day, Optional, "First day on stream; otherwise the start of the period"),
    key("well.end", Day, Optional, "Day from which it is shut in; otherwise never"),
    key("well.may_flow_again", Flag, Default("false"), "Whether a well that died comes back by itself when it can"),
    key("well.skin", Number(SKIN), Default("0.0"), "Skin"),
    key("well.skin_at_test", Number(SKIN), Default("0.0"), "Skin to which the inflow coefficient belongs"),
    key("well.drainage_radius", Quantity(D::Length, above(0.0, 50_000.0)), Optional, "With wellbore_radius: r = ln(0.472 re/rw) of the skin equation; otherwise r = 7.0"),
    key("well.drainage_shape", Choice(&["circle", "hexagon", "square", "triangle", "rhombus", "square-side", "square-corner", "rectangle-2-1", "rectangle-4-1", "rectangle-5-1"]), Optional, "Of the drainage area, whose radius is that of a circle as large; this, shape_factor, or a circle"),
    key("well.shape_factor", Number(above(0.0, 40.0)), Optional, "Shape factor CA of any other drainage area"),
    key("well.wellbore_radius", Quantity(D::Length, above(0.0, 5.0)), Optional, "Goes with drainage_radius"),
    key("well.minimum_flowing_pressure", Quantity(D::Pressure, PRESSURE), Optional, "Lowest allowed flowing pressure at the perforations"),
    key("well.minimum_rate", Quantity(D::LiquidRate, RATE), Optional, "Producing-day liquid rate below which it is given up"),
    key("well.maximum_water_cut", Fraction(above(0.0, 1.0)), Optional, "Water cut above which it is given up"),
    key("well.maximum_gor", Quantity(D::GasOilRatio, GOR), Optional, "Gas-oil ratio above which it is given up"),
    key("well.heading_margin", Number(from(0.0, 10.0)), Default("0.1"), "Margin of the rate over that at the minimum of the tubing curve below which the well is said to head"),
    key("well.maximum_velocity", Quantity(D::Velocity, above(0.0, 1_000.0)), Optional, "Your own limit on the velocity at the wellhead; months beyond it are told, nothing is changed and nothing certified"),
    key("well.erosional_constant", Number(above(0.0, 1_000.0)), Optional, "Your own C of the limit C/sqrt(mixture density) on the velocity at the wellhead, in ft/s and lb/ft3; as maximum_velocity"),

    key("well.inflow", Kind::Table, Required, "Inflow"),
    key("well.inflow.method", Choice(&["straight", "vogel", "wiggins", "fetkovich", "jones", "composite"]), Default("\"fetkovich\""), "Shape of the curve, below the bubble point for all but straight and jones"),
    key("well.inflow.future", Choice(&["pressure", "mobility", "cubic"]), Default("\"pressure\""), "How the coefficient is carried to future pressures"),
    key("well.inflow.basis", Choice(&["liquid", "oil"]), Default("\"liquid\""), "Which rate the coefficient belongs to"),
    key("well.inflow.exponent", Number(from(0.3, 1.5)), Optional, "Fetkovich's n; otherwise fitted, or 1 where it cannot be"),
    key("well.inflow.flow_efficiency", Number(from(0.05, 10.0)), Optional, "Of vogel: drawdown that would do without skin over the well's own; otherwise the plain curve"),
    key("well.inflow.turbulence", Quantity(D::Turbulence, from(0.0, 1.0e3)), Optional, "b of jones; otherwise fitted to the tests"),
    key("well.inflow.test", Tables, Optional, "Measured points: one of test, productivity_index, permeability, open_flow, coefficient"),
    key("well.inflow.productivity_index", Quantity(D::ProductivityIndex, above(0.0, 10_000.0)), Optional, "Above the bubble point (at any pressure for straight)"),
    key("well.inflow.permeability", Quantity(D::Permeability, above(0.0, 1.0e6)), Optional, "Absolute, for Darcy's productivity index; needs thickness and both radii"),
    key("well.inflow.thickness", Quantity(D::Length, above(0.0, 10_000.0)), Optional, "Net thickness open to the well; goes with permeability"),
    key("well.inflow.open_flow", Quantity(D::LiquidRate, RATE), Optional, "Absolute open flow"),
    key("well.inflow.coefficient", FlowCoefficient, Optional, "Fetkovich's C; needs exponent"),
    key("well.inflow.reservoir", Quantity(D::Pressure, PRESSURE), Optional, "Reservoir pressure to which the stated coefficient belongs; otherwise the tank's initial pressure"),
    key("well.inflow.yearly_loss", Fraction(from(0.0, 0.95)), Default("0.0"), "Part of the productivity lost in every year to scale and fines; a stimulation by an event (skin, loss_since, or a new coefficient) brings it back"),
    key("well.inflow.loss_since", Day, Optional, "Day from which it counts: that of the coefficient or of the last stimulation; otherwise the well's first day in the forecast"),
    key("well.inflow.test.on", Day, Optional, "Date of the test"),
    key("well.inflow.test.reservoir", Quantity(D::Pressure, PRESSURE), Required, "Reservoir pressure at the time, at the tank's datum"),
    key("well.inflow.test.flowing", Quantity(D::Pressure, PRESSURE), Optional, "Gauged flowing pressure at the perforations; this, wellhead, or both"),
    key("well.inflow.test.wellhead", Quantity(D::Pressure, PRESSURE), Optional, "Flowing wellhead pressure of a separator test; needs gor"),
    key("well.inflow.test.rate", Quantity(D::LiquidRate, RATE), Required, "Producing-day liquid rate"),
    key("well.inflow.test.gor", Quantity(D::GasOilRatio, GOR), Optional, "Producing gas-oil ratio; goes with wellhead"),
    key("well.inflow.test.water_cut", Fraction(Limits { low: 0.0, low_allowed: true, high: 0.999 }), Default("0.0"), "Water fraction of the liquid"),

    key("well.tubing", Kind::Table, Required, "Tubing"),
    key("well.tubing.method", Choice(&["hasan-kabir", "drift-flux", "ansari", "hagedorn-brown", "beggs-brill", "mukherjee-brill", "gray", "no-slip"]), Default("\"hasan-kabir\""), "Hydraulics model"),
    key("well.tubing.diameter", Quantity(D::Diameter, DIAMETER), Optional, "Inside diameter; this or sections"),
    key("well.tubing.sections", Tables, Optional, "Stretches of different diameter, from the wellhead down"),
    key("well.tubing.sections.to", Quantity(D::Length, DEPTH), Optional, "Measured depth at which the stretch ends; only the last may leave it out"),
    key("well.tubing.sections.diameter", Quantity(D::Diameter, DIAMETER), Required, "Inside diameter"),
    key("well.tubing.sections.roughness", Quantity(D::Diameter, ROUGHNESS), Optional, "Absolute roughness; otherwise the tubing's"),
    key("well.tubing.sections.inner_pipe", Quantity(D::Diameter, from(0.0, 30.0)), Optional, "Outside diameter of a pipe inside; otherwise the tubing's"),
    key("well.tubing.roughness", Quantity(D::Diameter, ROUGHNESS), Default("\"0.0006 in\""), "Absolute roughness"),
    key("well.tubing.inner_pipe", Quantity(D::Diameter, from(0.0, 30.0)), Default("\"0 in\""), "Outside diameter of a pipe inside: the flow goes through the annulus around it"),
    key("well.tubing.slip_factor", Number(from(0.0, 10.0)), Default("1.0"), "The model's holdup above no-slip times this, to tune it to measurements; 0 is no slip"),
    key("well.tubing.survey", Survey, Required, "Pairs of measured depth and true vertical depth or inclination from the wellhead down, or the path of a CSV file"),
    key("well.tubing.wellhead_temperature", Quantity(D::Temperature, from(-40.0, 500.0)), Optional, "Flowing temperature at the wellhead; this or temperature"),
    key("well.tubing.temperature", Temperatures, Optional, "Pairs of measured depth and flowing temperature from the wellhead down"),
    key("well.tubing.heat", Kind::Table, Optional, "Flowing temperature from the heat lost to the ground; this, wellhead_temperature or temperature"),
    key("well.tubing.heat.surface_temperature", Quantity(D::Temperature, from(-40.0, 500.0)), Required, "Undisturbed ground at the wellhead; from there straight against vertical depth to the tank's at the perforations"),
    key("well.tubing.heat.conductivity", Quantity(D::HeatConductivity, above(0.0, 100.0)), Default("\"1.4 Btu/h/ft/degF\""), "Heat conductivity of the ground"),
    key("well.tubing.heat.diffusivity", Quantity(D::Diffusivity, above(0.0, 10.0)), Default("\"0.04 ft2/h\""), "Heat diffusivity of the ground"),
    key("well.tubing.heat.wellbore_radius", Quantity(D::Length, above(0.0, 5.0)), Default("\"0.354 ft\""), "Radius at which the completion meets the ground"),
    key("well.tubing.heat.transfer", Quantity(D::HeatTransfer, above(0.0, 10_000.0)), Optional, "Coefficient of heat transfer from the stream through the completion, for the inside circumference of the tubing; without it the completion holds nothing back"),
    key("well.tubing.heat.producing_time", Quantity(D::Time, above(0.0, 100_000.0)), Default("\"1 years\""), "For how long the ground has been warmed, on all dates"),
    key("well.tubing.restrictions", Tables, Optional, "Short pieces of smaller inside diameter: nipples, safety valves, ported subs"),
    key("well.tubing.restrictions.at", Quantity(D::Length, DEPTH), Required, "Measured depth"),
    key("well.tubing.restrictions.diameter", Quantity(D::Diameter, DIAMETER), Required, "Inside diameter"),
    key("well.tubing.restrictions.discharge", Number(above(0.0, 1.0)), Default("0.826"), "Coefficient of discharge"),

    key("well.choke", Kind::Table, Optional, "Choke at the wellhead; with a target rate it is closed further while the target holds"),
    key("well.choke.size", Quantity(D::Diameter, above(0.0, 10.0)), Required, "Opening, \"24/64 in\""),
    key("well.choke.method", Choice(&["sachdeva", "gilbert", "ros", "baxendell", "achong", "pilehvari"]), Default("\"sachdeva\""), "Relation; all but sachdeva hold in critical flow alone"),
    key("well.choke.discharge_coefficient", Number(above(0.0, 5.0)), Optional, "Rate over that of the relation; otherwise from test, or 0.85 with sachdeva and 1 with the others"),
    key("well.choke.test", Tables, Optional, "Measured points that give the discharge coefficient; excludes it"),
    key("well.choke.test.on", Day, Optional, "Date of the test"),
    key("well.choke.test.size", Quantity(D::Diameter, above(0.0, 10.0)), Optional, "Opening at the time; otherwise the choke's"),
    key("well.choke.test.wellhead", Quantity(D::Pressure, PRESSURE), Required, "Pressure upstream of the choke"),
    key("well.choke.test.line", Quantity(D::Pressure, PRESSURE), Required, "Pressure downstream of it"),
    key("well.choke.test.rate", Quantity(D::LiquidRate, RATE), Required, "Producing-day liquid rate"),
    key("well.choke.test.gor", Quantity(D::GasOilRatio, GOR), Required, "Producing gas-oil ratio"),
    key("well.choke.test.water_cut", Fraction(Limits { low: 0.0, low_allowed: true, high: 0.999 }), Default("0.0"), "Water fraction of the liquid"),

    key("well.flowing_survey", Tables, Optional, "Flowing pressures measured along depth: what the tubing models are held against"),
    key("well.flowing_survey.on", Day, Required, "Day of the survey"),
    key("well.flowing_survey.rate", Quantity(D::LiquidRate, RATE), Required, "Producing-day liquid rate"),
    key("well.flowing_survey.gor", Quantity(D::GasOilRatio, GOR), Required, "Producing gas-oil ratio"),
    key("well.flowing_survey.water_cut", Fraction(Limits { low: 0.0, low_allowed: true, high: 0.999 }), Default("0.0"), "Water fraction of the liquid"),
    key("well.flowing_survey.wellhead", Quantity(D::Pressure, PRESSURE), Required, "Flowing wellhead pressure, from which the models are computed down"),
    key("well.flowing_survey.wellhead_temperature", Quantity(D::Temperature, from(-40.0, 500.0)), Optional, "Flowing temperature at the wellhead that day; otherwise the tubing's"),
    key("well.flowing_survey.reservoir", Quantity(D::Pressure, PRESSURE), Optional, "Reservoir pressure at the time, at the tank's datum: the inflow is then compared too"),
    key("well.flowing_survey.points", Stations, Required, "Measured depth, pressure and perhaps temperature from the top down, or the path of a CSV file"),

    key("event", Tables, Optional, "Dated changes; a case may hold its own"),
    key("event.on", Day, Required, "Acts from 00:00 of this day"),
    key("event.well", Text, Optional, "Name of the well that changes; exactly one of well, line, injector, tank"),
    key("event.line", Text, Optional, "Name of the shared line that changes"),
    key("event.injector", Text, Optional, "Name of the injector that changes"),
    key("event.tank", Flag, Optional, "true: the tank changes"),
    key("event.set", Overrides, Required, "New values; keys are relative to what is named"),

    key("case", Tables, Optional, "Named sets of overrides"),
    key("case.name", Text, Required, "Unique among cases"),
    key("case.set", Overrides, Optional, "Values by dotted path: \"table.key\" or \"list.NAME.key\""),
    key("case.event", Tables, Optional, "Events of this case alone, added to the scenario's; same keys as event"),

    key("numerics", Kind::Table, Optional, "How the equations are solved"),
    key("numerics.tolerance", Choice(&["normal", "tight"]), Default("\"normal\""), "tight: a hundred times tighter, to check the former"),
];

/// The key of a path without indices.
pub fn find(path: &str) -> Option<&'static Key> {
    KEYS.iter().find(|key| key.path == path)
}

/// The keys directly below a path; the top level for an empty one.
pub fn children(path: &str) -> impl Iterator<Item = (&'static str, &'static Key)> + use<'_> {
    KEYS.iter().filter_map(move |key| {
        let (parent, name) = key.path.rsplit_once('.').unwrap_or(("", key.path));
        (parent == path).then_some((name, key))
    })
}

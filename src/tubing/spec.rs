//! The tubing of one well as the user states it.

/// Which hydraulics model gives the pressure gradient.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum TubingMethod {
    /// Hasan and Kabir (1988, 2010): drift flux with blended void fraction.
    HasanKabir,
    /// Shi et al. (2005): drift flux with fitted parameters.
    DriftFlux,
    /// Ansari et al. (1994): mechanistic, by flow pattern.
    Ansari,
    /// Hagedorn and Brown (1965) with the bubble-flow modification.
    HagedornBrown,
    /// Beggs and Brill (1973) with the corrections of Payne et al. (1979).
    BeggsBrill,
    /// Mukherjee and Brill (1983, 1985).
    MukherjeeBrill,
    /// Gray (1974): gas wells with some liquid.
    Gray,
    /// Gas and liquid at one velocity.
    NoSlip,
}

impl TubingMethod {
    /// Every method.
    pub const ALL: [Self; 8] = [
        Self::HasanKabir,
        Self::DriftFlux,
        Self::Ansari,
        Self::HagedornBrown,
        Self::BeggsBrill,
        Self::MukherjeeBrill,
        Self::Gray,
        Self::NoSlip,
    ];

    /// Its name in scenario files and results.
    pub const fn name(self) -> &'static str {
        match self {
            Self::HasanKabir => "hasan-kabir",
            Self::DriftFlux => "drift-flux",
            Self::Ansari => "ansari",
            Self::HagedornBrown => "hagedorn-brown",
            Self::BeggsBrill => "beggs-brill",
            Self::MukherjeeBrill => "mukherjee-brill",
            Self::Gray => "gray",
            Self::NoSlip => "no-slip",
        }
    }
}

/// A stretch of tubing of one inside diameter, from the end of the stretch above it (or the wellhead) down.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TubingSection {
    /// Measured depth at which the stretch ends, ft; the last one reaches the perforations.
    pub to_md_ft: f64,
    /// Inside diameter, in.
    pub diameter_in: f64,
    /// Absolute roughness, in.
    pub roughness_in: f64,
    /// Outside diameter of a pipe inside it, in.: the flow goes through the annulus. 0: none.
    pub inner_pipe_in: f64,
}

/// The tubing of one well as the user states it, in oilfield units.
#[derive(Debug, Clone, PartialEq)]
pub struct TubingSpec {
    /// Hydraulics model.
    pub method: TubingMethod,
    /// Stretches from the wellhead down. The last `to_md_ft` may be infinite.
    pub sections: Vec<TubingSection>,
    /// Survey: measured and true vertical depth, ft, from the wellhead down; begins with (0, 0).
    pub survey: Vec<(f64, f64)>,
    /// The model's holdup above no-slip times this number; 1 leaves the model as published.
    pub slip_factor: f64,
    /// Flowing temperature at the wellhead, degF. Not used beside a table of temperatures.
    pub wellhead_temperature_degf: f64,
    /// Flowing temperatures: measured depth, ft, from 0 down, and degF. Empty: straight from the wellhead's to the tank's
    /// against vertical depth.
    pub temperatures: Vec<(f64, f64)>,
    /// Flowing temperature from the heat that the stream loses to the ground, in place of the two above.
    pub heat: Option<HeatSpec>,
    /// Short pieces of smaller inside diameter.
    pub restrictions: Vec<RestrictionSpec>,
}

/// A short piece of smaller inside diameter in the string: a nipple, a safety valve, a ported sub.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RestrictionSpec {
    /// Measured depth, ft.
    pub at_md_ft: f64,
    /// Inside diameter, in.
    pub diameter_in: f64,
    /// What flows, over what would flow without friction.
    pub discharge_coefficient: f64,
}

/// What the heat loss of a well goes by.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HeatSpec {
    /// Undisturbed temperature of the ground at the wellhead, degF; from there straight against vertical depth to the
    /// tank's at the perforations.
    pub surface_temperature_degf: f64,
    /// Heat conductivity of the ground, Btu/h/ft/degF.
    pub conductivity_btu_h_ft_degf: f64,
    /// Its diffusivity, ft2/h.
    pub diffusivity_ft2_h: f64,
    /// Radius at which the completion meets the ground, ft.
    pub wellbore_radius_ft: f64,
    /// Coefficient of heat transfer from the stream to that radius, for the inside circumference of the pipe,
    /// Btu/h/ft2/degF; infinite: the completion does not hold heat back.
    pub transfer_btu_h_ft2_degf: f64,
    /// Time for which the ground has been warmed, days.
    pub producing_time_d: f64,
}

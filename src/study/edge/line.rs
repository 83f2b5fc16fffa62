//! The pressures at which the flow margin is zero, at one water cut.

use super::gas::{ByPressure, Gas};
use crate::fluid::BlackOil;
use crate::roots::brent;
use crate::tank::TankState;
use crate::well::{Gauge, KeptLine, LOOK_FROM, LOOK_TO, WellModel, WellNow, follow_top, oil_gradient_psi_ft};

/// Steps of the coarse look, parts of the pressure and of the top of the map, whichever is longer: a window of flow or a gap that is
/// narrower may be stepped over.
const STEP: (f64, f64) = (0.07, 0.02);
/// Lowest pressure of the look, psia.
const LOWEST_PSIA: f64 = 20.0;
/// Width in pressure to which an edge is located, psi.
const WIDTH_PSI: f64 = 1e-3;
/// Flow margin that may be left at a located edge, psi.
pub(super) const LEFT_PSI: f64 = 0.01;
/// Parts of open flow at which a look asks whether a well flows, the likeliest first.
const PARTS: [f64; 12] = [0.3, 0.15, 0.5, 0.08, 0.22, 0.04, 0.4, 0.7, 0.02, 0.01, 0.004, 0.9];
/// Further ones at which a located edge is held against other humps.
const MORE_PARTS: [f64; 8] = [0.002, 0.007, 0.014, 0.03, 0.06, 0.11, 0.6, 0.8];

/// Where a well flows at one water cut.
#[derive(Debug, Clone, PartialEq)]
pub struct Edge {
    /// Water cut.
    pub water_cut: f64,
    /// Whether it flows at the top of the map.
    pub flows_at_top: bool,
    /// Where it begins or ceases to flow, by falling pressure; a last window that reaches the end of the look ends there.
    pub places: Vec<Place>,
}

impl Edge {
    /// The lowest pressure at which the well still flows: the edge. `None`: it flows at no pressure of the map.
    pub fn lowest(&self) -> Option<&Place> {
        self.places.last()
    }

    /// Pressures between which it flows, psia, the highest first: lower end, and upper end unless that is the top of the map.
    pub fn windows_psia(&self) -> Vec<(f64, Option<f64>)> {
        let at = |i: usize| self.places.get(i).map(|p| p.pressure_psia);
        let first = usize::from(self.flows_at_top);
        let top = self.flows_at_top.then(|| at(0).map(|low| (low, None))).flatten();
        let rest = (first..self.places.len()).step_by(2).filter_map(|i| Some((at(i + 1)?, Some(at(i)?))));
        top.into_iter().chain(rest).collect()
    }

    /// Pressures above the edge between which it does not flow, psia, the highest first: lower end, and upper end unless that is the
    /// top of the map.
    pub fn gaps_psia(&self) -> Vec<(f64, Option<f64>)> {
        let windows = self.windows_psia();
        let top = windows.first().and_then(|w| w.1).map(|low| (low, None));
        let rest = windows.windows(2).filter_map(|pair| Some((pair[1].1?, Some(pair[0].0))));
        top.into_iter().chain(rest).collect()
    }

    /// Whether the well flows at a pressure.
    pub fn flows(&self, pressure_psia: f64) -> bool {
        let above = self.places.iter().filter(|p| p.pressure_psia >= pressure_psia).count();
        self.flows_at_top == above.is_multiple_of(2)
    }

    /// The place nearest to a pressure.
    pub fn nearest(&self, pressure_psia: f64) -> Option<&Place> {
        let distance = |p: &&Place| (p.pressure_psia - pressure_psia).abs();
        self.places.iter().min_by(|a, b| distance(a).total_cmp(&distance(b)))
    }
}

/// Where the curves part.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// Reservoir pressure, psia.
    pub pressure_psia: f64,
    /// Liquid rate at which the curves touch there, STB/d.
    pub rate_stb_d: f64,
    /// Gas-oil ratio there, scf/STB.
    pub gor_scf_stb: f64,
    /// What is left of the flow margin there, psi: how well the edge is located.
    pub margin_psi: f64,
}

/// A well with the settings of one line.
pub(super) struct Subject<'a> {
    pub well: WellModel,
    pub fluid: &'a BlackOil,
    pub offer: &'a ByPressure<'a>,
    pub gas: Gas,
    /// The shared line of the well's own line of the map.
    pub shared: Option<&'a KeptLine>,
    /// Tank temperature, degF, where its pressure is stated at a datum of its own.
    pub datum_temperature_degf: Option<f64>,
    pub top_psia: f64,
}

impl Subject<'_> {
    /// The tank as the well meets it, its gas-oil ratio and water cut as the map wants them.
    fn tank(&self, pressure_psia: f64, water_cut: f64) -> TankState {
        let offer = self.offer.at(pressure_psia);
        let gor = match self.gas {
            Gas::Given(gor) => gor,
            Gas::Forecast | Gas::Dissolved => offer.rs_scf_stb + offer.free_gor_scf_stb * self.well.spec.gor_factor,
        };
        // The well's own factors have had their say: what is left reaches it whole.
        let factor = self.well.spec.water_factor;
        let water_oil_ratio = if factor > 0.0 { water_cut / (1.0 - water_cut) / factor } else { 0.0 };
        TankState { rs_scf_stb: gor, free_gor_scf_stb: 0.0, water_oil_ratio, ..offer }
    }

    pub fn now<'a>(&'a self, pressure_psia: f64, water_cut: f64, gauge: &'a Gauge) -> WellNow<'a> {
        let rs = self.offer.at(pressure_psia).rs_scf_stb;
        let gradient =
            self.datum_temperature_degf.map_or(0.0, |t| oil_gradient_psi_ft(self.fluid, pressure_psia, t, rs));
        let now = self.well.now(self.fluid, &self.tank(pressure_psia, water_cut), 0.0, gradient, gauge);
        self.shared.map_or(now, |kept| now.against(kept.line()))
    }

    /// Flow margin over all rates, psi.
    pub fn margin_psi(&self, pressure_psia: f64, water_cut: f64) -> f64 {
        let gauge = Gauge::default();
        self.now(pressure_psia, water_cut, &gauge).survey().margin_psi
    }

    /// A rate of a coarse look that lies above the tubing curve, as a part of open flow.
    fn flowing_part(&self, pressure_psia: f64, water_cut: f64) -> Option<f64> {
        let gauge = Gauge::default();
        let now = self.now(pressure_psia, water_cut, &gauge);
        // Below line pressure nothing rises.
        if now.curve.reservoir_psia() <= self.well.spec.line_pressure_psia {
            return None;
        }
        let open = now.curve.open_flow_stb_d();
        PARTS.into_iter().find(|part| open > 0.0 && now.height_psi(part * open) > 0.0)
    }

    /// Where the well flows at a water cut. `also_psia` are further pressures to look at, more closely.
    pub fn edge(&self, water_cut: f64, also_psia: &[f64]) -> Edge {
        let looks = self.looks(also_psia);
        let mut parts: Vec<Option<f64>> = looks.iter().map(|p| self.flowing_part(*p, water_cut)).collect();
        for (part, pressure) in parts.iter_mut().zip(&looks).filter(|(part, p)| part.is_none() && also_psia.contains(p))
        {
            *part = self.wide_look(*pressure, water_cut).filter(|(_, margin)| *margin > 0.0).map(|(part, _)| part);
        }
        if parts.iter().all(Option::is_none) {
            // A narrow hump is most likely to be found where the reservoir pushes most.
            parts[0] =
                self.wide_look(self.top_psia, water_cut).filter(|(_, margin)| *margin > 0.0).map(|(part, _)| part);
        }
        let places = loop {
            match self.places(&looks, &parts, water_cut) {
                Ok(places) => break places,
                Err((missed, part)) => parts[missed] = Some(part),
            }
        };
        Edge { water_cut, flows_at_top: parts.first().is_some_and(Option::is_some), places }
    }

    /// The borders between looks of which one flows; the look, and a part of its open flow, that was taken for dead but is not.
    fn places(&self, looks: &[f64], parts: &[Option<f64>], water_cut: f64) -> Result<Vec<Place>, (usize, f64)> {
        let mut places = Vec::new();
        for i in 1..looks.len() {
            let (live, part, dead) = match (parts[i - 1], parts[i]) {
                (Some(part), None) => (i - 1, part, i),
                (None, Some(part)) => (i, part, i - 1),
                _ => continue,
            };
            places.push(self.place(looks[live], part, looks[dead], water_cut).map_err(|part| (dead, part))?);
        }
        if let (Some(Some(_)), Some(last)) = (parts.last(), looks.last()) {
            places.push(self.at(*last, water_cut));
        }
        Ok(places)
    }

    /// Falling pressures of the coarse look, from the top.
    fn looks(&self, also_psia: &[f64]) -> Vec<f64> {
        let step = |p: &f64| Some(p - (STEP.0 * p).max(STEP.1 * self.top_psia));
        let mut list: Vec<f64> =
            std::iter::successors(Some(self.top_psia), step).take_while(|p| *p > LOWEST_PSIA).collect();
        let corners = self.offer.corners();
        list.extend(corners.iter().chain(also_psia).filter(|p| **p < self.top_psia && **p > LOWEST_PSIA));
        list.push(LOWEST_PSIA);
        list.sort_by(|a, b| b.total_cmp(a));
        list.dedup();
        list
    }

    fn at(&self, pressure_psia: f64, water_cut: f64) -> Place {
        let gauge = Gauge::default();
        let now = self.now(pressure_psia, water_cut, &gauge);
        let land = now.survey();
        Place {
            pressure_psia,
            rate_stb_d: land.margin_rate_stb_d,
            gor_scf_stb: now.gor_scf_stb,
            margin_psi: land.margin_psi,
        }
    }

    /// Best rate over all rates, as a part of open flow, and its margin, psi.
    fn wide_look(&self, pressure_psia: f64, water_cut: f64) -> Option<(f64, f64)> {
        let gauge = Gauge::default();
        let now = self.now(pressure_psia, water_cut, &gauge);
        let open = now.curve.open_flow_stb_d();
        let land = now.survey();
        (open > 0.0).then(|| (land.margin_rate_stb_d / open, land.margin_psi))
    }

    /// The zero of the margin between a pressure at which the well flows at this part of open flow and one at which it does not; the part of
    /// open flow at which it flows there all the same.
    fn place(&self, live_psia: f64, live_part: f64, dead_psia: f64, water_cut: f64) -> Result<Place, f64> {
        let gauge = Gauge::default();
        // The best rate moves little as a part of open flow: the top is followed, which is ten times cheaper than a look over all rates.
        let mut part = live_part;
        let mut followed = |pressure_psia: f64| {
            let now = self.now(pressure_psia, water_cut, &gauge);
            let open = now.curve.open_flow_stb_d();
            if open <= 0.0 {
                return now.survey().margin_psi;
            }
            let (rate, top) = follow_top(|q| now.height_psi(q), part * open, LOOK_FROM * open, LOOK_TO * open);
            part = rate / open;
            top
        };
        let (live, dead) = ((live_psia, followed(live_psia)), (dead_psia, followed(dead_psia)));
        if dead.1 > 0.0 {
            return Err(part);
        }
        if live.1 > 0.0 {
            let pressure_psia = brent(&mut followed, dead, live, WIDTH_PSI);
            let margin_psi = followed(pressure_psia);
            let now = self.now(pressure_psia, water_cut, &gauge);
            let open = now.curve.open_flow_stb_d();
            let higher = |part: f64| now.height_psi(part * open) > LEFT_PSI.max(margin_psi);
            if margin_psi.abs() <= LEFT_PSI && !PARTS.into_iter().chain(MORE_PARTS).any(higher) {
                let (rate_stb_d, gor_scf_stb) = (part * open, now.gor_scf_stb);
                return Ok(Place { pressure_psia, rate_stb_d, gor_scf_stb, margin_psi });
            }
        }
        // Another hump stands higher there.
        match self.wide_look(dead_psia, water_cut) {
            Some((part, margin)) if margin > 0.0 => Err(part),
            _ => {
                let ends = [dead_psia, live_psia].map(|p| (p, self.margin_psi(p, water_cut)));
                Ok(self.at(brent(|p| self.margin_psi(p, water_cut), ends[0], ends[1], WIDTH_PSI), water_cut))
            }
        }
    }
}

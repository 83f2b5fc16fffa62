//! The default accuracy over a Latin hypercube of wells, and the continuity of the flowing pressure along the rate, for every
//! model.
#![allow(clippy::unwrap_used)]

mod common;

use common::tubing::string;
use rayon::prelude::*;
use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::{Limited, Stream, Tubing, TubingMethod, TubingSpec};

const WELLS: usize = 3000;

/// A small generator of its own (Knuth's 64-bit linear congruence, high bits), so that the wells never change.
struct Random(u64);

impl Random {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        self.0 >> 33
    }

    /// One column of the hypercube: each of the strata once, in random order, at a random place within.
    fn column(&mut self) -> Vec<f64> {
        let mut strata: Vec<usize> = (0..WELLS).collect();
        for i in (1..WELLS).rev() {
            strata.swap(i, self.next() as usize % (i + 1));
        }
        let within = |random: &mut Self| random.next() as f64 / (1_u64 << 31) as f64;
        strata.into_iter().map(|stratum| (stratum as f64 + within(self)) / WELLS as f64).collect()
    }
}

/// A well of the hypercube.
struct Well {
    spec: TubingSpec,
    stream: Stream,
    wellhead_psia: f64,
    bottom_degf: f64,
    fluid: usize,
}

impl Well {
    fn tubing(&self, method: TubingMethod, accuracy_psi: f64) -> Tubing {
        let spec = TubingSpec { method, ..self.spec.clone() };
        Tubing::new(&spec, None, self.bottom_degf, accuracy_psi).expect("a sound well")
    }
}

/// A medium, a heavy and a light oil, with the temperature at the perforations.
fn fluids() -> Vec<(BlackOil, f64)> {
    [(34.0, 0.78, 620.0, Some(2650.0), 190.0), (22.0, 0.68, 180.0, None, 140.0), (45.0, 0.85, 1400.0, None, 260.0)]
        .into_iter()
        .map(|(api, gravity, rs, bubble_point_psia, degf)| {
            let spec = FluidSpec { bubble_point_psia, ..FluidSpec::new(api, gravity, rs) };
            (BlackOil::new(&spec, degf).expect("a sound fluid"), degf)
        })
        .collect()
}

/// Depth 2,000 to 15,000 ft along the hole, inside diameter 1.9 to 6 in., 20 to 20,000 STB/d (logarithmic), gas-liquid ratio 0 to
/// 5,000 scf/STB, water cut 0 to 0.98, line pressure 50 to 1,500 psia, 0 to 60 degrees from vertical; the three oils in turn.
fn wells(fluids: &[(BlackOil, f64)]) -> Vec<Well> {
    let mut random = Random(20_270_401);
    let columns: Vec<Vec<f64>> = (0..7).map(|_| random.column()).collect();
    (0..WELLS)
        .map(|i| {
            let x = |column: usize, low: f64, high: f64| low + columns[column][i] * (high - low);
            let depth_ft = x(0, 2000.0, 15_000.0);
            let water_cut = x(4, 0.0, 0.98);
            let height_ft = depth_ft * x(6, 0.0, 60.0).to_radians().cos();
            let fluid = i % fluids.len();
            let survey = [(0.0, 0.0), (depth_ft, height_ft)];
            Well {
                spec: string(TubingMethod::NoSlip, &[(f64::INFINITY, x(1, 1.9, 6.0))], &survey, 110.0),
                stream: Stream {
                    liquid_rate_stb_d: 20.0 * f64::powf(1000.0, columns[2][i]),
                    water_cut,
                    // The gas-oil ratio whose gas over liquid is that of the column.
                    gor_scf_stb: x(3, 0.0, 5000.0) / (1.0 - water_cut),
                },
                wellhead_psia: x(5, 50.0, 1500.0),
                bottom_degf: fluids[fluid].1,
                fluid,
            }
        })
        .collect()
}

#[test]
fn default_accuracy_holds_over_a_hypercube_of_wells() {
    // The bar is 0.02 psi against the same model integrated a thousand times finer; and one string in two pieces must give the
    // same within 0.01 % (and two such errors). Beyond 10,000 psia or Ek 0.5 the traverse need only stay finite.
    let fluids = fluids();
    let wells = wells(&fluids);
    for method in TubingMethod::ALL {
        let results: Vec<Option<(f64, f64)>> = wells
            .par_iter()
            .map(|well| {
                let (fluid, stream, wellhead_psia) = (&fluids[well.fluid].0, &well.stream, well.wellhead_psia);
                let usual = well.tubing(method, 0.02);
                let found = usual.flowing_pressure(fluid, stream, wellhead_psia).pressure_psia;
                let converged = well.tubing(method, 2e-5).flowing_pressure(fluid, stream, wellhead_psia).pressure_psia;
                assert!(found.is_finite() && converged.is_finite(), "{} {:?} {stream:?}", method.name(), well.spec);
                let fast = usual.outside_range(fluid, stream, wellhead_psia).iter().any(|o| o.what == Limited::Kinetic);
                if converged > 10_000.0 || fast {
                    return None;
                }
                let (depth_ft, height_ft) = well.spec.survey[1];
                let mut halves = TubingSpec { method, ..well.spec.clone() };
                halves.survey.insert(1, (0.4 * depth_ft, 0.4 * height_ft));
                let halves = Tubing::new(&halves, None, well.bottom_degf, 0.02).expect("a sound well");
                let split = halves.flowing_pressure(fluid, stream, wellhead_psia).pressure_psia;
                assert!(
                    (split - found).abs() < 1e-4 * found,
                    "{} {:?} {stream:?} {wellhead_psia}: {found}, split {split}",
                    method.name(),
                    well.spec
                );
                // Up and down again; where a pattern jumps, more than one wellhead pressure may belong to one below.
                if matches!(
                    method,
                    TubingMethod::Ansari | TubingMethod::HagedornBrown | TubingMethod::BeggsBrill | TubingMethod::Gray
                ) {
                    return Some(((found - converged).abs(), (split - found).abs()));
                }
                let back = usual.wellhead_pressure(fluid, stream, found).expect("it came from the surface");
                let again = usual.flowing_pressure(fluid, stream, back).pressure_psia;
                assert!(
                    (again - found).abs() < 0.05,
                    "{} {:?} {stream:?} {wellhead_psia}: {found}, {back}, {again}",
                    method.name(),
                    well.spec
                );
                Some(((found - converged).abs(), (split - found).abs()))
            })
            .collect();
        let (mut compared, mut sum, mut worst, mut at) = (0, 0.0, 0.0_f64, 0);
        for (i, error) in results.iter().enumerate().filter_map(|(i, result)| Some((i, (*result)?.0))) {
            (compared, sum) = (compared + 1, sum + error);
            if error > worst {
                (worst, at) = (error, i);
            }
        }
        let split = results.iter().flatten().map(|result| result.1).fold(0.0, f64::max);
        let well = &wells[at];
        let mean = sum / f64::from(compared);
        println!(
            "{}: {compared} compared, mean {mean:.1e}, worst {worst:.4} psi, split {split:.4} psi: {:?} {:?} {} psia",
            method.name(),
            well.spec,
            well.stream,
            well.wellhead_psia
        );
        assert!(compared > 2000, "{}: {compared}", method.name());
        assert!(worst < 0.02, "{}: {worst} psi", method.name());
    }
}

/// Rates of a fine sweep around that of a well, and the step between them.
const SWEEP: i32 = 400;
const STEP: f64 = 4e-3;

/// A rise of the flowing pressure between two neighbouring rates beyond what the rises on both sides explain.
struct Jump {
    well: usize,
    psi: f64,
    /// The same rise of the converged traverse.
    converged_psi: f64,
    rate_stb_d: f64,
}

fn excess(p: &[f64]) -> f64 {
    (p[2] - p[1] - 0.5 * (p[1] - p[0] + p[3] - p[2])).abs()
}

/// The largest jump along the rate of one well.
fn largest_jump(i: usize, well: &Well, fluid: &BlackOil, method: TubingMethod) -> Jump {
    let (usual, fine) = (well.tubing(method, 0.02), well.tubing(method, 2e-5));
    let stream = |k: i32| Stream {
        liquid_rate_stb_d: well.stream.liquid_rate_stb_d * f64::exp(STEP * f64::from(k - SWEEP / 2)),
        ..well.stream
    };
    let pressure = |tubing: &Tubing, k: i32| tubing.flowing_pressure(fluid, &stream(k), well.wellhead_psia);
    let along: Vec<_> = (0..SWEEP).map(|k| pressure(&usual, k)).collect();
    let (mut psi, mut at) = (0.0, 0);
    for (k, four) in along.windows(4).enumerate() {
        if four.iter().any(|p| p.pressure_psia > 10_000.0 || p.near_sonic) {
            continue;
        }
        let jump = excess(&[0, 1, 2, 3].map(|j: usize| four[j].pressure_psia));
        if jump > psi {
            (psi, at) = (jump, k as i32);
        }
    }
    let converged_psi = excess(&[0, 1, 2, 3].map(|j| pressure(&fine, at + j).pressure_psia));
    Jump { well: i, psi, converged_psi, rate_stb_d: stream(at + 1).liquid_rate_stb_d }
}

#[test]
fn the_flowing_pressure_has_no_jumps_along_rate() {
    // 100 wells of the hypercube, each swept over a factor of five of rate in steps of 0.4 %. The models without jumps of the
    // holdup must have none above 1 psi. The others may, where a pattern takes over a long part of the string within so little: such
    // rises must be the correlation's own, which the converged traverse has too.
    let fluids = fluids();
    let wells = wells(&fluids);
    for method in TubingMethod::ALL {
        let jumps: Vec<Jump> = (0..WELLS)
            .into_par_iter()
            .filter(|i| i % 30 == 0)
            .map(|i| largest_jump(i, &wells[i], &fluids[wells[i].fluid].0, method))
            .collect();
        let above: Vec<&Jump> = jumps.iter().filter(|jump| jump.psi > 1.0).collect();
        let worst = jumps.iter().map(|jump| jump.psi).fold(0.0, f64::max);
        println!("{}: largest {worst:.3} psi, {} wells above 1 psi", method.name(), above.len());
        // As docs/methods-tubing.md states them.
        let most = match method {
            TubingMethod::Ansari => 30.0,
            TubingMethod::HagedornBrown => 20.0,
            TubingMethod::BeggsBrill | TubingMethod::Gray => 3.0,
            _ => 1.0,
        };
        assert!(worst < most, "{}: {worst} psi", method.name());
        for jump in above {
            let Jump { well, psi, converged_psi, rate_stb_d } = jump;
            let text = format!("{} at {rate_stb_d} STB/d in {:?}", method.name(), wells[*well].spec);
            assert!((psi - converged_psi).abs() < 0.04, "{text}: {psi}, converged {converged_psi}");
        }
    }
}

//! The line into which a well flows: a fixed pressure, or one that rises with what all its wells make together.

use crate::fault::Fault;
use crate::tubing::Stream;

/// Which total sets the pressure of a shared line.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LineRate {
    /// Liquid, STB/d.
    Liquid,
    /// Gas, scf/d.
    Gas,
}

impl LineRate {
    /// The part of a well's stream that counts, STB/d or scf/d.
    #[inline]
    pub fn of(self, stream: &Stream) -> f64 {
        match self {
            Self::Liquid => stream.liquid_rate_stb_d,
            Self::Gas => stream.liquid_rate_stb_d * (1.0 - stream.water_cut) * stream.gor_scf_stb,
        }
    }
}

/// A line that several wells share, in oilfield units.
#[derive(Debug, Clone, PartialEq)]
pub struct LineSpec {
    /// Name, unique in the scenario.
    pub name: String,
    /// Which total the table goes by.
    pub rate: LineRate,
    /// Total producing-day rate, STB/d or scf/d, and pressure where the wells join it, psia.
    pub pressures: Vec<(f64, f64)>,
}

impl LineSpec {
    /// Checks the table: rates must rise, pressures must not fall, so that the wells settle at one pressure.
    ///
    /// # Errors
    /// Faults with keys of the `[[line]]` table.
    pub fn check(&self) -> Vec<Fault> {
        let mut faults = Vec::new();
        if self.pressures.is_empty() {
            faults.push(Fault::new("pressure", "the table of the line has no point"));
        }
        for (i, pair) in self.pressures.windows(2).enumerate() {
            let key = format!("pressure[{}]", i + 1);
            if pair[1].0 <= pair[0].0 {
                faults.push(
                    Fault::new(key, "the rates of the table do not rise")
                        .help("each point needs a higher rate than the one before"),
                );
            } else if pair[1].1 < pair[0].1 {
                faults.push(
                    Fault::new(
                        key,
                        format!("the pressure of the line falls to {:.1} psia at a higher rate", pair[1].1),
                    )
                    .help("a line's pressure rises with what flows through it, or stays"),
                );
            }
        }
        faults
    }

    /// The pressure at a total rate, psia: straight between the points, level before the first, and on with the last slope beyond the last.
    #[inline]
    pub fn pressure_psia(&self, total: f64) -> f64 {
        let points = &self.pressures;
        let Some(first) = points.first() else { return f64::NAN };
        if total <= first.0 || points.len() == 1 {
            return first.1;
        }
        let i = points.partition_point(|p| p.0 < total).clamp(1, points.len() - 1);
        let ((q0, p0), (q1, p1)) = (points[i - 1], points[i]);
        p0 + (p1 - p0) * (total - q0) / (q1 - q0)
    }

    /// Rise of the pressure with the total, psi per STB/d or scf/d.
    pub fn slope(&self, total: f64) -> f64 {
        let step = 1e-6 * total.max(1.0);
        (self.pressure_psia(total + step) - self.pressure_psia(total - step)) / (2.0 * step)
    }
}

/// The line as one well faces it at one instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Line<'a> {
    /// At this pressure, psia.
    Fixed(f64),
    /// Shared: its pressure moves with this well's own rate, and the others give way.
    Shared {
        /// Its table.
        line: &'a LineSpec,
        /// What the others bring now, STB/d or scf/d.
        others: f64,
        /// What this well brings now, STB/d or scf/d.
        own: f64,
        /// Part of a change of its own that the line feels once the others have given way.
        felt: f64,
    },
}

/// A shared line as one well faces it, kept beyond the run that found it.
#[derive(Debug, Clone, PartialEq)]
pub struct KeptLine {
    line: LineSpec,
    others: f64,
    own: f64,
    felt: f64,
}

impl KeptLine {
    /// Keeps a shared line; `None` for a fixed pressure.
    pub fn of(line: Line<'_>) -> Option<Self> {
        match line {
            Line::Fixed(_) => None,
            Line::Shared { line, others, own, felt } => Some(Self { line: line.clone(), others, own, felt }),
        }
    }

    /// The line again.
    pub fn line(&self) -> Line<'_> {
        Line::Shared { line: &self.line, others: self.others, own: self.own, felt: self.felt }
    }

    /// Its pressure with all wells as they were, psia.
    pub fn pressure_psia(&self) -> f64 {
        self.line.pressure_psia(self.others + self.own)
    }
}

impl Line<'_> {
    /// Its pressure while the well brings a stream, psia.
    #[inline]
    pub fn pressure_psia(&self, stream: &Stream) -> f64 {
        match self {
            Self::Fixed(psia) => *psia,
            Self::Shared { line, others, own, felt } => {
                line.pressure_psia(others + own + felt * (line.rate.of(stream) - own))
            }
        }
    }

    /// Its pressure while the well brings nothing, psia: with the table it tells the whole state of a line.
    pub fn idle_psia(&self) -> f64 {
        self.pressure_psia(&Stream { liquid_rate_stb_d: 0.0, water_cut: 0.0, gor_scf_stb: 0.0 })
    }
}

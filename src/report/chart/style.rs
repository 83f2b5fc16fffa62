//! Colours, dashes and markers. They stay apart for colour-blind readers and in grey, since lightness, dash
//! and marker change together with the hue.

use super::Colour;

pub(super) const INK: Colour = [38, 42, 48];
pub(super) const QUIET: Colour = [112, 118, 126];
pub(super) const GRID: Colour = [228, 231, 234];
pub(super) const FRAME: Colour = [170, 176, 182];
/// What lies between inflow and tubing curve.
pub(super) const GAP: Colour = [250, 232, 198];
pub(super) const INFLOW: Colour = [27, 58, 92];
pub(super) const TUBING: Colour = [196, 96, 40];

/// How a line is broken.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Dash {
    Solid,
    Long,
    Short,
    Mixed,
}

impl Dash {
    /// Lengths drawn and left out in turn, px; empty: unbroken.
    pub(super) fn pattern(self) -> &'static [f64] {
        match self {
            Self::Solid => &[],
            Self::Long => &[9.0, 4.0],
            Self::Short => &[2.5, 3.0],
            Self::Mixed => &[9.0, 3.0, 2.5, 3.0],
        }
    }
}

/// The look of a marker.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Mark {
    Disc,
    Square,
    Triangle,
    Diamond,
}

/// The look of one series.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Look {
    pub colour: Colour,
    pub width: f64,
    pub dash: Dash,
    pub mark: Mark,
}

const COLOURS: [Colour; 8] = [
    [27, 58, 92],
    [214, 126, 44],
    [58, 142, 140],
    [128, 72, 118],
    [176, 158, 60],
    [96, 108, 120],
    [112, 168, 214],
    [150, 48, 44],
];
const DASHES: [Dash; 4] = [Dash::Solid, Dash::Long, Dash::Mixed, Dash::Short];
const MARKS: [Mark; 4] = [Mark::Disc, Mark::Square, Mark::Triangle, Mark::Diamond];

/// The look of the series of this index.
pub(super) fn look(index: usize) -> Look {
    // The dash moves on once more after a round of colours, so that 32 series differ.
    let dash = (index + index / COLOURS.len()) % DASHES.len();
    Look { colour: COLOURS[index % COLOURS.len()], width: 1.8, dash: DASHES[dash], mark: MARKS[index % MARKS.len()] }
}

/// The look of a total over all wells: broad and pale, so that the wells' own lines stay visible on it.
pub(super) const TOTAL: Look = Look { colour: [172, 180, 188], width: 5.0, dash: Dash::Solid, mark: Mark::Disc };

/// The look of what only the tank has.
pub(super) const TANK: Look = Look { colour: INK, width: 2.6, dash: Dash::Solid, mark: Mark::Disc };

//! The fixed wording of events and doubts.

use crate::forecast::{DoubtKind, EventKind};

/// The fixed wording of an event.
pub fn event_text(kind: EventKind) -> &'static str {
    match kind {
        EventKind::WellStarted => "well started",
        EventKind::PlateauLost => "plateau lost",
        EventKind::TargetRegained => "target regained",
        EventKind::BubblePointCrossedDown => "bubble point crossed downwards",
        EventKind::BubblePointCrossedUp => "bubble point crossed upwards",
        EventKind::FreeGasMobile => "free gas begins to flow",
        EventKind::WaterBreakthrough => "water breakthrough",
        EventKind::RateJump => "rate jump",
        EventKind::MayHead => "may head",
        EventKind::FloorReached => "minimum flowing pressure reached",
        EventKind::FloorLeft => "minimum flowing pressure left",
        EventKind::EndOfNaturalFlow(_) => "end of natural flow",
        EventKind::CouldFlowAgain => "could flow again",
        EventKind::FlowsAgain => "flows again",
        EventKind::BalanceStopped => "balance without an answer",
        EventKind::InjectionStarted => "injection started",
        EventKind::InjectionEnded => "injection ended",
        EventKind::InjectionLimited => "injection limited",
        EventKind::InjectionLimitLeft => "injection limit left",
        EventKind::Scheduled => "scheduled change",
    }
}

/// The fixed wording of a kind of doubt.
pub fn doubt_text(kind: DoubtKind) -> &'static str {
    match kind {
        DoubtKind::OutsideRange => "outside range",
        DoubtKind::UnlikelyValue => "unlikely value",
        DoubtKind::TestMismatch => "test mismatch",
        DoubtKind::ModelChoice => "tubing model",
        DoubtKind::WeakFit => "weak fit",
        DoubtKind::PressureMismatch => "pressure mismatch",
        DoubtKind::EarlyEnd => "early end",
        DoubtKind::Heading => "heading",
        DoubtKind::Velocity => "velocity",
        DoubtKind::Deposits => "deposits",
        DoubtKind::NearSonic => "near sonic",
        DoubtKind::InjectionShortfall => "injection shortfall",
        DoubtKind::InjectionPressure => "injection pressure",
        DoubtKind::NotModelled => "not modelled",
        DoubtKind::Sanity => "sanity",
    }
}

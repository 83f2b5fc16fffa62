//! Doubts about the data of a scenario, found without running it.

use super::document::Scenario;
use crate::forecast::Doubt;

/// Everything about the data that an experienced reader would ask about.
pub fn data_doubts(_scenario: &Scenario) -> Vec<Doubt> {
    Vec::new()
}

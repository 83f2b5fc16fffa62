//! What the other rules for future inflow make of the end of natural flow.
//!
//! No test of today tells how the inflow will fall with pressure. The published rules (Fetkovich 1973, Standing 1971, Eickmeier 1968) differ, so each is
//! run once with all wells on it. With Fetkovich's curve the mobility carries C, which already belongs to an open flow that falls with the square of
//! pressure: it comes near to the pressure rule as far as the mobility is linear in pressure.

use crate::forecast::{Change, FieldSpec, FlowEnd, Forecast, FutureEnd, ModelOutcome, RunError, natural_flow_ends};
use crate::inflow::FutureRule;
use rayon::prelude::*;

/// Ends of natural flow of all wells under one rule.
pub type RuleEnds = (FutureRule, Result<Vec<Option<FlowEnd>>, RunError>);

/// Runs the field with every well on each of the rules that some well does not follow. Runs in parallel; the result does not depend on
/// the number of threads.
pub fn rule_ends(spec: &FieldSpec) -> Vec<RuleEnds> {
    let others: Vec<FutureRule> =
        FutureRule::ALL.into_iter().filter(|rule| spec.wells.iter().any(|well| well.inflow.future != *rule)).collect();
    others.par_iter().map(|rule| (*rule, natural_flow_ends(&with_rule(spec, *rule)))).collect()
}

/// Stores the ends under the other rules in a finished forecast, each well's own rule first.
pub fn store_rule_ends(spec: &FieldSpec, ends: &[RuleEnds], forecast: &mut Forecast) {
    for (w, well) in forecast.wells.iter_mut().enumerate() {
        let own = spec.wells[w].inflow.future;
        let outcome = |end: Option<FlowEnd>| end.map_or(ModelOutcome::StillFlows, ModelOutcome::Ends);
        well.future_rules = vec![FutureEnd { rule: own.name(), outcome: outcome(well.natural_flow_end) }];
        well.future_rules.extend(ends.iter().filter(|(rule, _)| *rule != own).map(|(rule, found)| FutureEnd {
            rule: rule.name(),
            outcome: match found {
                Ok(ends) => outcome(ends[w]),
                Err(error) => ModelOutcome::Failed(error.to_string()),
            },
        }));
    }
}

/// The same field with every well on a rule, also after dated events.
fn with_rule(spec: &FieldSpec, rule: FutureRule) -> FieldSpec {
    let mut other = spec.clone();
    for well in &mut other.wells {
        well.inflow.future = rule;
    }
    for change in &mut other.changes {
        if let Change::Well(_, well) = &mut change.change {
            well.inflow.future = rule;
        }
    }
    other
}

//! Where inflow and tubing meet: stable rate, flow margin.

mod fit;
mod line;
mod meeting;
mod model;
mod spec;

pub use line::{KeptLine, Line, LineRate, LineSpec};
pub use meeting::{
    Crossing, LOOK_FROM, LOOK_TO, Landscape, crossings, follow_top, follow_top_within, right_crossing, survey,
    survey_above, top_near,
};
pub use model::{Gauge, Surroundings, TestCheck, WellModel, WellNow, oil_gradient_psi_ft};
pub use spec::{FlowingSurvey, LossSpec, MakesSpec, ScreenSpec, SurveyPoint, WellSpec};

//! Rules on the answer: what it must meet, and how far the models behind it reach.

use super::catalogue::family;

family! {
    "Answers":
    expectation_not_met,
    limit_not_sure,
    confidence_without_uncertainty,
    ionic_strength_past_model,
    temperature_past_model,
}

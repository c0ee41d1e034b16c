//! Rules on the answer: what it must meet, and how far the models behind it reach.

use super::catalogue::family;

family! {
    "Answers":
    association_counted_twice,
    expectation_not_met,
    ion_lacks_interaction,
    ionic_strength_not_used,
    limit_not_sure,
    confidence_without_uncertainty,
    ionic_strength_past_model,
    litre_taken_as_kilogram,
    temperature_past_model,
}

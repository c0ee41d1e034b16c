//! Cautions: what a file asks for can hurt someone. They find no fault with the file, are
//! never hidden, and fail a check only where somebody asks for that. Each defers to those
//! who are there: safety data sheets, local codes, licensed practice.

mod gas;
mod hazard;
mod speaks_of;

use super::catalogue::family;

family! {
    "Cautions":
    toxic_gas_over_water,
    volatile_acid_not_modelled,
    chlorine_with_ammonia,
    strong_acid_or_base_dosed,
    ph_past_corrosive_threshold,
    drinking_water_ph,
    ammonia_past_aquatic_criterion,
}

/// What every caution ends with.
const DEFER: &str = "safety data sheets, local codes and licensed practice go first";

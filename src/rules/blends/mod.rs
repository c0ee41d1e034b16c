//! Rules on waters that are blended from other files.

use super::catalogue::family;

family! {
    "Blends":
    blend_shares_wrong,
    blended_water_not_solved,
    blended_case_missing,
    blended_component_missing,
    total_and_blend,
}

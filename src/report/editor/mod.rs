//! What an editor shows of a checked file: hints in the text, what is known of the thing
//! under the cursor, the outline. Plain data with byte offsets; no protocol.

mod hints;
mod hover;
mod outline;
mod picture;

pub use hints::hints;
pub use hover::hover;
pub use outline::outline;
pub use picture::{offers, picture};

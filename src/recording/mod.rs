//! What was recorded: the signals as decoded, and the twelve leads made of them.
//!
//! [`Decoded`] is what a reader of a file gives, with every signal the file holds.
//! [`Recording`] answers for each of the twelve leads: recorded, derived, or absent and why.
//! Nothing here knows a file format, a filter or paper.

mod age;
mod build;
mod context;
mod decoded;
mod lead;
mod limb;
mod marks;
mod names;
mod plausible;
mod samples;
mod twelve;

pub use context::{Age, AgeOrigin, Note, Occasion, Sex, SourceFilters, StartTime, Subject, Weight};
pub use decoded::{Decoded, Quantity, Signal, Source};
pub use lead::{Lead, PerLead};
pub use marks::{Mark, Marks};
pub use samples::Samples;
pub use twelve::{Absence, Channel, Extra, Recording, Refusal};

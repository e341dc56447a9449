//! Many recordings: one outcome per input, in input order, and files written whole or not at all.

mod plan;
mod run;
mod save;

pub use plan::{Job, Plan, PlanError};
pub use run::{Outcome, run};
pub use save::{Overwrite, SaveError, save};

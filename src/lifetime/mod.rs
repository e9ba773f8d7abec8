//! One whole mission flown once.
//!
//! [`Plan`] holds all that chance does not touch; a draw of everything uncertain turns it into an
//! [`Outcome`]. Flying is pure, and flying many draws at once gives the same outcomes.

mod audit;
mod block;
mod engine;
mod events;
mod flight;
mod layouts;
mod modulation;
mod outcome;
mod plan;
mod policy;
mod push;
mod summary;
mod timing;
mod waiting;

pub use audit::{Imbalance, audit_momentum, audit_propellant};
pub use outcome::{Entry, Outcome, TooLarge, What};
pub use plan::{Plan, PlanError};
pub use policy::UnloadRate;
pub use push::UnloadDeltaV;
pub use summary::{PhaseSummary, Transient, TypicalUnload};
pub use timing::TimingGain;

/// Lifetimes flown together: side by side.
pub const BLOCK: usize = crate::uncertain::LANES;

//! The search for a retrograde P and what else the beats show.
//!
//! A suspicion here can't say "confirmed": that word is a reader's.

mod search;

pub use search::{
    Evidence, Findings, Observation, PBefore, Polarity, RpClass, Search, SearchDone, Sign, Suspected,
    Tachycardia, WaveAtEnd, WhyNot,
};

//! Beats, marks and intervals against others' annotations and known truths.

mod beats;
mod network;

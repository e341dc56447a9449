//! The program from outside: what a user types and gets.

mod every_recording;
mod readme;
mod refusals;
mod same_bytes;

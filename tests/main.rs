//! All integration tests, one binary. A test's name is the sentence that it holds.

mod accuracy;
mod architecture;
mod batch;
mod cli;
mod demo;
mod findings;
mod input;
mod measure;
mod pdf;
mod sheet;
mod support;

//! All integration tests, one binary. A test's name is the sentence that it holds.

mod architecture;
mod input;
mod support;

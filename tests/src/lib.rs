//! Suites live beside this file as test targets; here is what they share.

pub mod generate;

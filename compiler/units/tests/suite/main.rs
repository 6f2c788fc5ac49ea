//! Tests of units, kinds and the type algebra, as one program so that it links once.

mod algebra;
mod expression;
mod laws;
mod outside;
mod properties;
mod reading;

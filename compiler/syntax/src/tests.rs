//! Whole files: items, recovery, limits, and promises that hold for any text.

mod items;
mod limits;
mod properties;
mod recovery;

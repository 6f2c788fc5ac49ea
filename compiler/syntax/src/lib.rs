//! From tokens to syntax: what a file says, as data.
//!
//! [`parse`] never fails: what cannot be read becomes an error inside the item
//! it stands in, and costs that line alone. Nothing here knows units, kinds or
//! what a name means.
//!
//! The way through the crate: `layout` groups tokens into statements and mends
//! brackets; `grammar` reads one statement; `items` puts statements together
//! into [`ast::Item`]s; [`format`] prints tokens back in the canonical layout.

pub mod ast;
pub mod codes;
mod faults;
mod format;
mod grammar;
mod items;
mod keywords;
mod layout;
mod marks;
#[cfg(test)]
mod tests;
mod words;

pub use format::format;
pub use keywords::{Keyword, Role, keywords};

use ast::SourceFile;

/// Reads a file. Never fails; faults stand in the items they belong to.
pub fn parse(text: &str) -> SourceFile {
    items::read_file(text)
}

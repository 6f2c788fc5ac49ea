//! The standard library, embedded in the program: the handbook in the language.

use pintle_syntax::ast::SourceFile;
use std::sync::{Arc, OnceLock};

/// One part of the standard library.
#[derive(Clone, Copy, Debug)]
pub struct Standard {
    /// Its name behind `std.`.
    pub name: &'static str,
    /// Its text.
    pub text: &'static str,
}

/// The part that every sheet sees without a `use` line.
pub const PRELUDE: &str = "gravity";

/// All parts.
pub const STANDARD: &[Standard] = &[
    Standard { name: "gravity", text: include_str!("../../stdlib/gravity.pintle") },
    Standard { name: "shapes", text: include_str!("../../stdlib/shapes.pintle") },
    Standard { name: "materials", text: include_str!("../../stdlib/materials.pintle") },
    Standard { name: "friction", text: include_str!("../../stdlib/friction.pintle") },
    Standard { name: "rope", text: include_str!("../../stdlib/rope.pintle") },
    Standard { name: "inertia", text: include_str!("../../stdlib/inertia.pintle") },
];

type Parsed = (Arc<str>, Arc<SourceFile>);

/// Text and syntax of a part, read once a process.
pub fn parsed(name: &str) -> Option<Parsed> {
    static CACHE: OnceLock<Vec<OnceLock<Parsed>>> = OnceLock::new();
    let cache = CACHE.get_or_init(|| STANDARD.iter().map(|_| OnceLock::new()).collect());
    let at = STANDARD.iter().position(|it| it.name == name)?;
    let slot = cache.get(at)?;
    Some(slot.get_or_init(|| (STANDARD[at].text.into(), Arc::new(pintle_syntax::parse(STANDARD[at].text)))).clone())
}

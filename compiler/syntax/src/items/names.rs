//! What an item is called, for outlines, completion and messages.

use crate::ast::{Item, ItemKind, Name};

impl Item {
    /// The name that the item declares, where it declares one.
    ///
    /// A `wanted` declares one only where its path is a single word.
    pub fn name(&self) -> Option<&Name> {
        match &self.kind {
            ItemKind::Given { name, .. }
            | ItemKind::Derived { name, .. }
            | ItemKind::Material { name, .. }
            | ItemKind::Body { name, .. }
            | ItemKind::Rotor { name, .. }
            | ItemKind::Load { name, .. }
            | ItemKind::Spring { name, .. }
            | ItemKind::Axis { name, .. }
            | ItemKind::Unit { name, .. }
            | ItemKind::Train { name, .. }
            | ItemKind::Brake { name, .. }
            | ItemKind::Clutch { name, .. }
            | ItemKind::Ledger { name, .. }
            | ItemKind::Case { name, .. }
            | ItemKind::Shape { name, .. }
            | ItemKind::Formula { name, .. }
            | ItemKind::Component { name, .. }
            | ItemKind::Part { name, .. } => Some(name),
            ItemKind::Wanted(wanted) => match wanted.path.segments.as_slice() {
                [only] if only.index.is_none() => Some(&only.name),
                _ => None,
            },
            ItemKind::Later(later) => later.name.as_ref(),
            ItemKind::Broken { name, .. } => name.as_ref(),
            ItemKind::Sheet { .. }
            | ItemKind::Library { .. }
            | ItemKind::Use { .. }
            | ItemKind::Prose { .. }
            | ItemKind::Assume { .. }
            | ItemKind::Limit { .. }
            | ItemKind::Confirm { .. } => None,
        }
    }

    /// The word that begins such an item; empty for prose, definitions and
    /// what could not be read.
    pub fn keyword(&self) -> &'static str {
        match &self.kind {
            ItemKind::Sheet { .. } => "sheet",
            ItemKind::Library { .. } => "library",
            ItemKind::Use { .. } => "use",
            ItemKind::Given { .. } => "given",
            ItemKind::Assume { .. } => "assume",
            ItemKind::Material { .. } => "material",
            ItemKind::Body { .. } => "body",
            ItemKind::Rotor { .. } => "rotor",
            ItemKind::Load { .. } => "load",
            ItemKind::Spring { .. } => "spring",
            ItemKind::Axis { .. } => "axis",
            ItemKind::Unit { .. } => "unit",
            ItemKind::Train { .. } => "train",
            ItemKind::Brake { .. } => "brake",
            ItemKind::Clutch { .. } => "clutch",
            ItemKind::Ledger { .. } => "ledger",
            ItemKind::Wanted(_) => "wanted",
            ItemKind::Limit { .. } => "limit",
            ItemKind::Case { .. } => "case",
            ItemKind::Confirm { .. } => "confirm",
            ItemKind::Shape { .. } => "shape",
            ItemKind::Formula { .. } => "formula",
            ItemKind::Component { .. } => "component",
            ItemKind::Part { .. } => "part",
            ItemKind::Later(later) => match later.keyword.text.as_str() {
                "run" => "run",
                "cycle" => "cycle",
                "vary" => "vary",
                _ => "curve",
            },
            ItemKind::Prose { .. } | ItemKind::Derived { .. } | ItemKind::Broken { .. } => "",
        }
    }
}

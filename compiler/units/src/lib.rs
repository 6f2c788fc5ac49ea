//! Units, dimensions with plane angle, kinds of quantities, and the algebra that checks formulas by them.
//!
//! A formula is checked by building its [`Type`] from the types of its parts and fitting it to the [`Kind`] that is
//! wanted; a [`Mismatch`] says what each side is and how it is mended. Values are converted by [`Unit`].
//! This crate knows the trade's quantities and their confusions; it must never know sheets, spans or values of a sheet.

mod confusion;
mod dimension;
mod kind;
mod kind_table;
mod limits_of_size;
mod mismatch;
mod rational;
mod scale;
mod suggest;
mod symbols;
mod table;
mod types;
mod unify;
mod unit;
mod unit_text;
mod words;

pub use confusion::unit_instead;
pub use dimension::{Base, Dimension};
pub use kind::{Kind, KindDef, LengthRole};
pub use limits_of_size::{Deviations, NoLimits, limits_of_size, nearest_classes};
pub use mismatch::{FixHint, Mismatch, MismatchCode, TypeWarning, WarningCode};
pub use rational::Ratio;
pub use scale::Scale;
pub use symbols::{all, all_symbols, lookup, nearest};
pub use table::{Prefixes, UnitDef};
pub use types::{ANONYMOUS, Angle, Type};
pub use unify::{Fit, Joined};
pub use unit::{Unit, UnitError, UnitErrorCode, parse};
pub use words::display_unit;

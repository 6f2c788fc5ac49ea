//! The door to the type algebra: every mismatch becomes a diagnostic that
//! names both sides and where each came from.

use super::value::Typed;
use super::{Env, Lowerer};
use crate::codes;
use pintle_graph::QuantityId;
use pintle_syntax::ast::{BinaryOp, Name, UnitText};
use pintle_text::{Diagnostic, Place};
use pintle_units::{
    FixHint, Kind, LengthRole, Mismatch, MismatchCode, Ratio, Type, TypeWarning, Unit, UnitError, UnitErrorCode,
};
use smol_str::SmolStr;

/// The type of `pi`.
pub fn pi_type() -> Type {
    Type::pi()
}

/// The range searched for an unknown without a declared one, in SI.
pub fn sensible_range(ty: &Type) -> (f64, f64) {
    match ty.kind.map(Kind::root) {
        Some(Kind::Length) => (0.0, 1e3),
        Some(Kind::AngularVelocity | Kind::Speed) => (0.0, 1e4),
        Some(Kind::Ratio) => (0.0, 1e3),
        _ => (0.0, 1e9),
    }
}

impl<'s> Lowerer<'s, '_> {
    /// The type of a kind that the compiler itself names.
    pub(super) fn kind_type(&mut self, name: &str) -> Type {
        Kind::from_name(name).map_or_else(Type::number, Type::of_kind)
    }

    /// A kind named in the sheet.
    pub(super) fn kind_named(&mut self, env: &Env, name: &Name) -> Option<Kind> {
        if let Some(kind) = Kind::from_name(&name.text) {
            return Some(kind);
        }
        let place = env.place(name.span);
        let close = Kind::nearest(&name.text);
        let mut diagnostic =
            Diagnostic::new(codes::UNKNOWN_KIND, place, format!("no kind of quantity is named `{}`", name.text));
        diagnostic = match close.first() {
            Some(first) => diagnostic
                .with_help(format!(
                    "did you mean {}?",
                    close.iter().map(|it| format!("`{it}`")).collect::<Vec<_>>().join(" or ")
                ))
                .with_fix(format!("write `{first}`"), place, *first),
            None => diagnostic.with_help("`pintle list kinds` shows them all"),
        };
        self.report(diagnostic);
        None
    }

    pub(super) fn expect(&mut self, typed: &Typed, kind: &str, what: &str) -> Option<Typed> {
        match Kind::from_name(kind) {
            Some(kind) => self.expect_kind(typed, kind, what, typed.place),
            None => Some(typed.clone()),
        }
    }

    /// The quantity taken as that kind, or None after a report.
    pub(super) fn expect_kind(&mut self, typed: &Typed, kind: Kind, what: &str, wanted_at: Place) -> Option<Typed> {
        match typed.ty.fit(kind) {
            Ok(fit) => {
                self.warn(&fit.warnings, typed.place);
                self.settle(fit.resolved, typed.place);
                Some(Typed { ty: fit.ty, ..typed.clone() })
            }
            Err(mismatch) => {
                let mut diagnostic = mismatch_at(&mismatch, typed.place);
                diagnostic = diagnostic.with_note(format!("this is {}", mismatch.found));
                if wanted_at != typed.place {
                    diagnostic = diagnostic.with_label(wanted_at, format!("{what} is {}", mismatch.expected));
                } else {
                    diagnostic.message = format!("{what}: {}", diagnostic.message);
                }
                self.report(diagnostic);
                None
            }
        }
    }

    pub(super) fn expect_length(&mut self, typed: &Typed) -> Option<Typed> {
        self.expect_kind(typed, Kind::Length, "a position", typed.place)
    }

    pub(super) fn is_of_kind(&self, typed: &Typed, kind: &str) -> bool {
        Kind::from_name(kind).is_some_and(|kind| typed.ty.fits(kind).is_ok())
    }

    pub(super) fn added(&mut self, a: &Typed, b: &Typed, op: BinaryOp, at: Place) -> Option<Type> {
        let joined = if op == BinaryOp::Add { a.ty.add_noting(&b.ty) } else { a.ty.sub_noting(&b.ty) };
        self.joined(joined, a, b, at)
    }

    /// Both sides of a comparison, or two arms of a choice.
    pub(super) fn compared(&mut self, a: &Typed, b: &Typed, at: Place) -> Option<Type> {
        let joined = a.ty.common_noting(&b.ty);
        self.joined(joined, a, b, at)
    }

    fn joined(
        &mut self,
        joined: Result<pintle_units::Joined, Mismatch>,
        a: &Typed,
        b: &Typed,
        at: Place,
    ) -> Option<Type> {
        match joined {
            Ok(joined) => {
                self.warn(&joined.warnings, at);
                self.settle(joined.resolved, at);
                Some(joined.ty)
            }
            Err(mismatch) => {
                let diagnostic = mismatch_at(&mismatch, at)
                    .with_label(a.place, a.ty.words_and_unit())
                    .with_label(b.place, b.ty.words_and_unit());
                self.report(diagnostic);
                None
            }
        }
    }

    pub(super) fn multiplied(&mut self, a: &Typed, b: &Typed, at: Place) -> Option<Type> {
        self.checked(a.ty.mul(&b.ty), at)
    }

    pub(super) fn divided(&mut self, a: &Typed, b: &Typed, at: Place) -> Option<Type> {
        self.checked(a.ty.div(&b.ty), at)
    }

    pub(super) fn raised(&mut self, a: &Typed, power: Ratio, at: Place) -> Option<Type> {
        self.checked(a.ty.pow(power), at)
    }

    pub(super) fn checked(&mut self, ty: Result<Type, Mismatch>, at: Place) -> Option<Type> {
        match ty {
            Ok(ty) => Some(ty),
            Err(mismatch) => {
                self.report(mismatch_at(&mismatch, at));
                None
            }
        }
    }

    /// Whether it may stand where a pure number must; a report if not.
    pub(super) fn pure(&mut self, typed: &Typed, what: &str) -> bool {
        match typed.ty.pure_number() {
            Ok(_) => true,
            Err(mismatch) => {
                self.report(mismatch_at(&mismatch, typed.place).with_note(format!("{what} must be a pure number")));
                false
            }
        }
    }

    /// Whether it may stand in a trigonometric function; a report if not.
    pub(super) fn angle_argument(&mut self, typed: &Typed) -> bool {
        match typed.ty.trig_argument() {
            Ok(_) => true,
            Err(mismatch) => {
                self.report(mismatch_at(&mismatch, typed.place));
                false
            }
        }
    }

    pub(super) fn warn(&mut self, warnings: &[TypeWarning], place: Place) {
        for warning in warnings.iter().filter(|warning| !warning.code.is_note()) {
            let diagnostic =
                Diagnostic::new(codes::SUSPECT_FACTOR, place, warning.message.clone()).with_help(warning.help.clone());
            if !self.out.diagnostics.contains(&diagnostic) {
                self.report(diagnostic);
            }
        }
    }

    /// The type of a named quantity: a length of which nothing says what it does is remembered by name.
    pub(super) fn named_type(&self, ty: Type) -> Type {
        match ty.open {
            Some((pintle_units::ANONYMOUS, power)) if power == Ratio::ONE => {
                ty.with_source(self.out.model.quantities.len() as u32)
            }
            _ => ty,
        }
    }

    /// Remembers what a length turned out to be at its first use, and points at a use of the other sort.
    fn settle(&mut self, resolved: Option<(u32, LengthRole)>, place: Place) {
        let Some((id, role)) = resolved else { return };
        let id = QuantityId(id);
        let Some(&(first, first_place)) = self.out.model.roles.get(&id) else {
            self.out.model.roles.insert(id, (role, place));
            return;
        };
        if first == role {
            return;
        }
        let quantity = self.out.model.quantity(id);
        let (name, defined) = (quantity.name.clone(), quantity.place);
        let diagnostic = Diagnostic::new(
            codes::LENGTH_ROLE,
            place,
            format!("`{name}` is used as a {} here, but as a {} before", role.words(), first.words()),
        )
        .with_label(first_place, format!("as a {} here", first.words()))
        .with_help(format!(
            "if both are meant, leave it so; else say what it is where it is defined, such as `{name} : {}`",
            if first == LengthRole::Path { "travel" } else { "radius" }
        ));
        let known = self
            .out
            .diagnostics
            .iter()
            .any(|it| it.code == codes::LENGTH_ROLE && it.labels.first() == diagnostic.labels.first());
        let own = |place: Place| self.sheet.origin(place.item) != crate::source::Origin::Standard;
        if !known && own(place) && own(first_place) && own(defined) {
            self.report(diagnostic);
        }
    }

    pub(super) fn hint_open_kind(&mut self, typed: &Typed, name: &Name, place: Place) {
        if typed.ty.is_torque_or_energy() {
            self.report(
                Diagnostic::new(codes::OPEN_KIND, place, format!("`{}` may be a torque or an energy", name.text))
                    .with_help(format!("say which: `{} : torque = ...` or `{} : energy = ...`", name.text, name.text)),
            );
        }
    }

    /// Whether a quantity of that type can be shown in that unit.
    pub(super) fn unit_fits(&self, unit: &Unit, ty: &Type) -> bool {
        Type::of_unit(unit).common(ty).is_ok() || ty.kind.is_some_and(|kind| Type::of_unit(unit).fits(kind).is_ok())
    }

    /// A unit that the sheet declares.
    pub(super) fn unit_of(&mut self, name: SmolStr, ty: &Type, size: f64) -> Unit {
        let base = Unit::coherent(ty.dim);
        let mut unit = Unit::named(&name, size, &base).unwrap_or(base);
        unit.kind = ty.kind;
        unit
    }

    pub(super) fn unit_error(&self, env: &Env, text: &UnitText, place: Place, error: UnitError) -> Diagnostic {
        let code = match error.code {
            UnitErrorCode::Ambiguous | UnitErrorCode::Solidus => codes::AMBIGUOUS_UNIT,
            UnitErrorCode::Offset => codes::UNIT_MISMATCH,
            _ => codes::UNKNOWN_UNIT,
        };
        let mut diagnostic = Diagnostic::new(code, place, error.message);
        // `3 kg*x` with x a name of the sheet is a product written without spaces.
        let word = text.text.get(error.range.clone()).unwrap_or("");
        let is_name = env.local(word).is_some() || self.sheet.lookup(env.origin, word).is_some();
        if is_name && error.code == UnitErrorCode::Unknown {
            let before = text.text.get(..error.range.start).unwrap_or("");
            let after = text.text.get(error.range.end..).unwrap_or("");
            let (front, operator) = match before.char_indices().last() {
                Some((at, operator)) => (&before[..at], operator.to_string()),
                None => ("", "*".to_string()),
            };
            let separate = if front.is_empty() {
                format!("{operator} {word}{after}")
            } else {
                format!("{front} {operator} {word}{after}")
            };
            return diagnostic
                .with_note(format!("`{word}` is a name of the sheet, not a unit"))
                .with_help("white space separates a unit from arithmetic")
                .with_fix(format!("write `{separate}`"), place, separate);
        }
        if let Some(help) = error.help {
            diagnostic = diagnostic.with_help(help);
        }
        if let Some(first) = error.suggestions.first() {
            let mut mended = text.text.to_string();
            if mended.get(error.range.clone()).is_some() {
                mended.replace_range(error.range, first);
            }
            if diagnostic.help.is_none() {
                let list: Vec<String> = error.suggestions.iter().take(3).map(|it| format!("`{it}`")).collect();
                diagnostic = diagnostic.with_help(format!("did you mean {}?", list.join(" or ")));
            }
            diagnostic = diagnostic.with_fix(format!("write `{mended}`"), place, mended);
        }
        diagnostic
    }
}

fn mismatch_at(mismatch: &Mismatch, place: Place) -> Diagnostic {
    let code = match mismatch.code {
        MismatchCode::Kind | MismatchCode::Angle | MismatchCode::Temperature => codes::KIND_MISMATCH,
        _ => codes::UNIT_MISMATCH,
    };
    let mut diagnostic = Diagnostic::new(code, place, mismatch.message.clone());
    if let Some(help) = &mismatch.help {
        diagnostic = diagnostic.with_help(help.clone());
    }
    match mismatch.fix.as_deref() {
        Some(FixHint::Append(text)) => {
            let end = Place { item: place.item, span: pintle_text::Span::at(place.span.end) };
            diagnostic = diagnostic.with_fix(format!("add `{}`", text.trim()), end, text.clone());
        }
        Some(FixHint::ReplaceUnit(unit)) => {
            diagnostic.help = Some(match diagnostic.help.take() {
                Some(help) => format!("{help} (unit: {unit})"),
                None => format!("write the unit {unit}"),
            });
        }
        Some(FixHint::Wrap(front, back)) if diagnostic.help.is_none() => {
            diagnostic = diagnostic.with_help(format!("write `{front}...{back}`"));
        }
        Some(FixHint::AppendSlot(text)) if diagnostic.help.is_none() => {
            diagnostic = diagnostic.with_help(format!("multiply: `{}`", text.trim()));
        }
        _ => {}
    }
    diagnostic
}

//! From names to equations: every item of a sheet becomes nodes of one graph,
//! and units and kinds are checked on the way.
//!
//! Lowering never stops at a fault: it reports, marks the value as failed, and
//! goes on with everything that does not need it. It knows nothing of how
//! equations are solved or shown.

mod axes;
mod bodies;
mod bodies_built_in;
mod calls;
mod expressions;
mod fields;
mod ledger_energies;
mod ledgers;
mod limits;
mod literals;
mod loads;
mod materials;
mod placements;
mod quantities;
mod reflected;
mod rotor_members;
mod rotors;
mod shapes;
pub mod space;
mod templates;
mod trains;
mod typing;
mod value;

use crate::QuickMap;
use crate::codes;
use crate::model::Model;
use crate::names::{Sheet, defined_name};
use crate::source::{Files, Origin};
use pintle_graph::{Graph, InputId, NodeId, QuantityId};
use pintle_syntax::ast::{Definition, Expr, Field, Item, ItemKind};
use pintle_text::{Diagnostic, ItemId, Place, Span};
use pintle_units::{Type, Unit};
use smol_str::SmolStr;
use std::collections::BTreeMap;
use std::sync::Arc;

pub use calls::FUNCTIONS;
pub use ledgers::{LedgerPlan, LinePlan};
pub use limits::{ConfirmPlan, LimitPlan};
use templates::{Template, TemplateKey};
pub use value::{Condition, Typed, Value};

/// What a case changes: the full name on the left, the value on the right.
#[derive(Clone, Debug, Default)]
pub struct Overrides<'s> {
    /// By dotted name; the item is the case's own.
    pub fields: BTreeMap<SmolStr, (ItemId, &'s Field)>,
}

/// An equation between unknowns, with where it stands.
#[derive(Clone, Debug)]
pub struct Equation {
    /// Left side.
    pub left: NodeId,
    /// Right side.
    pub right: NodeId,
    /// Where.
    pub place: Place,
    /// The ledger that it closes; None: written in the sheet.
    pub ledger: Option<SmolStr>,
}

/// A condition that values must satisfy, else the sheet is wrong.
#[derive(Clone, Debug)]
pub struct Requirement {
    /// 1 where it holds.
    pub condition: NodeId,
    /// The two sides and the type of the left one, for the message.
    pub sides: Option<(NodeId, NodeId, Type)>,
    /// What asks for it, and what it asks: "train `haul`", "the ratios multiply to one".
    /// None: the shape or formula at `origin`, the words that stand there.
    pub words: Option<(String, String)>,
    /// The thing that breaks it.
    pub subject: SmolStr,
    /// What hangs on it: the results of a formula; none: all quantities named `SUBJECT.*`.
    pub results: Vec<NodeId>,
    /// Where the subject stands.
    pub place: Place,
    /// Where the requirement stands.
    pub origin: Place,
}

/// The sheet under one case, as equations.
#[derive(Debug, Default)]
pub struct Lowered {
    /// Graph and quantities; values are not there yet.
    pub model: Model,
    /// Unknowns in the order of the sheet.
    pub unknowns: Vec<(InputId, QuantityId)>,
    /// Equations that fix them.
    pub equations: Vec<Equation>,
    /// Requirements of shapes and formulas.
    pub requirements: Vec<Requirement>,
    /// How many equations could not be read; reported where they stand.
    pub n_broken_equations: usize,
    /// Ledgers.
    pub ledgers: Vec<LedgerPlan>,
    /// Limits.
    pub limits: Vec<LimitPlan>,
    /// Second routes.
    pub confirms: Vec<ConfirmPlan>,
    /// For each node that can lack a value, where it was written.
    pub node_places: QuickMap<NodeId, Place>,
    /// What was reported.
    pub diagnostics: Vec<Diagnostic>,
    /// What the sheet holds that calls for caution.
    pub hazards: Hazards,
}

/// What a sheet holds that can hurt someone.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Hazards {
    /// A load on a path that rises.
    pub hoisting: bool,
    /// A brake.
    pub braking: bool,
    /// A rotor whose energy is reckoned.
    pub stored_energy: bool,
    /// A spring.
    pub spring: bool,
    /// A limit on rim speed or stress.
    pub rim_speed: bool,
}

/// Turns a sheet into equations under `overrides`; `case` names the case for
/// ledgers restricted by `under`.
pub fn lower<'s>(sheet: &'s Sheet, overrides: &Overrides<'s>, case: &[SmolStr], files: &dyn Files) -> Lowered {
    lower_unless(sheet, overrides, case, files, &|| false)
}

/// As [`lower`], but breaks off once `cancel` says so: what there is then is of no use.
pub(crate) fn lower_unless<'s>(
    sheet: &'s Sheet,
    overrides: &Overrides<'s>,
    case: &[SmolStr],
    files: &dyn Files,
    cancel: &dyn Fn() -> bool,
) -> Lowered {
    let mut lowerer = Lowerer {
        sheet,
        overrides,
        case,
        files,
        out: Lowered::default(),
        entities: QuickMap::default(),
        open: Vec::new(),
        units: QuickMap::default(),
        used_overrides: Vec::new(),
        states: Vec::new(),
        reported_shapes: Vec::new(),
        templates: QuickMap::default(),
        constants_asked: 0,
        scratch: String::new(),
    };
    // Growing large tables costs more than a little room: a body has about twenty nodes, six of them named.
    lowerer.out.model.graph.reserve(16 * sheet.order.len());
    lowerer.out.model.quantities.reserve(5 * sheet.order.len());
    lowerer.run(cancel);
    lowerer.out
}

pub(crate) struct Lowerer<'s, 'r> {
    sheet: &'s Sheet,
    overrides: &'r Overrides<'s>,
    case: &'r [SmolStr],
    files: &'r dyn Files,
    out: Lowered,
    entities: QuickMap<ItemId, Value>,
    /// Items being lowered just now.
    open: Vec<ItemId>,
    units: QuickMap<(Origin, SmolStr), Option<Arc<Unit>>>,
    used_overrides: Vec<SmolStr>,
    /// States of every problem: member's state name without the problem, and the full quantity.
    states: Vec<(SmolStr, QuantityId)>,
    reported_shapes: Vec<ItemId>,
    /// Shapes read once, to be repeated.
    templates: QuickMap<TemplateKey, Template>,
    /// How often a value was asked for while building.
    constants_asked: usize,
    /// Where long names are put together.
    scratch: String,
}

impl space::Arithmetic for Lowerer<'_, '_> {
    fn graph(&mut self) -> &mut Graph {
        &mut self.out.model.graph
    }
}

/// Where an expression stands and what it can see besides the sheet's items.
#[derive(Clone)]
pub(crate) struct Env {
    item: ItemId,
    origin: Origin,
    /// Names of the construct that is being read, later ones first.
    locals: Vec<(SmolStr, Value)>,
}

impl Env {
    fn place(&self, span: Span) -> Place {
        Place { item: self.item, span }
    }

    fn local(&self, name: &str) -> Option<&Value> {
        self.locals.iter().rev().find(|(known, _)| known == name).map(|(_, value)| value)
    }

    fn define(&mut self, name: impl Into<SmolStr>, value: Value) {
        self.locals.push((name.into(), value));
    }
}

impl<'s> Lowerer<'s, '_> {
    fn run(&mut self, cancel: &dyn Fn() -> bool) {
        let sheet = self.sheet;
        for &id in &sheet.order {
            if sheet.circular.contains(&id) {
                self.entities.insert(id, Value::Failed);
            }
        }
        for &id in &sheet.order {
            if cancel() {
                return;
            }
            self.entity(id);
        }
        // Statements that name things but that nothing can name.
        for (id, item) in sheet.own_items() {
            match &item.kind {
                ItemKind::Wanted(wanted) => self.equations(&mut self.env(id), wanted),
                ItemKind::Limit { every, condition } => self.limit(id, item, *every, condition),
                ItemKind::Confirm { value, agrees } => self.confirm(id, item, value, agrees),
                _ => {}
            }
        }
        self.check_overrides();
    }

    fn report(&mut self, diagnostic: Diagnostic) {
        // In half-typed text what is missing is being written.
        let half_typed = |id| self.sheet.item(id).is_some_and(|item| !item.errors.is_empty());
        if diagnostic.code == codes::MISSING_FIELD && half_typed(diagnostic.place.item) {
            return;
        }
        self.out.diagnostics.push(diagnostic);
    }

    fn env(&self, item: ItemId) -> Env {
        Env { item, origin: self.sheet.origin(item), locals: Vec::new() }
    }

    /// What an item stands for, lowered now if it was not yet.
    fn entity(&mut self, id: ItemId) -> Value {
        if let Some(value) = self.entities.get(&id) {
            return value.clone();
        }
        // Items are lowered in order of need; only library items come late, and
        // a circle among them would be a fault of the library.
        if self.open.contains(&id) || self.open.len() > 64 {
            return Value::Failed;
        }
        let sheet = self.sheet;
        let Some(item) = sheet.item(id) else { return Value::Failed };
        self.open.push(id);
        let value = self.item(id, item);
        self.open.pop();
        self.entities.insert(id, value.clone());
        value
    }

    fn item(&mut self, id: ItemId, item: &'s Item) -> Value {
        let mut env = self.env(id);
        match &item.kind {
            ItemKind::Given { name, kind, value } => self.given(&mut env, item, name, kind.as_ref(), value),
            ItemKind::Derived { name, kind, value } => self.derived(&mut env, item, name, kind.as_ref(), value),
            ItemKind::Material { name, fields } => self.material(&mut env, item, name, fields),
            ItemKind::Body { name, shape, fields } => self.body(&mut env, item, name, shape, fields),
            ItemKind::Rotor { name, axis, placements } => self.rotor(&mut env, name, axis.as_ref(), placements),
            ItemKind::Load { name, fields, path } => self.load(&mut env, item, name, fields, path.as_ref()),
            ItemKind::Spring { name, on, fields } => self.spring(&mut env, item, name, on.as_ref(), fields),
            ItemKind::Brake { name, on, fields } => self.brake(&mut env, item, name, on.as_ref(), fields),
            ItemKind::Axis { name, through, along } => self.axis(&mut env, name, through, along),
            ItemKind::Train { name, links } => self.train(&mut env, item, name, links),
            ItemKind::Ledger { name, train, under, lines } => self.ledger(&mut env, name, train.as_ref(), under, lines),
            ItemKind::Wanted(wanted) => self.wanted_item(&mut env, item, wanted),
            ItemKind::Unit { .. } => Value::Unit(id),
            ItemKind::Shape { .. } | ItemKind::Formula { .. } => Value::Template(id),
            ItemKind::Component { name, .. } => {
                self.not_supported(env.place(name.span), "a `component`");
                Value::Failed
            }
            ItemKind::Part { name, .. } => {
                self.not_supported(env.place(name.span), "a `part` of a component");
                Value::Failed
            }
            ItemKind::Clutch { name, .. } => {
                self.not_supported(env.place(name.span), "a `clutch`");
                Value::Failed
            }
            ItemKind::Later(later) => {
                let word = format!("`{}`", later.keyword.text);
                self.not_supported(env.place(later.keyword.span), &word);
                Value::Failed
            }
            ItemKind::Sheet { .. }
            | ItemKind::Library { .. }
            | ItemKind::Use { .. }
            | ItemKind::Prose { .. }
            | ItemKind::Assume { .. }
            | ItemKind::Limit { .. }
            | ItemKind::Case { .. }
            | ItemKind::Confirm { .. }
            | ItemKind::Broken { .. } => Value::Failed,
        }
    }

    fn not_supported(&mut self, place: Place, what: &str) {
        self.report(
            Diagnostic::new(codes::NOT_SUPPORTED_YET, place, format!("{what} is not supported yet"))
                .with_help("it is read, so that the sheet stays whole, but nothing is computed from it"),
        );
    }

    /// The field that stands for `name`: a case's, else the sheet's own.
    fn overridden<'f>(&mut self, name: &str, field: Option<(ItemId, &'f Field)>) -> Option<(ItemId, &'f Field)>
    where
        's: 'f,
    {
        match self.overrides.fields.get(name) {
            Some(&(item, over)) => {
                self.used_overrides.push(name.into());
                Some((item, over))
            }
            None => field,
        }
    }

    /// A case's value for a quantity that is defined by `value`.
    fn overridden_value<'f>(&mut self, name: &str, env: &Env, value: &'f Definition) -> (Env, &'f Definition)
    where
        's: 'f,
    {
        if let Some(&(item, field)) = self.overrides.fields.get(name)
            && let Some(over) = &field.value
        {
            self.used_overrides.push(name.into());
            return (self.env(item), over);
        }
        (env.clone(), value)
    }

    fn check_overrides(&mut self) {
        let unused: Vec<(SmolStr, Place)> = self
            .overrides
            .fields
            .iter()
            .filter(|(name, _)| !self.used_overrides.contains(name))
            .map(|(name, (item, field))| (name.clone(), Place { item: *item, span: field.path.span }))
            .collect();
        for (name, place) in unused {
            self.report(
                Diagnostic::new(
                    codes::UNKNOWN_OVERRIDE,
                    place,
                    format!("a case changes `{name}`, which is no given and no field"),
                )
                .with_help("write the name of a given, or ITEM.FIELD as the item spells it, such as `holding.torque`"),
            );
        }
    }

    /// A place for the name of an item, for second labels.
    fn name_place(&self, id: ItemId) -> Place {
        let span = self.sheet.item(id).and_then(defined_name).map_or(Span::default(), |name| name.span);
        Place { item: id, span }
    }

    fn expr_text(&self, env: &Env, expr: &Expr) -> String {
        let text = self.sheet.sources.text(env.place(expr.span));
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }
}

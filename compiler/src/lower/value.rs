//! What an expression can stand for.

use super::axes::Axis;
use super::bodies::Body;
use super::ledgers::LedgerEntity;
use super::loads::{Brake, Load, Spring};
use super::rotors::Rotor;
use super::trains::Train;
use pintle_graph::{CompareOp, NodeId};
use pintle_text::{ItemId, Place};
use pintle_units::Type;
use smol_str::SmolStr;
use std::rc::Rc;

/// A number with its type and the place that it comes from.
#[derive(Clone, Debug)]
pub struct Typed {
    /// Its node.
    pub node: NodeId,
    /// Dimension, angle exponent and kind.
    pub ty: Type,
    /// Where it was written.
    pub place: Place,
}

/// A condition, with its two sides where it compares.
#[derive(Clone, Debug)]
pub struct Condition {
    /// 1 where it holds, else 0.
    pub node: NodeId,
    /// What is compared.
    pub sides: Option<(Typed, CompareOp, Typed)>,
    /// Where it was written.
    pub place: Place,
}

/// What an expression stands for.
#[derive(Clone, Debug)]
pub enum Value {
    /// A number.
    Number(Typed),
    /// A condition.
    Condition(Box<Condition>),
    /// A point.
    Point(Vec<Value>, Place),
    /// A list.
    List(Vec<Value>, Place),
    /// Things counted from `first`.
    Series {
        /// Index of the first.
        first: i64,
        /// The things.
        items: Vec<Value>,
    },
    /// A text.
    Text(SmolStr),
    /// A thing with members.
    Object(Rc<Object>),
    /// A shape or formula, to be filled in.
    Template(ItemId),
    /// A unit that the sheet declares.
    Unit(ItemId),
    /// Reported elsewhere.
    Failed,
}

/// A thing with members.
#[derive(Clone, Debug)]
pub struct Object {
    /// Full name.
    pub name: SmolStr,
    /// What it is, with its article: "a rotor".
    pub what: &'static str,
    /// Members in order.
    pub members: Vec<(SmolStr, Value)>,
    /// Its particulars.
    pub entity: Entity,
}

/// The particulars of an object.
#[derive(Clone, Debug)]
pub enum Entity {
    /// Members only.
    Plain,
    /// A material.
    Material,
    /// A body.
    Body(Body),
    /// A rotor.
    Rotor(Rotor),
    /// A load.
    Load(Load),
    /// A spring.
    Spring(Spring),
    /// A brake.
    Brake(Brake),
    /// An axis.
    Axis(Axis),
    /// A train.
    Train(Train),
    /// A ledger.
    Ledger(LedgerEntity),
}

impl Object {
    /// A member by name.
    pub fn member(&self, name: &str) -> Option<&Value> {
        self.members.iter().find(|(known, _)| known == name).map(|(_, value)| value)
    }
}

impl Value {
    /// What it is, with its article, for messages.
    pub fn what(&self) -> String {
        match self {
            Value::Number(_) => "a number".into(),
            Value::Condition(_) => "a condition".into(),
            Value::Point(..) => "a point".into(),
            Value::List(..) => "a list".into(),
            Value::Series { .. } => "a series".into(),
            Value::Text(_) => "a text".into(),
            Value::Object(object) => object.what.into(),
            Value::Template(_) => "a shape or formula".into(),
            Value::Unit(_) => "a unit".into(),
            Value::Failed => "a value that failed".into(),
        }
    }

    /// Whether it was reported elsewhere.
    pub fn is_failed(&self) -> bool {
        matches!(self, Value::Failed)
    }

    /// An object without particulars.
    pub fn plain(name: impl Into<SmolStr>, what: &'static str, members: Vec<(SmolStr, Value)>) -> Value {
        Value::Object(Rc::new(Object { name: name.into(), what, members, entity: Entity::Plain }))
    }
}

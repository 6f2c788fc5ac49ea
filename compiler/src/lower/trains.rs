//! Trains: members, links, and the speed of each member against the first.

use super::fields::Fields;
use super::loads::Load;
use super::space::Arithmetic;
use super::value::{Entity, Object, Typed, Value};
use super::{Env, Lowerer, Requirement};
use crate::codes;
use crate::results::{Group, Shown};
use pintle_graph::{CompareOp, Function, NodeId, Op};
use pintle_syntax::ast::{Argument, ExprKind, Item, Link as LinkSyntax, Name};
use pintle_text::{Diagnostic, Place};
use smol_str::SmolStr;
use std::rc::Rc;

/// A rotor or load of a train.
#[derive(Clone, Debug)]
pub struct Member {
    /// Full name.
    pub name: SmolStr,
    /// Where it is first named.
    pub place: Place,
    /// What it is.
    pub kind: MemberKind,
    /// Size of speed(member)/speed(first member).
    pub coefficient: NodeId,
    /// Sense against the first member: turns or moves up with it, or against it.
    pub sense: Sense,
    /// The link that leads to the first member and the member there; None: it is the first.
    pub parent: Option<(usize, usize)>,
}

/// What a member is.
#[derive(Clone, Debug)]
pub enum MemberKind {
    /// Turns; moment of inertia and greatest radius.
    Rotor(NodeId, Option<NodeId>),
    /// Moves along a path.
    Load(Load),
}

/// Turning or moving sense.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sense {
    /// With the reference.
    Same,
    /// Against it.
    Opposite,
}

impl Sense {
    fn with(self, other: Sense) -> Sense {
        if self == other { Sense::Same } else { Sense::Opposite }
    }

    /// 1 or -1.
    pub fn sign(self) -> f64 {
        if self == Sense::Same { 1.0 } else { -1.0 }
    }
}

/// A link.
#[derive(Clone, Debug)]
pub struct Link {
    /// Its name.
    pub name: SmolStr,
    /// Its kind as written.
    pub kind: SmolStr,
    /// Member at the arrow's tail.
    pub from: usize,
    /// Member at its head.
    pub to: usize,
    /// speed(from)/speed(to).
    pub ratio: NodeId,
    /// Turning sense.
    pub sense: Sense,
    /// Efficiency with the arrow; None: no loss.
    pub efficiency: Option<NodeId>,
    /// Efficiency against the arrow; None: no loss.
    pub back: Option<NodeId>,
    /// No-load torque at the tail.
    pub drag: Option<NodeId>,
    /// Where.
    pub place: Place,
}

/// A train.
#[derive(Clone, Debug)]
pub struct Train {
    /// Its name.
    pub name: SmolStr,
    /// Members; the first is the reference.
    pub members: Vec<Member>,
    /// Links.
    pub links: Vec<Link>,
}

impl Train {
    /// A member by its full name.
    pub fn member(&self, name: &str) -> Option<usize> {
        self.members.iter().position(|member| member.name == name)
    }
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn train(&mut self, env: &mut Env, item: &'s Item, name: &Name, links: &'s [LinkSyntax]) -> Value {
        let place = env.place(name.span);
        let one = self.num(1.0);
        let mut train = Train { name: name.text.clone(), members: Vec::new(), links: Vec::new() };
        let mut members: Vec<(SmolStr, Value)> = Vec::new();
        let mut fine = true;
        for link in links {
            let ends = [&link.from, &link.to].map(|path| {
                let object = match self.path(env, path) {
                    Value::Object(object) => object,
                    Value::Failed => return None,
                    other => {
                        self.report(Diagnostic::new(
                            codes::NOT_A_QUANTITY,
                            env.place(path.span),
                            format!("a link joins rotors and loads, but this is {}", other.what()),
                        ));
                        return None;
                    }
                };
                let kind = match &object.entity {
                    Entity::Rotor(rotor) => MemberKind::Rotor(rotor.moment, rotor.reach),
                    Entity::Load(load) => MemberKind::Load(load.clone()),
                    _ => {
                        self.report(
                            Diagnostic::new(
                                codes::NOT_A_QUANTITY,
                                env.place(path.span),
                                format!("a link joins rotors and loads, but `{}` is {}", object.name, object.what),
                            )
                            .with_help("put a body on a rotor: `rotor NAME about x { BODY }`"),
                        );
                        return None;
                    }
                };
                Some(match train.member(&object.name) {
                    Some(at) => at,
                    None => {
                        train.members.push(Member {
                            name: object.name.clone(),
                            place: env.place(path.span),
                            kind,
                            coefficient: one,
                            sense: Sense::Same,
                            parent: None,
                        });
                        train.members.len() - 1
                    }
                })
            });
            let [Some(from), Some(to)] = ends else {
                fine = false;
                continue;
            };
            match self.link(env, item, &train, link, from, to) {
                Some((link, value)) => {
                    members.push((link.name.clone(), value));
                    train.links.push(link);
                }
                None => fine = false,
            }
        }
        if !fine || train.members.is_empty() {
            if train.members.is_empty() && fine {
                self.report(
                    Diagnostic::new(codes::MISSING_FIELD, place, format!("the train `{}` holds no link", name.text))
                        .with_help("add one: `gear NAME = ROTOR -> ROTOR { ratio = ... }`"),
                );
            }
            return Value::Failed;
        }
        if self.connect(&mut train).is_none() {
            return Value::Failed;
        }
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "a train",
            members,
            entity: Entity::Train(train),
        }))
    }

    fn link(
        &mut self,
        env: &mut Env,
        item: &'s Item,
        train: &Train,
        link: &'s LinkSyntax,
        from: usize,
        to: usize,
    ) -> Option<(Link, Value)> {
        let place = env.place(link.span);
        let word = link.kind.text.as_str();
        let owner = format!("{}.{}", train.name, link.name.text);
        let clauses = if link.clauses.cite.is_some() { &link.clauses } else { &item.clauses };
        let mut fields = Fields::new(owner.clone(), env, env.place(link.name.span), &link.fields, clauses);
        let is_load = |at: usize| matches!(train.members[at].kind, MemberKind::Load(_));
        let two = self.num(2.0);
        let one = self.num(1.0);
        let turning = matches!(word, "gear" | "belt" | "direct" | "coupling" | "chain");
        let expected = if turning { (false, false) } else { (is_load(from), is_load(to)) };
        let ends_fit =
            if turning { !is_load(from) && !is_load(to) } else { expected.0 != expected.1 || word == "epicyclic" };
        if !ends_fit {
            let need = if turning { "two rotors" } else { "a rotor and a load" };
            self.report(
                Diagnostic::new(codes::NOT_CONNECTED, place, format!("a {word} joins {need}"))
                    .with_help("gear, belt and direct join rotors; rope, rack, screw and roll join a rotor and a load"),
            );
            return None;
        }
        // Ratio as speed(rotor)/speed(other): for a load per length.
        let ratio = match word {
            "gear" | "belt" | "chain" => self.turning_ratio(&mut fields)?,
            "direct" | "coupling" => one,
            "rope" => {
                let diameter = self.need_number(&mut fields, "pitch_diameter", "diameter", Group::Train);
                let falls = match self.take_number(&mut fields, "falls", "ratio", Group::Train) {
                    Some(falls) => falls.node,
                    None => one,
                };
                let double = self.times(two, falls);
                let diameter = diameter?;
                self.over(double, diameter.node)
            }
            "rack" | "roll" => {
                let diameter = self.need_number(&mut fields, "pitch_diameter", "diameter", Group::Train)?;
                self.over(two, diameter.node)
            }
            "screw" => {
                let lead = self.need_number(&mut fields, "lead", "lead", Group::Train)?;
                self.over(one, lead.node)
            }
            _ => {
                self.report(
                    Diagnostic::new(
                        codes::NOT_SUPPORTED_YET,
                        env.place(link.kind.span),
                        format!("the link `{word}` is not supported yet"),
                    )
                    .with_help("gear, belt, rope, rack, screw, direct and roll are"),
                );
                return None;
            }
        };
        let ratio = if is_load(from) { self.over(one, ratio) } else { ratio };
        let efficiency = self.efficiency(&mut fields, "efficiency");
        let mut back = self.efficiency(&mut fields, "back");
        let drag = self.take_number(&mut fields, "drag", "torque", Group::Train).map(|typed| typed.node);
        let sense = match self.take_word(&mut fields, "sense", &["same", "opposite"]) {
            Some("opposite") => Sense::Opposite,
            _ => Sense::Same,
        };
        self.finish(fields, env, &[]);
        if let (Some((efficiency, at)), None) = (&efficiency, &back) {
            if self.constant(*efficiency).is_some_and(|value| value < 0.85) {
                self.report(
                    Diagnostic::new(
                        codes::STATE_BACKWARD,
                        *at,
                        format!("`{owner}` is lossy; its efficiency backwards is taken as the same"),
                    )
                    .with_help("state it: `back = ...`; a screw or worm is worse backwards and may lock itself (0)"),
                );
            }
            back = Some((*efficiency, *at));
        }
        let mut ratio_node = ratio;
        let mut members: Vec<(SmolStr, Value)> = Vec::new();
        if turning {
            let value = self.built_in(&[&owner, "speed_ratio"], Group::Train, Shown::OnRequest, "ratio", ratio, place);
            if let Value::Number(typed) = &value {
                ratio_node = typed.node;
            }
            members.push(("ratio".into(), value));
        }
        for (word, pair) in [("efficiency", &efficiency), ("back", &back)] {
            let node = pair.map_or(one, |(node, _)| node);
            members.push((word.into(), Value::Number(Typed { node, ty: self.kind_type("ratio"), place })));
        }
        let link = Link {
            name: link.name.text.clone(),
            kind: link.kind.text.clone(),
            from,
            to,
            ratio: ratio_node,
            sense,
            efficiency: efficiency.map(|(node, _)| node),
            back: back.map(|(node, _)| node),
            drag,
            place,
        };
        let value = Value::plain(owner, "a link", members);
        Some((link, value))
    }

    fn turning_ratio(&mut self, fields: &mut Fields<'s>) -> Option<NodeId> {
        if let Some(ratio) = self.take_number(fields, "ratio", "ratio", Group::Train) {
            self.positive(fields, &ratio, "ratio");
            return Some(ratio.node);
        }
        for word in ["teeth", "diameters"] {
            if let Some((mut env, expr)) = self.take_expr(fields, word) {
                let place = env.place(expr.span);
                if let Value::Point(pair, _) = self.expr(&mut env, expr)
                    && let [a, b] = pair.as_slice()
                {
                    let (a, b) = (self.as_number(a.clone(), place)?, self.as_number(b.clone(), place)?);
                    self.compared(&a, &b, place)?;
                    return Some(self.over(b.node, a.node));
                }
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    place,
                    format!("`{word}` takes two values: (tail, head)"),
                ));
                return None;
            }
        }
        self.missing(fields, "ratio", "speed of the arrow's tail over speed of its head");
        None
    }

    fn positive(&mut self, fields: &Fields<'_>, typed: &Typed, word: &str) {
        let zero = self.num(0.0);
        let condition = self.out.model.graph.add(Op::Compare(CompareOp::Greater, typed.node, zero));
        self.out.requirements.push(Requirement {
            condition,
            sides: None,
            words: Some(("link".into(), format!("{word} > 0"))),
            results: Vec::new(),
            subject: fields.owner.clone(),
            place: typed.place,
            origin: typed.place,
        });
    }

    fn efficiency(&mut self, fields: &mut Fields<'s>, word: &str) -> Option<(NodeId, Place)> {
        let typed = self.take_number(fields, word, "ratio", Group::Train)?;
        if let Some(value) = self.constant(typed.node)
            && !(0.0..=1.0).contains(&value)
        {
            self.report(
                Diagnostic::new(
                    codes::EFFICIENCY_RANGE,
                    typed.place,
                    format!("an efficiency lies between 0 and 1, found {value}"),
                )
                .with_help("write 0.93 or 93 %"),
            );
            return None;
        }
        Some((typed.node, typed.place))
    }

    /// Speeds of all members against the first, along a spanning tree; further
    /// links close loops and must agree.
    fn connect(&mut self, train: &mut Train) -> Option<()> {
        let n = train.members.len();
        let mut reached = vec![false; n];
        let mut in_tree = vec![false; train.links.len()];
        reached[0] = true;
        let mut queue = vec![0];
        let mut at = 0;
        while at < queue.len() {
            let here = queue[at];
            at += 1;
            for index in 0..train.links.len() {
                let (from, to, ratio, sense) = (
                    train.links[index].from,
                    train.links[index].to,
                    train.links[index].ratio,
                    train.links[index].sense,
                );
                let other = if from == here {
                    to
                } else if to == here {
                    from
                } else {
                    continue;
                };
                if reached[other] {
                    continue;
                }
                reached[other] = true;
                in_tree[index] = true;
                let here_coefficient = train.members[here].coefficient;
                train.members[other].coefficient =
                    if from == here { self.over(here_coefficient, ratio) } else { self.times(here_coefficient, ratio) };
                train.members[other].sense = train.members[here].sense.with(sense);
                train.members[other].parent = Some((index, here));
                queue.push(other);
            }
        }
        if let Some(lost) = reached.iter().position(|reached| !reached) {
            let (first, lost) = (&train.members[0], &train.members[lost]);
            let diagnostic = Diagnostic::new(
                codes::NOT_CONNECTED,
                lost.place,
                format!(
                    "`{}` is linked by no path to `{}`: the train `{}` has more than one degree of freedom",
                    lost.name, first.name, train.name
                ),
            )
            .with_label(first.place, "the train begins here")
            .with_help("add a link between the two groups, or make them two trains");
            self.report(diagnostic);
            return None;
        }
        for index in (0..train.links.len()).filter(|&index| !in_tree[index]) {
            let link = train.links[index].clone();
            let (a, b) = (train.members[link.from].coefficient, train.members[link.to].coefficient);
            let by_tree = self.over(a, b);
            let quotient = self.over(by_tree, link.ratio);
            let one = self.num(1.0);
            let difference = self.minus(quotient, one);
            let size = self.apply(Function::Abs, difference);
            let limit = self.num(1e-9);
            let condition = self.out.model.graph.add(Op::Compare(CompareOp::LessEqual, size, limit));
            let senses = train.members[link.from].sense.with(train.members[link.to].sense) == link.sense;
            let (tree_value, own) = (self.constant(by_tree), self.constant(link.ratio));
            if !senses || matches!((tree_value, own), (Some(a), Some(b)) if (a / b - 1.0).abs() > 1e-9) {
                let words = match (tree_value, own) {
                    _ if !senses => "turning sense".to_string(),
                    (Some(a), Some(b)) => format!("ratio: {b:.9} by this link, {a:.9} by the others"),
                    _ => "ratio".to_string(),
                };
                self.report(
                    Diagnostic::new(
                        codes::LOOP_DISAGREES,
                        link.place,
                        format!("the loop that `{}` closes disagrees about the {words}", link.name),
                    )
                    .with_help("a closed loop turns only if its ratios multiply to one; correct one of its links"),
                );
                return None;
            }
            self.out.requirements.push(Requirement {
                condition,
                sides: None,
                words: Some((format!("train `{}`", train.name), "the ratios round the loop multiply to one".into())),
                results: Vec::new(),
                subject: format!("{}.{}", train.name, link.name).into(),
                place: link.place,
                origin: link.place,
            });
        }
        Some(())
    }

    /// The member that an argument names.
    pub(super) fn member_argument(&mut self, env: &mut Env, train: &Train, argument: &Argument) -> Option<usize> {
        let place = env.place(argument.value.span);
        if let ExprKind::Path(path) = &argument.value.kind {
            match self.path(env, path) {
                Value::Object(object) => {
                    if let Some(at) = train.member(&object.name) {
                        return Some(at);
                    }
                    let list: Vec<String> = train.members.iter().map(|member| format!("`{}`", member.name)).collect();
                    self.report(
                        Diagnostic::new(
                            codes::UNKNOWN_NAME,
                            place,
                            format!("`{}` is no member of the train `{}`", object.name, train.name),
                        )
                        .with_help(format!("its members are {}", list.join(", "))),
                    );
                    return None;
                }
                Value::Failed => return None,
                _ => {}
            }
        }
        self.report(Diagnostic::new(codes::WRONG_ARGUMENTS, place, "a member of the train is needed here"));
        None
    }

    pub(super) fn train_ratio(&mut self, env: &mut Env, train: &Train, arguments: &[Argument], place: Place) -> Value {
        let [a, b] = arguments else {
            self.report(Diagnostic::new(
                codes::WRONG_ARGUMENTS,
                place,
                "`ratio` takes two members: speed of the first over speed of the second",
            ));
            return Value::Failed;
        };
        let (a, b) = (self.member_argument(env, train, a), self.member_argument(env, train, b));
        let (Some(a), Some(b)) = (a, b) else { return Value::Failed };
        let node = self.over(train.members[a].coefficient, train.members[b].coefficient);
        let speed = |this: &mut Self, at: usize| match train.members[at].kind {
            MemberKind::Rotor(..) => this.kind_type("angular_velocity"),
            MemberKind::Load(_) => this.kind_type("speed"),
        };
        let (x, y) = (speed(self, a), speed(self, b));
        let Some(ty) = self.checked(x.div(&y), place) else { return Value::Failed };
        Value::Number(Typed { node, ty, place })
    }
}

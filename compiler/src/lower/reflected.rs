//! Inertia of a train as seen at one member: J' = J/i^2 (drive dynamics,
//! engineering handbooks), with the efficiencies on the way where a direction
//! of power flow is said.

use super::space::Arithmetic;
use super::trains::{MemberKind, Train};
use super::value::{Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use pintle_graph::NodeId;
use pintle_syntax::ast::{Argument, ExprKind};
use pintle_text::{Diagnostic, Place};

#[derive(Clone, Copy, PartialEq)]
enum Flow {
    LossFree,
    Forward,
    Back,
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn reflected(&mut self, env: &mut Env, train: &Train, arguments: &[Argument], place: Place) -> Value {
        let mut at = None;
        let mut flow = Flow::LossFree;
        let mut what: Option<Vec<usize>> = None;
        let mut position = 0;
        for argument in arguments {
            let name = match &argument.name {
                Some(name) => name.text.as_str(),
                None => {
                    position += 1;
                    if position == 1 && arguments.len() > 1 { "what" } else { "at" }
                }
            };
            match name {
                "at" => {
                    let Some(member) = self.member_argument(env, train, argument) else { return Value::Failed };
                    at = Some(member);
                }
                "flow" => {
                    flow = match self.word(&argument.value) {
                        Some("forward") => Flow::Forward,
                        Some("back") => Flow::Back,
                        _ => {
                            self.report(Diagnostic::new(
                                codes::WRONG_ARGUMENTS,
                                env.place(argument.value.span),
                                "`flow` is forward (power leaves the member) or back (power reaches it)",
                            ));
                            return Value::Failed;
                        }
                    };
                }
                "what" => {
                    if self.word(&argument.value) == Some("J") {
                        continue;
                    }
                    // `drum` or `drum.J`: that member's share.
                    let mut argument = argument.clone();
                    if let ExprKind::Path(path) = &mut argument.value.kind
                        && path.segments.len() > 1
                        && path
                            .segments
                            .last()
                            .is_some_and(|segment| matches!(segment.name.text.as_str(), "J" | "mass"))
                    {
                        path.segments.pop();
                    }
                    let Some(member) = self.member_argument(env, train, &argument) else { return Value::Failed };
                    what = Some(vec![member]);
                }
                other => {
                    self.report(
                        Diagnostic::new(
                            codes::WRONG_ARGUMENTS,
                            env.place(argument.value.span),
                            format!("`reflected` has no argument `{other}`"),
                        )
                        .with_help(
                            "write TRAIN.reflected(J, at = MEMBER), with `flow = forward` or `flow = back` for losses",
                        ),
                    );
                    return Value::Failed;
                }
            }
        }
        let Some(at) = at else {
            self.report(
                Diagnostic::new(codes::WRONG_ARGUMENTS, place, "seen at which member?")
                    .with_help("write TRAIN.reflected(J, at = MEMBER)"),
            );
            return Value::Failed;
        };
        let members = what.unwrap_or_else(|| (0..train.members.len()).collect());
        let mut terms = Vec::new();
        for member in members {
            let own = match &train.members[member].kind {
                MemberKind::Rotor(moment, _) => *moment,
                MemberKind::Load(load) => load.mass,
            };
            let ratio = self.over(train.members[member].coefficient, train.members[at].coefficient);
            let square = self.square(ratio);
            let mut term = self.times(own, square);
            if flow != Flow::LossFree {
                let factor = self.way_factor(train, at, member, flow);
                term = if flow == Flow::Forward { self.over(term, factor) } else { self.times(term, factor) };
            }
            terms.push(term);
        }
        let node = self.sum(&terms);
        let kind = match train.members[at].kind {
            MemberKind::Rotor(..) => "moment_of_inertia",
            MemberKind::Load(_) => "mass",
        };
        Value::Number(Typed { node, ty: self.kind_type(kind), place })
    }

    /// Product of the efficiencies between `at` and `member` for power that
    /// flows out from `at` (forward) or in to it (back).
    fn way_factor(&mut self, train: &Train, at: usize, member: usize, flow: Flow) -> NodeId {
        let up = |mut from: usize| {
            let mut way = vec![];
            while let Some((link, parent)) = train.members[from].parent {
                way.push((link, from, parent));
                from = parent;
            }
            way
        };
        // Links on both ways to the root cancel.
        let (a, b) = (up(at), up(member));
        let mut factor = self.num(1.0);
        let shared = |link: usize, other: &[(usize, usize, usize)]| other.iter().any(|(it, ..)| *it == link);
        // Outward steps: from `at` up to the meeting point, then down to `member`.
        let steps: Vec<(usize, usize)> = a
            .iter()
            .filter(|(link, ..)| !shared(*link, &b))
            .map(|&(link, from, _)| (link, from))
            .chain(b.iter().filter(|(link, ..)| !shared(*link, &a)).map(|&(link, _, parent)| (link, parent)))
            .collect();
        for (link, outward_from) in steps {
            let link = &train.links[link];
            let source_is_tail = link.from == outward_from;
            let with_arrow = (flow == Flow::Forward) == source_is_tail;
            if let Some(node) = if with_arrow { link.efficiency } else { link.back } {
                factor = self.times(factor, node);
            }
        }
        factor
    }
}

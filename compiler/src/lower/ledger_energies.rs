//! The energies of a ledger: heights, springs, named gains and losses, and
//! what the links lose on the way.

use super::ledgers::{Draft, Flow, LinePlan};
use super::space::Arithmetic;
use super::trains::MemberKind;
use super::value::{Entity, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::results::{Group, Shown, Side};
use pintle_graph::{NodeId, Op};
use pintle_syntax::ast::{Entry, ExprKind, LedgerLine, LedgerLineKind};
use pintle_text::{Diagnostic, Place};

impl<'s> Lowerer<'s, '_> {
    pub(super) fn gravity_and_springs(&mut self, env: &mut Env, draft: &mut Draft, lines: &'s [LedgerLine]) {
        let rising: Vec<usize> = (0..draft.train.members.len())
            .filter(|&at| matches!(&draft.train.members[at].kind, MemberKind::Load(load) if !load.level))
            .collect();
        if let (Some((travel, sense)), false) = (draft.travel, rising.is_empty()) {
            let gravity = self.sheet.lookup(env.origin, "g_n").map(|id| self.entity(id));
            let gravity = match gravity {
                Some(Value::Number(typed)) => typed.node,
                _ => self.num(9.80665),
            };
            for at in rising {
                let member = draft.train.members[at].clone();
                let MemberKind::Load(load) = &member.kind else { continue };
                let distance = self.times(travel, member.coefficient);
                let rise = self.times(distance, load.rise);
                let weight = self.times(load.mass, gravity);
                let mut change = self.times(weight, rise);
                if sense * member.sense.sign() < 0.0 {
                    change = self.negate(change);
                }
                draft.stored[at].push(change);
                draft.uses.push(change);
                draft.plan.lines.push(LinePlan {
                    name: member.name.clone(),
                    side: Side::Height,
                    energy: change,
                    ends: None,
                });
            }
        } else if let Some(&at) = rising.first() {
            let place = draft.plan.place;
            self.report(
                Diagnostic::new(
                    codes::LEDGER_OPEN,
                    place,
                    format!("`{}` moves on a rising path, but nothing says how far", draft.train.members[at].name),
                )
                .with_help("add a line `travel MEMBER DISTANCE down_path`"),
            );
        }
        for line in lines {
            let LedgerLineKind::Spring { spring, from, to } = &line.kind else { continue };
            let object = match self.path(env, spring) {
                Value::Object(object) => object,
                _ => continue,
            };
            let Entity::Spring(rate) = &object.entity else {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    env.place(spring.span),
                    format!("a spring is needed here, but `{}` is {}", object.name, object.what),
                ));
                continue;
            };
            let kind = if rate.torsion { "angle" } else { "length" };
            let ends = [from, to].map(|expr| {
                let typed = self.number(env, expr)?;
                self.expect(&typed, kind, "a deflection")
            });
            let [Some(a), Some(b)] = ends else { continue };
            let half = self.num(0.5);
            let energy = |this: &mut Self, deflection: NodeId| {
                let square = this.square(deflection);
                let product = this.times(rate.rate, square);
                this.times(half, product)
            };
            let (before, after) = (energy(self, a.node), energy(self, b.node));
            let change = self.minus(after, before);
            draft.stored[0].push(change);
            draft.uses.push(change);
            draft.plan.lines.push(LinePlan {
                name: object.name.clone(),
                side: Side::Spring,
                energy: change,
                ends: Some((before, after)),
            });
        }
    }

    pub(super) fn entries(&mut self, env: &mut Env, draft: &mut Draft, lines: &'s [LedgerLine]) -> bool {
        let mut fine = true;
        for line in lines {
            let (entry, side) = match &line.kind {
                LedgerLineKind::Gain(entry) => (entry, Side::Gain),
                LedgerLineKind::Lose(entry) => (entry, Side::Lose),
                _ => continue,
            };
            fine &= self.entry(env, draft, entry, side).is_some();
        }
        fine
    }

    fn entry(&mut self, env: &mut Env, draft: &mut Draft, entry: &Entry, side: Side) -> Option<()> {
        let name = entry.field.path.segments.first()?.name.clone();
        let place = env.place(name.span);
        let value = self.definition(env, entry.field.value.as_ref()?);
        let typed = self.as_number(value, place)?;
        let typed =
            self.expect_kind(&typed, pintle_units::Kind::Energy, &format!("the line `{}`", name.text), place)?;
        self.weight_twice(env, draft, entry, place);
        let full = format!("{}.{}", draft.name, name.text);
        let unit = self.display(env, &entry.field.clauses);
        let source = self.source(&entry.field.clauses).unwrap_or_default();
        let typed = self.quantity(full.into(), Group::Ledger, Shown::Always, typed.ty, typed.node, unit, place, source);
        let at = match &entry.at {
            Some(path) => self.member_of(env, &draft.train.clone(), path)?,
            None => match self.acts_at(draft, entry) {
                Some(at) => at,
                None if draft.train.links.iter().all(|link| link.efficiency.is_none()) => 0,
                None => {
                    let word = if side == Side::Gain { "gain" } else { "lose" };
                    self.report(
                        Diagnostic::new(
                            codes::LEDGER_OPEN,
                            place,
                            format!("where on the train does `{}` act? Its links have losses", name.text),
                        )
                        .with_help(format!("write `{word} {} at MEMBER = ...`", name.text)),
                    );
                    return None;
                }
            },
        };
        if side == Side::Gain {
            let negative = self.negate(typed.node);
            draft.spent[at].push(negative);
            draft.gains.push(typed.node);
        } else {
            draft.spent[at].push(typed.node);
            draft.uses.push(typed.node);
        }
        draft.plan.lines.push(LinePlan { name: name.text.clone(), side, energy: typed.node, ends: None });
        env.define(name.text.clone(), Value::Number(typed.clone()));
        draft.members.push((name.text, Value::Number(typed)));
        Some(())
    }

    /// A load's weight already enters by its path; a line that brings it again is a slip.
    fn weight_twice(&mut self, env: &Env, draft: &Draft, entry: &Entry, place: Place) {
        let Some(at) = self.acts_at(draft, entry) else { return };
        let rises = matches!(&draft.train.members[at].kind, MemberKind::Load(load) if !load.level);
        let text: String = self.sheet.sources.text(env.place(entry.field.span)).split_whitespace().collect();
        // With a cosine it is the force on the path, which friction follows.
        if rises && text.contains("g_n*") && !text.contains("cos(") {
            self.report(
                Diagnostic::new(
                    codes::WEIGHT_TWICE,
                    place,
                    format!(
                        "`{}` brings gravity in again: the path of `{}` already does",
                        place_name(entry),
                        draft.train.members[at].name
                    ),
                )
                .with_help("leave the weight to the load's path; gains and losses hold the rest"),
            );
        }
    }

    /// The member that a line's value names.
    fn acts_at(&self, draft: &Draft, entry: &Entry) -> Option<usize> {
        let text = entry.field.value.as_ref().map(|value| match value {
            pintle_syntax::ast::Definition::Value(expr) => expr,
            pintle_syntax::ast::Definition::Choose(choose) => &choose.arms[0].value,
        })?;
        let mut found = None;
        let mut stack = vec![text];
        while let Some(expr) = stack.pop() {
            match &expr.kind {
                ExprKind::Path(path) => {
                    if let Some(segment) = path.segments.first()
                        && path.segments.len() > 1
                        && let Some(at) = draft.train.member(&segment.name.text)
                    {
                        found = found.or(Some(at));
                    }
                }
                ExprKind::Call { arguments, .. } => stack.extend(arguments.iter().map(|it| &it.value)),
                ExprKind::Unary { operand, .. } => stack.push(operand),
                ExprKind::Binary { left, right, .. } => {
                    stack.push(right);
                    stack.push(left);
                }
                _ => {}
            }
        }
        found
    }

    /// Losses of the links, from the outermost members inwards.
    pub(super) fn link_losses(&mut self, draft: &mut Draft, place: Place) {
        let n = draft.train.members.len();
        let depth = |mut at: usize| {
            let mut depth = 0;
            while let Some((_, parent)) = draft.train.members[at].parent {
                depth += 1;
                at = parent;
            }
            depth
        };
        let mut order: Vec<usize> = (0..n).collect();
        order.sort_by_key(|&at| std::cmp::Reverse(depth(at)));
        // No-load torque times the angle at the arrow's tail.
        if let Some((travel, _)) = draft.travel {
            for link in draft.train.links.clone() {
                if let Some(drag) = link.drag {
                    let angle = self.times(travel, draft.train.members[link.from].coefficient);
                    let loss = self.times(drag, angle);
                    draft.spent[link.from].push(loss);
                    draft.uses.push(loss);
                    draft.plan.lines.push(LinePlan {
                        name: format!("{}.drag", link.name).into(),
                        side: Side::Link,
                        energy: loss,
                        ends: None,
                    });
                }
            }
        }
        let one = self.num(1.0);
        for at in order {
            let Some((link_at, parent)) = draft.train.members[at].parent else { continue };
            let link = draft.train.links[link_at].clone();
            let terms: Vec<NodeId> = draft.stored[at].iter().chain(&draft.spent[at]).copied().collect();
            let crossing = self.sum(&terms);
            let outward = link.to == at;
            let (out_efficiency, in_efficiency) =
                if outward { (link.efficiency, link.back) } else { (link.back, link.efficiency) };
            let mut inward = vec![crossing];
            if out_efficiency.is_some() || in_efficiency.is_some() {
                let forward = out_efficiency.unwrap_or(one);
                let backward = in_efficiency.unwrap_or(one);
                let reciprocal = self.over(one, forward);
                let share = self.minus(reciprocal, one);
                let driving = self.times(crossing, share);
                let share = self.minus(one, backward);
                let reverse = self.negate(crossing);
                let driven = self.times(reverse, share);
                // Of the two laws the one in force is the greater: each is negative on the other's side.
                let loss = self.out.model.graph.add(Op::Max(driving, driven));
                let name = [draft.name.as_str(), &link.name, "loss"];
                let value = self.built_in(&name, Group::Ledger, Shown::OnRequest, "energy", loss, place);
                let loss = match &value {
                    Value::Number(typed) => typed.node,
                    _ => loss,
                };
                draft.members.push((
                    link.name.clone(),
                    Value::plain(format!("{}.{}", draft.name, link.name), "a link", vec![("loss".into(), value)]),
                ));
                draft.uses.push(loss);
                draft.plan.lines.push(LinePlan { name: link.name.clone(), side: Side::Link, energy: loss, ends: None });
                inward.push(loss);
            }
            let child_load = matches!(draft.train.members[at].kind, MemberKind::Load(_));
            let slack = match draft.travel {
                // Going up, the rope must bring energy; going down, it must take some.
                Some((_, sense)) if link.kind == "rope" && child_load => {
                    Some(-sense * draft.train.members[at].sense.sign())
                }
                _ => None,
            };
            let locking = link.back.map(|back| (back, if outward { -1.0 } else { 1.0 }));
            draft.plan.flows.push(Flow {
                link: link.name.clone(),
                crossing,
                locking,
                slack,
                lossy: out_efficiency.is_some() || in_efficiency.is_some(),
                place: link.place,
            });
            let node = self.sum(&inward);
            draft.spent[parent].push(node);
        }
    }
}

fn place_name(entry: &Entry) -> &str {
    entry.field.path.segments.first().map_or("this line", |segment| segment.name.text.as_str())
}

//! Limits and second routes.

use super::value::{Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use pintle_graph::{CompareOp, NodeId, QuantityId};
use pintle_syntax::ast::{Clauses, Expr, ExprKind, Item};
use pintle_text::{Diagnostic, ItemId, Place};
use pintle_units::Unit;
use smol_str::SmolStr;
use std::sync::Arc;

/// A limit, to be judged once values are there.
#[derive(Clone, Debug)]
pub struct LimitPlan {
    /// As written.
    pub text: String,
    /// Left sides: one, or for `every` all that it covers, with their names.
    pub sides: Vec<(Option<QuantityId>, NodeId)>,
    /// How they compare.
    pub op: CompareOp,
    /// Right side.
    pub bound: NodeId,
    /// Unit to show both in.
    pub unit: Arc<Unit>,
    /// `because`.
    pub because: String,
    /// `cite`.
    pub source: String,
    /// Where.
    pub place: Place,
}

/// A second route.
#[derive(Clone, Debug)]
pub struct ConfirmPlan {
    /// The value as written.
    pub text: String,
    /// The sheet's value.
    pub value: NodeId,
    /// The second route.
    pub second: NodeId,
    /// Half-width of the agreement, SI; None: to rounding.
    pub half_width: Option<f64>,
    /// Unit to show them in.
    pub unit: Arc<Unit>,
    /// `cite`.
    pub source: String,
    /// Where.
    pub place: Place,
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn limit(&mut self, id: ItemId, item: &Item, every: bool, condition: &Expr) {
        let mut env = self.env(id);
        if every {
            self.limit_every(&mut env, &item.clauses, condition);
        } else {
            self.limit_in(&mut env, &item.clauses, condition);
        }
    }

    pub(super) fn limit_in(&mut self, env: &mut Env, clauses: &Clauses, condition: &Expr) {
        let value = self.expr(env, condition);
        let Value::Condition(found) = value else {
            if !value.is_failed() {
                self.report(
                    Diagnostic::new(
                        codes::EXPECTED_EQUATION,
                        env.place(condition.span),
                        format!("a limit compares a quantity with a bound, but this is {}", value.what()),
                    )
                    .with_help("write `limit QUANTITY <= BOUND`"),
                );
            }
            return;
        };
        let Some((left, op, right)) = found.sides else {
            self.report(
                Diagnostic::new(codes::EXPECTED_EQUATION, env.place(condition.span), "a limit is one comparison")
                    .with_help("write two limits instead of joining conditions"),
            );
            return;
        };
        let id = self.quantity_of(left.node);
        let text = self.expr_text(env, condition);
        self.push_limit(env, clauses, text, vec![(id, left.node)], op, &left, &right, condition);
    }

    #[allow(clippy::too_many_arguments)]
    fn push_limit(
        &mut self,
        env: &Env,
        clauses: &Clauses,
        text: String,
        sides: Vec<(Option<QuantityId>, NodeId)>,
        op: CompareOp,
        left: &Typed,
        right: &Typed,
        condition: &Expr,
    ) {
        let written = match &condition.kind {
            ExprKind::Binary { right, .. } => match &right.kind {
                ExprKind::Number(literal) => literal.unit.as_ref(),
                _ => None,
            },
            _ => None,
        };
        let unit = match written {
            Some(text) => self.unit(env, text),
            None => None,
        };
        let unit = unit
            .or_else(|| sides.first().and_then(|(id, _)| *id).map(|id| self.out.model.quantity(id).unit.clone()))
            .unwrap_or_else(|| pintle_units::display_unit(&right.ty));
        if text.contains("rim_speed") || left.ty.kind == Some(pintle_units::Kind::Stress) {
            self.out.hazards.rim_speed = true;
        }
        self.out.limits.push(LimitPlan {
            text,
            sides,
            op,
            bound: right.node,
            unit,
            because: clauses.because.as_ref().map_or(String::new(), |text| text.text.clone()),
            source: self.source(clauses).unwrap_or_default().to_string(),
            place: env.place(condition.span),
        });
    }

    /// `limit every drum.rim_speed <= 25 m/s`: the state in all problems.
    fn limit_every(&mut self, env: &mut Env, clauses: &Clauses, condition: &Expr) {
        let ExprKind::Binary { op, left, right, .. } = &condition.kind else {
            self.report(Diagnostic::new(
                codes::EXPECTED_EQUATION,
                env.place(condition.span),
                "`limit every` compares a state with a bound",
            ));
            return;
        };
        let state: String = self.expr_text(env, left).split_whitespace().collect();
        let ids: Vec<QuantityId> =
            self.states.iter().filter(|(known, _)| *known == state.as_str()).map(|(_, id)| *id).collect();
        let Some(&first) = ids.first() else {
            let mut known: Vec<&str> = self.states.iter().map(|(name, _)| name.as_str()).collect();
            known.sort_unstable();
            known.dedup();
            let mut diagnostic =
                Diagnostic::new(codes::UNKNOWN_NAME, env.place(left.span), format!("no problem has a state `{state}`"));
            diagnostic = match crate::nearest::did_you_mean(&state, known.iter().copied()) {
                Some(hint) => diagnostic.with_help(hint),
                None if known.is_empty() => diagnostic.with_help("only a `ledger` or `run` has states"),
                None => diagnostic.with_help(format!("states are {}", known.join(", "))),
            };
            self.report(diagnostic);
            return;
        };
        let Some(bound) = self.number(env, right) else { return };
        let quantity = self.out.model.quantity(first);
        let left_typed = Typed { node: quantity.node, ty: quantity.ty, place: env.place(left.span) };
        if self.compared(&left_typed, &bound, env.place(condition.span)).is_none() {
            return;
        }
        let compare = match op.symbol() {
            "<" => CompareOp::Less,
            "<=" => CompareOp::LessEqual,
            ">" => CompareOp::Greater,
            ">=" => CompareOp::GreaterEqual,
            "==" => CompareOp::Equal,
            _ => {
                self.report(Diagnostic::new(
                    codes::EXPECTED_EQUATION,
                    env.place(condition.span),
                    "`limit every` compares a state with a bound",
                ));
                return;
            }
        };
        let sides = ids.iter().map(|&id| (Some(id), self.out.model.quantity(id).node)).collect();
        let text = format!("every {}", self.expr_text(env, condition));
        self.push_limit(env, clauses, text, sides, compare, &left_typed, &bound, condition);
    }

    fn quantity_of(&self, node: NodeId) -> Option<QuantityId> {
        match self.out.model.graph.op(node) {
            pintle_graph::Op::Quantity(id, _) => Some(id),
            _ => None,
        }
    }

    pub(super) fn confirm(&mut self, id: ItemId, item: &Item, value: &Expr, agrees: &Expr) {
        let mut env = self.env(id);
        let (a, b) = (self.number(&mut env, value), self.number(&mut env, agrees));
        let (Some(a), Some(b)) = (a, b) else { return };
        if self.compared(&a, &b, env.place(value.span.to(agrees.span))).is_none() {
            return;
        }
        let half = self.half_width(b.node);
        let unit = match &agrees.kind {
            ExprKind::Number(literal) => match &literal.unit {
                Some(text) => self.unit(&env, text),
                None => None,
            },
            _ => None,
        };
        let text: SmolStr = self.expr_text(&env, value).into();
        self.out.confirms.push(ConfirmPlan {
            text: text.to_string(),
            value: a.node,
            second: b.node,
            half_width: (half > 0.0).then_some(half),
            unit: unit.unwrap_or_else(|| pintle_units::display_unit(&a.ty)),
            source: self.source(&item.clauses).unwrap_or_default().to_string(),
            place: env.place(value.span.to(agrees.span)),
        });
    }
}

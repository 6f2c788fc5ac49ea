//! Ledgers: the energies of a train between two states, written down member by
//! member, and the balance that fixes what is not known.
//!
//! Work-energy theorem with the losses of each link by the direction of power
//! flow (engineering mechanics; drive dynamics handbooks). Gains and losses
//! are taken as acting evenly along the travel, so each link has one direction
//! of flow, the sign of the energy that crosses it.

use super::space::Arithmetic;
use super::trains::{MemberKind, Train};
use super::value::{Entity, Object, Typed, Value};
use super::{Env, Equation, Lowerer};
use crate::codes;
use crate::results::{Group, Shown, Side};
use pintle_graph::{NodeId, QuantityId};
use pintle_syntax::ast::{ExprKind, Field, LedgerLine, LedgerLineKind, Name, Path, Segment, StateSpec, Wanted};
use pintle_text::{Diagnostic, Place};
use pintle_units::Unit;
use smol_str::SmolStr;
use std::rc::Rc;
use std::sync::{Arc, OnceLock};

/// What results need to know of a ledger.
#[derive(Clone, Debug)]
pub struct LedgerPlan {
    /// Its name.
    pub name: SmolStr,
    /// Its train.
    pub train: SmolStr,
    /// Its lines in order.
    pub lines: Vec<LinePlan>,
    /// Energies that cross links, with what they must not do.
    pub flows: Vec<Flow>,
    /// Where.
    pub place: Place,
}

/// One line of a ledger.
#[derive(Clone, Debug)]
pub struct LinePlan {
    /// A member, or the name of a gain or loss.
    pub name: SmolStr,
    /// Where it stands.
    pub side: Side,
    /// Its energy; of what is stored, the change.
    pub energy: NodeId,
    /// Energy stored at start and end.
    pub ends: Option<(NodeId, NodeId)>,
}

/// The energy that crosses a link towards its outer member.
#[derive(Clone, Debug)]
pub struct Flow {
    /// The link.
    pub link: SmolStr,
    /// Energy delivered to the outer member.
    pub crossing: NodeId,
    /// Efficiency backwards where the link can lock itself, and the sign of a crossing that would drive it so.
    pub locking: Option<(NodeId, f64)>,
    /// Sign of a crossing that a rope cannot bring; None: no rope.
    pub slack: Option<f64>,
    /// Whether the link loses energy, so that the direction of the flow counts.
    pub lossy: bool,
    /// Where.
    pub place: Place,
}

/// What other constructs can ask of a ledger.
#[derive(Clone, Debug)]
pub struct LedgerEntity {
    /// Its train.
    pub train: SmolStr,
    /// End speed of the train's first member.
    pub end_speed: NodeId,
}

/// A ledger being put together.
pub(super) struct Draft {
    pub name: SmolStr,
    /// Where the ledger's own quantities begin in the table.
    pub first_quantity: usize,
    pub train: Train,
    pub start: Option<NodeId>,
    pub end: Option<NodeId>,
    /// Displacement of the first member, and its sense: 1 up or forward.
    pub travel: Option<(NodeId, f64)>,
    /// Energy into each member beyond what it stores: losses less gains.
    pub spent: Vec<Vec<NodeId>>,
    pub stored: Vec<Vec<NodeId>>,
    pub plan: LedgerPlan,
    pub gains: Vec<NodeId>,
    pub uses: Vec<NodeId>,
    /// Members of the finished object.
    pub members: Vec<(SmolStr, Value)>,
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn ledger(
        &mut self,
        env: &mut Env,
        name: &Name,
        train: Option<&Name>,
        under: &[Vec<Name>],
        lines: &'s [LedgerLine],
    ) -> Value {
        let place = env.place(name.span);
        if !under.is_empty() && !under.iter().any(|names| same_case(names, self.case)) {
            return Value::Failed;
        }
        let Some(train_name) = train else { return Value::Failed };
        let path = Path { segments: vec![Segment { name: train_name.clone(), index: None }], span: train_name.span };
        let train = match self.path(env, &path) {
            Value::Object(object) => match &object.entity {
                Entity::Train(train) => train.clone(),
                _ => {
                    self.report(
                        Diagnostic::new(
                            codes::NOT_A_QUANTITY,
                            env.place(train_name.span),
                            format!("a ledger is kept of a train, but `{}` is {}", object.name, object.what),
                        )
                        .with_help("declare one: `train NAME { ... }`"),
                    );
                    return Value::Failed;
                }
            },
            _ => return Value::Failed,
        };
        self.out.hazards.stored_energy = true;
        let n = train.members.len();
        let mut draft = Draft {
            first_quantity: self.out.model.quantities.len(),
            name: name.text.clone(),
            plan: LedgerPlan {
                name: name.text.clone(),
                train: train.name.clone(),
                lines: Vec::new(),
                flows: Vec::new(),
                place,
            },
            train,
            start: None,
            end: None,
            travel: None,
            spent: vec![Vec::new(); n],
            stored: vec![Vec::new(); n],
            gains: Vec::new(),
            uses: Vec::new(),
            members: Vec::new(),
        };
        let mut inner = env.clone();
        if self.unknowns_and_states(&mut inner, &mut draft, lines, place).is_none() {
            self.out.n_broken_equations += 1;
            return Value::Failed;
        }
        self.member_states(&mut inner, &mut draft, place);
        self.gravity_and_springs(&mut inner, &mut draft, lines);
        let fine = self.entries(&mut inner, &mut draft, lines);
        if !fine {
            self.out.n_broken_equations += 1;
            return Value::Failed;
        }
        self.link_losses(&mut draft, place);
        let used = self.sum(&draft.uses.clone());
        let gained = self.sum(&draft.gains.clone());
        self.out.equations.push(Equation { left: used, right: gained, place, ledger: Some(draft.name.clone()) });
        // Equations and limits inside come last: they see everything.
        for line in lines {
            match &line.kind {
                LedgerLineKind::Wanted(wanted) => self.equations(&mut inner, wanted),
                LedgerLineKind::Limit { condition } => self.limit_in(&mut inner, &line.clauses, condition),
                _ => {}
            }
        }
        let end_speed = draft.end.unwrap_or_else(|| self.num(0.0));
        let entity = LedgerEntity { train: draft.train.name.clone(), end_speed };
        self.out.ledgers.push(draft.plan);
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "a ledger",
            members: draft.members,
            entity: Entity::Ledger(entity),
        }))
    }

    /// Start and end speeds and the travel, with the unknowns among them.
    fn unknowns_and_states(
        &mut self,
        env: &mut Env,
        draft: &mut Draft,
        lines: &'s [LedgerLine],
        place: Place,
    ) -> Option<()> {
        let mut fine = true;
        // Unknowns first: travel and entries may name them.
        for line in lines {
            let LedgerLineKind::Wanted(wanted) = &line.kind else { continue };
            fine &= self.wanted_line(env, draft, wanted, line).is_some();
        }
        for line in lines {
            if let LedgerLineKind::Local(field) = &line.kind {
                fine &= self.local_line(env, draft, field).is_some();
            }
        }
        for line in lines {
            match &line.kind {
                LedgerLineKind::Start(state) => match self.state(env, draft, state) {
                    Some(speed) => draft.start = Some(speed),
                    None => fine = false,
                },
                LedgerLineKind::End(state) => match self.state(env, draft, state) {
                    Some(speed) => draft.end = Some(speed),
                    None => fine = false,
                },
                LedgerLineKind::Travel { member, distance, direction } => {
                    let member_at = self.member_of(env, &draft.train.clone(), member);
                    let typed = self.number(env, distance);
                    if matches!(distance.kind, ExprKind::Missing) {
                        self.report(
                            Diagnostic::new(codes::LEDGER_OPEN, env.place(line.span), "how far does it travel?")
                                .with_help("give a distance, or a name and `wanted NAME : travel within LOW .. HIGH`"),
                        );
                    }
                    let (Some(at), Some(typed)) = (member_at, typed) else {
                        fine = false;
                        continue;
                    };
                    let load = matches!(&draft.train.members[at].kind, MemberKind::Load(_));
                    let kind = if load { "length" } else { "angle" };
                    let Some(typed) = self.expect(&typed, kind, "the travel") else {
                        fine = false;
                        continue;
                    };
                    let up = match direction.as_ref().map(|name| name.text.as_str()) {
                        Some("down_path" | "back") => -1.0,
                        Some(_) => 1.0,
                        None => {
                            let rises = matches!(&draft.train.members[at].kind, MemberKind::Load(load) if !load.level);
                            if rises {
                                self.report(
                                    Diagnostic::new(
                                        codes::LEDGER_OPEN,
                                        env.place(line.span),
                                        "which way does it travel?",
                                    )
                                    .with_help("add `down_path` or `up_path`"),
                                );
                                fine = false;
                            }
                            1.0
                        }
                    };
                    let displacement = self.over(typed.node, draft.train.members[at].coefficient);
                    draft.travel = Some((displacement, up * draft.train.members[at].sense.sign()));
                }
                _ => {}
            }
        }
        if !fine {
            return None;
        }
        for (state, word, example) in [(draft.start, "start", "start at rest"), (draft.end, "end", "end at rest")] {
            if state.is_none() {
                self.report(
                    Diagnostic::new(
                        codes::LEDGER_OPEN,
                        place,
                        format!("nothing says how fast `{}` is at the {word} of `{}`", draft.train.name, draft.name),
                    )
                    .with_help(format!(
                        "add `{example}`, `{word} MEMBER.speed = ...`{}",
                        if word == "end" { ", or `wanted MEMBER.speed within LOW .. HIGH`" } else { "" }
                    )),
                );
                fine = false;
            }
        }
        fine.then_some(())
    }

    fn wanted_line(&mut self, env: &mut Env, draft: &mut Draft, wanted: &Wanted, line: &LedgerLine) -> Option<()> {
        let segments = &wanted.path.segments;
        let last = segments.last()?;
        if segments.len() == 1 {
            let full = format!("{}.{}", draft.name, last.name.text);
            let value = self.unknown(env, &full, &last.name, wanted, &line.clauses, Group::Wanted);
            if value.is_failed() {
                return None;
            }
            env.define(last.name.text.clone(), value.clone());
            draft.members.push((last.name.text.clone(), value));
            return Some(());
        }
        let first = segments.first()?.name.text.as_str();
        let at_start = first == "start";
        let skip = usize::from(at_start || first == "end");
        let member_path = Path { segments: segments[skip..segments.len() - 1].to_vec(), span: wanted.path.span };
        if last.name.text != "speed" || member_path.segments.is_empty() {
            self.report(
                Diagnostic::new(codes::UNKNOWN_MEMBER, env.place(wanted.path.span), "a ledger finds MEMBER.speed, or a name of its own")
                    .with_help("for an unknown distance write `travel MEMBER s down_path` and `wanted s : travel within LOW .. HIGH`"),
            );
            return None;
        }
        let at = self.member_of(env, &draft.train.clone(), &member_path)?;
        let member = draft.train.members[at].clone();
        let kind = if matches!(member.kind, MemberKind::Load(_)) { "speed" } else { "angular_velocity" };
        let range = match &wanted.range {
            Some(range) => Some(self.range(env, range)?),
            None => None,
        };
        if let Some((typed, ..)) = &range {
            self.expect(typed, kind, &format!("`{}.speed`", member.name))?;
        }
        let unit = range.as_ref().and_then(|(_, unit, ..)| unit.clone());
        let unit = self.display(env, &line.clauses).or(unit);
        let ty = self.kind_type(kind);
        let full = if at_start {
            format!("{}.start.{}.speed", draft.name, member.name)
        } else {
            format!("{}.{}.speed", draft.name, member.name)
        };
        let ends = range.map(|(_, _, low, high)| (low, high));
        let typed = self.new_unknown(&full, ty, ends, unit, env.place(wanted.path.span), Group::Wanted);
        let base = self.over(typed.node, member.coefficient);
        if at_start {
            draft.start = Some(base);
        } else {
            draft.end = Some(base);
        }
        Some(())
    }

    fn local_line(&mut self, env: &mut Env, draft: &mut Draft, field: &Field) -> Option<()> {
        let name = field.path.segments.first()?.name.clone();
        let value = self.definition(env, field.value.as_ref()?);
        let value = match value {
            Value::Number(typed) => {
                let typed = match &field.kind {
                    Some(kind) => {
                        let kind = self.kind_named(env, kind)?;
                        self.expect_kind(&typed, kind, &format!("`{}`", name.text), env.place(name.span))?
                    }
                    None => typed,
                };
                let full = format!("{}.{}", draft.name, name.text);
                let unit = self.display(env, &field.clauses);
                let source = self.source(&field.clauses).unwrap_or_default();
                Value::Number(self.quantity(
                    full.into(),
                    Group::Ledger,
                    Shown::Always,
                    typed.ty,
                    typed.node,
                    unit,
                    env.place(name.span),
                    source,
                ))
            }
            Value::Failed => return None,
            other => other,
        };
        env.define(name.text.clone(), value.clone());
        draft.members.push((name.text, value));
        Some(())
    }

    pub(super) fn member_of(&mut self, env: &mut Env, train: &Train, path: &Path) -> Option<usize> {
        let name = self.member_name(env, path)?;
        if let Some(at) = train.member(&name) {
            return Some(at);
        }
        let list: Vec<String> = train.members.iter().map(|member| format!("`{}`", member.name)).collect();
        self.report(
            Diagnostic::new(
                codes::UNKNOWN_NAME,
                env.place(path.span),
                format!("`{name}` is no member of the train `{}`", train.name),
            )
            .with_help(format!("its members are {}", list.join(", "))),
        );
        None
    }

    /// Speed of the first member in a state.
    fn state(&mut self, env: &mut Env, draft: &Draft, state: &StateSpec) -> Option<NodeId> {
        match state {
            StateSpec::AtRest(_) => Some(self.num(0.0)),
            StateSpec::Speed { path, value } => {
                let (last, rest) = path.segments.split_last()?;
                let place = env.place(path.span);
                if last.name.text != "speed" || rest.is_empty() {
                    self.report(
                        Diagnostic::new(codes::UNKNOWN_MEMBER, place, "a state is given by the speed of a member")
                            .with_help("write `start MEMBER.speed = ...`"),
                    );
                    return None;
                }
                let at = self.member_of(env, &draft.train, &Path { segments: rest.to_vec(), span: path.span })?;
                let member = draft.train.members[at].clone();
                let typed = self.number(env, value)?;
                let kind = if matches!(member.kind, MemberKind::Load(_)) { "speed" } else { "angular_velocity" };
                let typed = self.expect_kind(
                    &typed,
                    pintle_units::Kind::from_name(kind)?,
                    &format!("`{}.speed`", member.name),
                    place,
                )?;
                Some(self.over(typed.node, member.coefficient))
            }
            StateSpec::From(path) => {
                let first = path.segments.first()?;
                let owner = Path { segments: vec![first.clone()], span: path.span };
                match self.path(env, &owner) {
                    Value::Object(object) => match &object.entity {
                        Entity::Ledger(other) if other.train == draft.train.name => Some(other.end_speed),
                        _ => {
                            self.report(Diagnostic::new(
                                codes::NOT_A_QUANTITY,
                                env.place(path.span),
                                format!("`{}` is no ledger of the train `{}`", object.name, draft.train.name),
                            ));
                            None
                        }
                    },
                    _ => None,
                }
            }
        }
    }

    /// Speed, travel and kinetic energy of every member.
    fn member_states(&mut self, env: &mut Env, draft: &mut Draft, place: Place) {
        let (Some(start), Some(end)) = (draft.start, draft.end) else { return };
        let half = self.num(0.5);
        let mut starts = Vec::new();
        let mut ends = Vec::new();
        for at in 0..draft.train.members.len() {
            let member = draft.train.members[at].clone();
            let (inertia, speed_kind, travel_word, travel_kind) = match &member.kind {
                MemberKind::Rotor(moment, _) => (*moment, "angular_velocity", "angle", "angle"),
                MemberKind::Load(load) => (load.mass, "speed", "travel", "travel"),
            };
            let prefix = format!("{}.{}", draft.name, member.name);
            let mut state: Vec<(SmolStr, Value)> = Vec::new();
            let end_speed = self.times(end, member.coefficient);
            let speed = self.state_quantity(draft, &prefix, "speed", speed_kind, end_speed, place, &member.name);
            let end_node = match &speed {
                Value::Number(typed) => typed.node,
                _ => end_speed,
            };
            state.push(("speed".into(), speed.clone()));
            let start_node = self.times(start, member.coefficient);
            let ty = self.kind_type(speed_kind);
            let start_value = Value::Number(Typed { node: start_node, ty, place });
            state.push(("start_speed".into(), start_value.clone()));
            let energy = |this: &mut Self, speed: NodeId| {
                let square = this.square(speed);
                let product = this.times(inertia, square);
                this.times(half, product)
            };
            let (before, after) = (energy(self, start_node), energy(self, end_node));
            let kinetic = self.state_quantity(draft, &prefix, "kinetic", "energy", after, place, &member.name);
            let after = match &kinetic {
                Value::Number(typed) => typed.node,
                _ => after,
            };
            state.push(("kinetic".into(), kinetic));
            let change = self.minus(after, before);
            draft.stored[at].push(change);
            draft.uses.push(change);
            draft.plan.lines.push(LinePlan {
                name: member.name.clone(),
                side: Side::Kinetic,
                energy: change,
                ends: Some((before, after)),
            });
            if let Some((travel, _)) = draft.travel {
                let node = self.times(travel, member.coefficient);
                state.push((
                    travel_word.into(),
                    self.state_quantity(draft, &prefix, travel_word, travel_kind, node, place, &member.name),
                ));
            }
            if let MemberKind::Rotor(_, Some(reach)) = &member.kind {
                let node = self.times(end_node, *reach);
                state.push((
                    "rim_speed".into(),
                    self.state_quantity(draft, &prefix, "rim_speed", "speed", node, place, &member.name),
                ));
            }
            // Inside the ledger the member is its state and, behind it, itself.
            let own = self.own_members(env, &member.name);
            let all: Vec<_> = state.iter().cloned().chain(own).collect();
            env.define(member.name.clone(), Value::Object(Rc::new(self.member_object(env, &member.name, all))));
            starts.push((
                member.name.clone(),
                Value::plain(
                    format!("{}.start.{}", draft.name, member.name),
                    "a state",
                    vec![("speed".into(), start_value)],
                ),
            ));
            ends.push((member.name.clone(), Value::plain(prefix.clone(), "a state", state.clone())));
            draft.members.push((member.name.clone(), Value::plain(prefix, "a state of a member", state)));
        }
        let start = Value::plain(format!("{}.start", draft.name), "a state", starts);
        let end = Value::plain(format!("{}.end", draft.name), "a state", ends);
        env.define("start", start.clone());
        env.define("end", end.clone());
        draft.members.push(("start".into(), start));
        draft.members.push(("end".into(), end));
    }

    fn own_members(&mut self, env: &Env, name: &SmolStr) -> Vec<(SmolStr, Value)> {
        match self.sheet.lookup(env.origin, name).map(|id| self.entity(id)) {
            Some(Value::Object(object)) => object.members.clone(),
            _ => Vec::new(),
        }
    }

    fn member_object(&mut self, env: &Env, name: &SmolStr, members: Vec<(SmolStr, Value)>) -> Object {
        match self.sheet.lookup(env.origin, name).map(|id| self.entity(id)) {
            Some(Value::Object(object)) => Object { members, ..(*object).clone() },
            _ => Object { name: name.clone(), what: "a member", members, entity: Entity::Plain },
        }
    }

    #[allow(clippy::too_many_arguments)]
    fn state_quantity(
        &mut self,
        draft: &Draft,
        prefix: &str,
        word: &str,
        kind: &str,
        node: NodeId,
        place: Place,
        member: &SmolStr,
    ) -> Value {
        let full = self.dotted(&[prefix, word]);
        let state = self.dotted(&[member, word]);
        // An unknown already stands in the table under this name.
        let first = draft.first_quantity;
        let known = self.out.model.quantities.iter().skip(first).position(|quantity| quantity.name == full);
        if let Some(at) = known {
            self.states.push((state, QuantityId((first + at) as u32)));
            let quantity = &self.out.model.quantities[first + at];
            return Value::Number(Typed { node: quantity.node, ty: quantity.ty, place });
        }
        let ty = self.kind_type(kind);
        // Whole runs of a shaft are counted in revolutions, not in degrees.
        static TURNS: OnceLock<Option<Arc<Unit>>> = OnceLock::new();
        let turns = || TURNS.get_or_init(|| pintle_units::parse("rev", &|_| None).ok().map(Arc::new)).clone();
        let unit = if kind == "angle" { turns() } else { None };
        self.states.push((state, QuantityId(self.out.model.quantities.len() as u32)));
        let source = SmolStr::default();
        Value::Number(self.quantity(full, Group::Ledger, Shown::Always, ty, node, unit, place, source))
    }
}

fn same_case(names: &[Name], case: &[SmolStr]) -> bool {
    names.len() == case.len() && names.iter().all(|name| case.contains(&name.text))
}

//! Results made by hand, so that rendering is tested without a compiler.

use super::View;
use crate::model::{Input, InputTolerance, InputValue, Model, Quantity};
use crate::results::*;
use crate::source::{Origin, Source, Sources};
use pintle_graph::{Function, NodeId, Op, QuantityId};
use pintle_text::{Code, Diagnostic, FileId, ItemId, LineIndex, Place, Severity, Span};
use pintle_units::{Kind, Type, Unit};
use std::sync::Arc;

/// The text that the results below pretend to come from.
pub(crate) const SHEET: &str = "\
sheet \"Ramp winch\" { number = \"RW-1\", revision = \"B\" }
given trolley_mass = 3800 kg ± 2 % cite \"weighing list\"
given slope = 7.5 deg cite \"survey of the slipway, rail by rail, with the level of the harbour office\"
body barrel = tube { outer_diameter = 320 mm, inner_diameter = 288 mm, length = 520 mm }
rotor drum about x { barrel }
load trolley { mass = trolley_mass, path = incline slope }
train haul { rope line = drum -> trolley { pitch_diameter = 332 mm } }
pull = trolley_mass * g_n * sin(slope) as kN
ledger runaway of haul { travel trolley 9 m down_path, wanted drum.speed within 0 rpm .. 900 rpm }
limit pull <= 4 kN because \"the hook\" cite \"site rule 3\"
limit runaway.drum.speed <= 900 rpm
confirm drum.mass agrees 62 kg ± 3 %
case empty { trolley_mass = 1500 kg }
";

pub(crate) struct Fixture {
    pub sources: Sources,
    pub diagnostics: Vec<Diagnostic>,
    pub results: Results,
    pub models: Vec<Model>,
}

impl Fixture {
    pub fn view(&self) -> View<'_> {
        View { sources: &self.sources, diagnostics: &self.diagnostics, results: &self.results, models: &self.models }
    }

    pub fn report_error(&mut self) {
        const CODE: Code =
            Code { name: "unknown-name", severity: Severity::Error, summary: "a name that nothing defines" };
        self.diagnostics.push(Diagnostic::new(CODE, place(2), "no item is named `slop`"));
    }

    /// A winch with two limits, a ledger, an unknown, a second route and a case.
    pub fn winch() -> Fixture {
        let mut sources = Sources::default();
        sources.add(source("winch.pintle", SHEET));
        let (base_model, base) = case(None, 3800.0);
        let (empty_model, empty) = case(Some("empty"), 1500.0);
        let results = Results {
            sheet: SheetInfo {
                title: "Ramp winch".into(),
                number: "RW-1".into(),
                revision: "B".into(),
                fields: vec![("scope".into(), "Drum, pull and runaway speed.".into())],
            },
            base,
            cases: vec![empty],
            assumptions: vec![
                Assumption {
                    text: "The rope's own mass is left out.".into(),
                    confirmed: Some("rope data sheet".into()),
                    line: 3,
                },
                Assumption { text: "No wind acts on the trolley while it runs away.".into(), confirmed: None, line: 4 },
            ],
            cautions: vec!["A raised load holds energy: secure it before work on the drive.".into()],
        };
        Fixture { sources, diagnostics: Vec::new(), results, models: vec![base_model, empty_model] }
    }
}

pub(crate) fn source(path: &str, text: &str) -> Source {
    Source {
        path: path.into(),
        origin: Origin::Sheet,
        text: text.into(),
        lines: Arc::new(LineIndex::new(text)),
        syntax: Arc::new(pintle_syntax::parse(text)),
    }
}

pub(crate) fn place(index: u32) -> Place {
    place_in(0, index, 0, 5)
}

pub(crate) fn place_in(file: u32, index: u32, start: u32, end: u32) -> Place {
    Place { item: ItemId { file: FileId(file), index }, span: Span::new(start, end) }
}

pub(crate) fn unit(text: &str) -> Arc<Unit> {
    Arc::new(pintle_units::parse(text, &|_| None).unwrap())
}

struct Maker {
    model: Model,
    results: CaseResults,
    values: Vec<f64>,
}

impl Maker {
    #[allow(clippy::too_many_arguments)]
    fn quantity(
        &mut self,
        name: &str,
        group: Group,
        shown: Shown,
        kind: Kind,
        of: NodeId,
        si: f64,
        text: &str,
        item: u32,
    ) -> NodeId {
        let id = QuantityId(self.model.quantities.len() as u32);
        let node = self.model.graph.add(Op::Quantity(id, of));
        let unit = unit(text);
        let mut ty = Type::of_unit(&unit);
        ty.kind = Some(kind);
        let place = place(item);
        let source = if group == Group::Given {
            ["", "weighing list", "survey of the slipway, rail by rail, with the level of the harbour office"]
                [item as usize]
        } else {
            ""
        };
        self.model.quantities.push(Quantity {
            name: name.into(),
            group,
            shown,
            ty,
            node,
            unit: unit.clone(),
            place,
            source: source.into(),
        });
        let toleranced = self.model.inputs.iter().any(|it| it.quantity.is_none());
        self.results.quantities.push(QuantityResult {
            id,
            name: name.into(),
            group,
            ty,
            si: Some(si),
            unit,
            low: None,
            high: None,
            std: None,
            toleranced,
            status: if group == Group::Wanted { Status::Unique } else { Status::Evaluated },
            shown,
            place,
            line: item as usize + 1,
            source: source.into(),
        });
        node
    }

    fn input(&mut self, si: f64, text: &str, tolerance: Option<InputTolerance>, item: u32) -> NodeId {
        let (_, node) = self.model.graph.input();
        let id = QuantityId(self.model.quantities.len() as u32);
        self.model.inputs.push(Input {
            quantity: Some(id),
            text: text.into(),
            place: place(item),
            value: InputValue::Given { nominal: si, tolerance },
        });
        self.values.push(si);
        node
    }
}

fn case(name: Option<&str>, mass: f64) -> (Model, CaseResults) {
    let results = CaseResults { case: name.map(String::from), ..CaseResults::default() };
    let mut it = Maker { model: Model::default(), results, values: Vec::new() };
    let limits = InputTolerance::Limits { low: mass - 76.0, high: mass + 76.0 };
    let m = it.input(mass, &format!("{mass} kg"), Some(limits), 1);
    let m = it.quantity("trolley_mass", Group::Given, Shown::Always, Kind::Mass, m, mass, "kg", 1);
    if let Some(given) = it.results.quantities.last_mut() {
        (given.low, given.high) = (Some(mass - 76.0), Some(mass + 76.0));
    }
    let angle = 7.5_f64.to_radians();
    let slope = it.input(angle, "7.5 deg", None, 2);
    let slope = it.quantity("slope", Group::Given, Shown::Always, Kind::Angle, slope, angle, "deg", 2);
    let g = it.model.graph.number(9.80665, "9.80665 m/s^2");
    let g = it.quantity("g_n", Group::Derived, Shown::OnRequest, Kind::Acceleration, g, 9.80665, "m/s^2", 0);
    let literal = it.model.graph.number(62.1, "62.1 kg");
    for (owner, group) in [("barrel", Group::Body), ("drum", Group::Rotor)] {
        it.quantity(&format!("{owner}.mass"), group, Shown::Always, Kind::Mass, literal, 62.13, "kg", 3);
        it.quantity(&format!("{owner}.J"), group, Shown::Always, Kind::MomentOfInertia, literal, 1.4389, "kg*m^2", 3);
        it.quantity(&format!("{owner}.centre.x"), group, Shown::Always, Kind::Length, literal, 0.26, "mm", 3);
        it.quantity(&format!("{owner}.centre.y"), group, Shown::OnRequest, Kind::Length, literal, 0.0, "mm", 3);
        it.quantity(&format!("{owner}.centre.z"), group, Shown::OnRequest, Kind::Length, literal, 1e-17, "mm", 3);
    }
    let product = it.model.graph.add(Op::Multiply(m, g));
    let sine = it.model.graph.add(Op::Apply(Function::Sin, slope));
    let pull_node = it.model.graph.add(Op::Multiply(product, sine));
    let pull = mass * 9.80665 * libm::sin(angle);
    let pull_node = it.quantity("pull", Group::Derived, Shown::Always, Kind::Force, pull_node, pull, "kN", 7);
    let (input, speed_node) = it.model.graph.input();
    let wanted = QuantityId(it.model.quantities.len() as u32);
    let range = InputValue::Wanted { low: 0.0, high: unit("rpm").to_si(900.0), declared: true };
    it.model.inputs.push(Input { quantity: Some(wanted), text: "".into(), place: place(8), value: range });
    assert_eq!(input.0 as usize + 1, it.model.inputs.len());
    let speed = 60.0 * (mass / 3800.0).sqrt();
    it.values.push(speed);
    it.quantity("runaway.drum.speed", Group::Wanted, Shown::Always, Kind::AngularVelocity, speed_node, speed, "rpm", 8);
    let _ = pull_node;
    it.model.values = pintle_graph::evaluate(&it.model.graph, &it.values);
    let height = pull * 9.0;
    it.results.ledgers.push(LedgerResult {
        name: "runaway".into(),
        train: "haul".into(),
        lines: vec![
            LedgerEntry { name: "drum".into(), side: Side::Kinetic, si: Some(2590.0), from_to: Some((0.0, 2590.0)) },
            LedgerEntry {
                name: "trolley".into(),
                side: Side::Height,
                si: Some(-height),
                from_to: Some((0.0, -height)),
            },
            LedgerEntry { name: "rolling".into(), side: Side::Lose, si: Some(height - 3790.0), from_to: None },
            LedgerEntry { name: "line".into(), side: Side::Link, si: Some(1200.0), from_to: None },
        ],
        residual: Some(1.5e-12),
        largest: height,
        place: place(8),
        line: 9,
    });
    let limit = |text: &str, value: f64, bound: f64, in_unit: &str, item: u32| LimitResult {
        text: text.into(),
        verdict: if value <= bound { Verdict::Met } else { Verdict::NotMet },
        value: Some(value),
        bound: Some(bound),
        unit: unit(in_unit),
        margin: Some(1.0 - value / bound),
        low: None,
        high: None,
        worst: None,
        governing: None,
        because: if item == 9 { "the hook".into() } else { String::new() },
        source: if item == 9 { "site rule 3".into() } else { String::new() },
        place: place(item),
        line: item as usize + 1,
    };
    it.results.limits = vec![
        limit("pull <= 4 kN", pull, 4000.0, "kN", 9),
        limit("runaway.drum.speed <= 900 rpm", speed, unit("rpm").to_si(900.0), "rpm", 10),
    ];
    it.results.confirms.push(ConfirmResult {
        text: "drum.mass".into(),
        value: Some(62.13),
        second: Some(62.0),
        half_width: Some(1.86),
        unit: unit("kg"),
        agrees: Some(true),
        source: String::new(),
        place: place(11),
        line: 12,
    });
    (it.model, it.results)
}

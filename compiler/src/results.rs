//! What came out: the one value that the command line, the reports, JSON and
//! the language server read. Plain data; no stage is called from here.

use crate::QuickMap;
use pintle_graph::QuantityId;
use pintle_text::Place;
use pintle_units::{Type, Unit};
use smol_str::SmolStr;
use std::borrow::Cow;
use std::sync::Arc;
use std::sync::OnceLock;

/// The title block.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct SheetInfo {
    /// Title of the sheet; empty where none is given.
    pub title: String,
    /// Its number.
    pub number: String,
    /// Its revision.
    pub revision: String,
    /// Further fields in order: scope, status ...
    pub fields: Vec<(String, String)>,
}

/// Everything that a sheet says, base and cases.
#[derive(Clone, Debug, Default)]
pub struct Results {
    /// The title block.
    pub sheet: SheetInfo,
    /// The sheet as it stands.
    pub base: CaseResults,
    /// The sheet under each case, in order.
    pub cases: Vec<CaseResults>,
    /// `assume` lines in order.
    pub assumptions: Vec<Assumption>,
    /// Short lines of caution that the sheet's content calls for.
    pub cautions: Vec<String>,
}

impl Results {
    /// The base and then every case.
    pub fn all_cases(&self) -> impl Iterator<Item = &CaseResults> {
        std::iter::once(&self.base).chain(&self.cases)
    }
}

/// Results of the sheet as it stands, or under one case.
#[derive(Clone, Debug, Default)]
pub struct CaseResults {
    /// The case's name; None: the sheet as it stands.
    pub case: Option<String>,
    /// Every quantity, in the order of the sheet.
    pub quantities: Vec<QuantityResult>,
    /// Every ledger.
    pub ledgers: Vec<LedgerResult>,
    /// Every limit, also those inside ledgers.
    pub limits: Vec<LimitResult>,
    /// Every `confirm`.
    pub confirms: Vec<ConfirmResult>,
    /// Places of the quantities by name, once somebody asks.
    pub(crate) by_name: OnceLock<QuickMap<SmolStr, usize>>,
}

impl CaseResults {
    /// The quantity of that full dotted name. To be asked only when all are in.
    pub fn quantity(&self, name: &str) -> Option<&QuantityResult> {
        let by_name = self.by_name.get_or_init(|| {
            let mut by_name = QuickMap::default();
            for (at, quantity) in self.quantities.iter().enumerate() {
                by_name.entry(quantity.name.clone()).or_insert(at);
            }
            by_name
        });
        self.quantities.get(*by_name.get(name)?)
    }
}

/// What part of the sheet a quantity belongs to.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Group {
    /// A `given`.
    Given,
    /// A number with a tolerance inside a body, link or other item: an input like a given.
    Field,
    /// A derived quantity.
    Derived,
    /// A member of a body.
    Body,
    /// A member of a rotor.
    Rotor,
    /// A load, spring or brake.
    Member,
    /// A train's ratio.
    Train,
    /// A state or line of a ledger.
    Ledger,
    /// An unknown that was found.
    Wanted,
}

/// Whether a quantity is shown without being asked for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Shown {
    /// In the tables of `solve`.
    Always,
    /// In JSON, hover and `explain` only.
    OnRequest,
}

/// How sure a value is.
#[derive(Clone, Debug, PartialEq)]
pub enum Status {
    /// Follows from the givens by evaluation alone.
    Evaluated,
    /// Found by root finding; satisfies its equations; that it is the only
    /// solution in the range is not proved.
    Found,
    /// Proved the only solution in the declared range.
    Unique,
    /// Several solutions in the range; their values in SI.
    OneOf(Vec<f64>),
    /// Not known; why, in words.
    Undecided(String),
    /// Could not be computed because of an error reported elsewhere.
    Failed,
}

impl Status {
    /// The word used in output and JSON.
    pub fn word(&self) -> String {
        match self {
            Status::Evaluated => "evaluated".into(),
            Status::Found => "found".into(),
            Status::Unique => "unique".into(),
            Status::OneOf(solutions) => format!("one of {}", solutions.len()),
            Status::Undecided(_) => "undecided".into(),
            Status::Failed => "failed".into(),
        }
    }
}

/// One quantity.
#[derive(Clone, Debug)]
pub struct QuantityResult {
    /// Its identity in the model of its case.
    pub id: QuantityId,
    /// Full dotted name.
    pub name: SmolStr,
    /// What it belongs to.
    pub group: Group,
    /// Dimension, angle exponent and kind.
    pub ty: Type,
    /// Value in coherent SI units; None where it is not known.
    pub si: Option<f64>,
    /// The unit that it is shown in.
    pub unit: Arc<Unit>,
    /// Guaranteed worst case, SI; None where no tolerance enters or it is not computed.
    pub low: Option<f64>,
    /// Upper end of the same.
    pub high: Option<f64>,
    /// Standard uncertainty, SI.
    pub std: Option<f64>,
    /// Whether a toleranced input enters it.
    pub toleranced: bool,
    /// How sure.
    pub status: Status,
    /// Whether tables show it.
    pub shown: Shown,
    /// Where it is defined.
    pub place: Place,
    /// Line in its file, from 1.
    pub line: usize,
    /// Its source as cited; empty where none is.
    pub source: SmolStr,
}

impl QuantityResult {
    /// Its kind in words; also for quantities without a named kind.
    pub fn kind_words(&self) -> Cow<'static, str> {
        match self.ty.kind {
            Some(kind) => kind.words().into(),
            None => self.ty.words().into(),
        }
    }
}

/// One ledger.
#[derive(Clone, Debug)]
pub struct LedgerResult {
    /// Its name.
    pub name: String,
    /// Its train.
    pub train: String,
    /// Lines in order: stored energies, gains, losses.
    pub lines: Vec<LedgerEntry>,
    /// Sum of all lines computed apart from the equation solved, in J; None where a line is not known.
    pub residual: Option<f64>,
    /// The largest absolute line, the measure for the residual.
    pub largest: f64,
    /// Where.
    pub place: Place,
    /// Line in its file, from 1.
    pub line: usize,
}

/// On which side a line of a ledger stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Side {
    /// Kinetic energy of a member: end less start.
    Kinetic,
    /// Energy of height: end less start.
    Height,
    /// Energy of a spring: end less start.
    Spring,
    /// Put in.
    Gain,
    /// Lost, as named.
    Lose,
    /// Lost in a link.
    Link,
}

impl Side {
    /// The word used in output and JSON.
    pub fn word(self) -> &'static str {
        match self {
            Side::Kinetic => "kinetic",
            Side::Height => "height",
            Side::Spring => "spring",
            Side::Gain => "gain",
            Side::Lose => "lose",
            Side::Link => "link",
        }
    }
}

/// One line of a ledger.
#[derive(Clone, Debug)]
pub struct LedgerEntry {
    /// Its name: a member, or the name of a gain or loss.
    pub name: String,
    /// Where it stands.
    pub side: Side,
    /// Energy in J. Stored energies: end less start. Gains and losses: as named.
    pub si: Option<f64>,
    /// Stored energies only: energy at start and end.
    pub from_to: Option<(f64, f64)>,
}

/// Verdict of a limit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Verdict {
    /// Holds on the whole worst-case set.
    Met,
    /// Holds at the nominal values; not proved for the set.
    MetAtNominalOnly,
    /// Fails at the nominal values.
    NotMet,
    /// The value itself is undecided.
    Undecided,
}

impl Verdict {
    /// The words used in output and JSON.
    pub fn words(self) -> &'static str {
        match self {
            Verdict::Met => "met",
            Verdict::MetAtNominalOnly => "met at nominal only",
            Verdict::NotMet => "not met",
            Verdict::Undecided => "undecided",
        }
    }
}

/// What is known of the worst case where a limit is met at nominal only.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Worst {
    /// A corner of the tolerances breaks it.
    Broken,
    /// Neither proved nor disproved.
    Unproved,
}

impl Worst {
    /// The word used in output and JSON.
    pub fn word(self) -> &'static str {
        match self {
            Worst::Broken => "broken",
            Worst::Unproved => "unproved",
        }
    }
}

/// One limit in one case.
#[derive(Clone, Debug)]
pub struct LimitResult {
    /// The condition as written, one line.
    pub text: String,
    /// The verdict.
    pub verdict: Verdict,
    /// Left side in SI (for `every`: the governing one).
    pub value: Option<f64>,
    /// Right side in SI.
    pub bound: Option<f64>,
    /// Unit to show both in.
    pub unit: Arc<Unit>,
    /// Distance to the bound as a share of the bound, positive where met; None where the bound is zero.
    pub margin: Option<f64>,
    /// Worst case of the left side, SI.
    pub low: Option<f64>,
    /// Upper end of the same.
    pub high: Option<f64>,
    /// Only with "met at nominal only".
    pub worst: Option<Worst>,
    /// For `every`: the name of the governing quantity.
    pub governing: Option<String>,
    /// `because`.
    pub because: String,
    /// `cite`.
    pub source: String,
    /// Where.
    pub place: Place,
    /// Line in its file, from 1.
    pub line: usize,
}

/// One `confirm` in one case.
#[derive(Clone, Debug)]
pub struct ConfirmResult {
    /// The value as written.
    pub text: String,
    /// The sheet's value, SI.
    pub value: Option<f64>,
    /// The second route's value, SI.
    pub second: Option<f64>,
    /// Half-width of the agreement asked for, SI.
    pub half_width: Option<f64>,
    /// Unit to show them in.
    pub unit: Arc<Unit>,
    /// Whether they agree; None where one is not known.
    pub agrees: Option<bool>,
    /// `cite`.
    pub source: String,
    /// Where.
    pub place: Place,
    /// Line in its file, from 1.
    pub line: usize,
}

/// One `assume`.
#[derive(Clone, Debug, PartialEq)]
pub struct Assumption {
    /// What is assumed.
    pub text: String,
    /// By what it was confirmed; None: open.
    pub confirmed: Option<String>,
    /// Line in its file, from 1.
    pub line: usize,
}

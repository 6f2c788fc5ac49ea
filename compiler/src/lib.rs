//! Pintle: calculation sheets for rotating assemblies, checked and solved.
//!
//! [`compile`] takes a sheet through all stages and never stops at a fault:
//! what could still be computed is in the results, what could not is in the
//! diagnostics.
//!
//! ```
//! let text = "given J : moment_of_inertia = 3.2 kg*m^2\ngiven w : angular_velocity = 900 rpm\nE = 1/2 * J * w^2";
//! let compilation = pintle::compile_text("rotor.pintle", text, &pintle::source::Disk, &pintle::Options::default());
//! let energy = compilation.results.base.quantity("E").and_then(|it| it.si);
//! assert!((energy.unwrap() - 14212.23).abs() < 0.01);
//! ```

pub mod analysis;
pub mod codes;
pub mod library;
pub mod lower;
pub mod model;
pub mod names;
pub mod nearest;
pub mod number;
mod outcome;
pub mod render;
pub mod results;
pub mod source;

use lower::Overrides;
use model::Model;
use pintle_syntax::ast::{AssumeStatus, Definition, Item, ItemKind};
use pintle_text::{Diagnostic, ItemId, Place, Severity};
use results::{Assumption, Group, Results, SheetInfo};
use smol_str::SmolStr;
use source::{Files, Sources};
use std::collections::{BTreeMap, HashMap};

/// A map with a quick hash and no random seed: its keys are names and numbers of
/// a sheet, not an attacker's. Never iterate over it into output.
type QuickMap<K, V> = HashMap<K, V, foldhash::fast::FixedState>;

/// Whether open assumptions and uncited givens are errors.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Strictness {
    /// They are not.
    #[default]
    Normal,
    /// They are.
    Strict,
}

/// How to compile.
#[derive(Clone, Copy, Debug, Default)]
pub struct Options {
    /// Open assumptions and uncited givens.
    pub strict: Strictness,
}

/// A sheet after all stages.
#[derive(Debug, Default)]
pub struct Compilation {
    /// Its files.
    pub sources: Sources,
    /// All diagnostics, by file and position.
    pub diagnostics: Vec<Diagnostic>,
    /// What came out.
    pub results: Results,
    /// The model of the base and of each case, in the order of the results.
    pub models: Vec<Model>,
}

impl Compilation {
    /// Whether a diagnostic is an error.
    pub fn has_errors(&self) -> bool {
        self.diagnostics.iter().any(|it| it.severity() == Severity::Error)
    }
}

/// Enough for the deepest nesting that the parser lets pass, in an unoptimised build.
const STACK: usize = 64 << 20;

/// A sheet that cannot be read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FileError {
    /// Its path.
    pub path: String,
    /// Why.
    pub why: String,
}

/// Compiles the sheet at `path`.
pub fn compile(path: &str, files: &(dyn Files + Sync), options: &Options) -> Result<Compilation, FileError> {
    let bytes = files.read(path).map_err(|why| FileError { path: path.into(), why })?;
    let text =
        String::from_utf8(bytes).map_err(|_| FileError { path: path.into(), why: "it is not UTF-8 text".into() })?;
    Ok(compile_text(path, &text, files, options))
}

/// Compiles a sheet's text; `path` names it and is where files beside it are looked for.
pub fn compile_text(path: &str, text: &str, files: &(dyn Files + Sync), options: &Options) -> Compilation {
    compile_unless(path, text, files, options, &|| false).unwrap_or_default()
}

/// As [`compile_text`], but gives up soon after `cancel` has begun to say so,
/// in the middle of a search too; then there is nothing.
pub fn compile_unless(
    path: &str,
    text: &str,
    files: &(dyn Files + Sync),
    options: &Options,
    cancel: &(dyn Fn() -> bool + Sync),
) -> Option<Compilation> {
    // Nesting is bounded, but callers' threads may have small stacks. A stack, not a thread: a thread would get a
    // heap of its own, whose pages come and go with it.
    stacker::grow(STACK, || compile_here(path, text, files, options, cancel))
}

fn compile_here(
    path: &str,
    text: &str,
    files: &dyn Files,
    options: &Options,
    cancel: &dyn Fn() -> bool,
) -> Option<Compilation> {
    let (sheet, mut diagnostics) = names::resolve(path, text.into(), files);
    for (id, item) in sheet.own_items() {
        syntax_errors(id, item, 0, &mut diagnostics);
    }
    let mut results = Results::default();
    title_block(&sheet, &mut results);
    assumptions(&sheet, options, &mut results, &mut diagnostics);
    let cases = cases(&sheet, &mut diagnostics);
    let mut models = Vec::new();
    let mut hazards = lower::Hazards::default();
    for (at, case) in cases.iter().enumerate() {
        let lowered = lower::lower_unless(&sheet, &case.overrides, &case.names, files, cancel);
        // What broke off is no outcome, and nothing is to be said of it.
        if cancel() {
            return None;
        }
        hazards = lowered.hazards;
        let name = (at > 0).then(|| case.label());
        let (found, model, mut reported) = outcome::outcome(&sheet, lowered, name.clone(), cancel);
        if let Some(name) = name {
            // What the base says too is said once.
            reported.retain(|it| !diagnostics.contains(it));
            for diagnostic in &mut reported {
                diagnostic.message = format!("in case {name}: {}", diagnostic.message);
            }
            results.cases.push(found);
        } else {
            results.base = found;
        }
        diagnostics.extend(reported);
        models.push(model);
    }
    // What a stopped search left behind is no outcome.
    if cancel() {
        return None;
    }
    results.cautions = outcome::cautions(hazards);
    if options.strict == Strictness::Strict {
        uncited(&results, &mut diagnostics);
    }
    let key = |it: &Diagnostic| (it.place.item.file, sheet.sources.span(it.place).start);
    diagnostics.sort_by_key(key);
    diagnostics.dedup();
    Some(Compilation { sources: sheet.sources, diagnostics, results, models })
}

/// Syntax errors of an item and of the items inside it.
fn syntax_errors(id: ItemId, item: &Item, shift: u32, acc: &mut Vec<Diagnostic>) {
    for error in &item.errors {
        let mut placed = error.clone().in_item(id);
        if shift > 0 {
            placed.place.span = placed.place.span.shifted(shift);
            for label in &mut placed.labels {
                label.place.span = label.place.span.shifted(shift);
            }
            placed.fixes.clear();
        }
        acc.push(placed);
    }
    if let ItemKind::Component { items, .. } = &item.kind {
        for inner in items {
            syntax_errors(id, inner, shift + inner.offset, acc);
        }
    }
}

fn title_block(sheet: &names::Sheet, results: &mut Results) {
    for (id, item) in sheet.own_items() {
        if id.file.0 != 0 {
            continue;
        }
        let ItemKind::Sheet { title, fields } = &item.kind else { continue };
        let mut info = SheetInfo { title: title.text.clone(), ..SheetInfo::default() };
        for field in fields {
            let (Some(segment), Some(Definition::Value(value))) = (field.path.segments.first(), &field.value) else {
                continue;
            };
            let text = match &value.kind {
                pintle_syntax::ast::ExprKind::Text(text) => text.text.clone(),
                _ => sheet.sources.text(Place { item: id, span: value.span }).to_string(),
            };
            match segment.name.text.as_str() {
                "number" => info.number = text,
                "revision" => info.revision = text,
                other => info.fields.push((other.to_string(), text)),
            }
        }
        results.sheet = info;
        return;
    }
}

fn assumptions(sheet: &names::Sheet, options: &Options, results: &mut Results, acc: &mut Vec<Diagnostic>) {
    for (id, item) in sheet.own_items() {
        let ItemKind::Assume { text, status } = &item.kind else { continue };
        let confirmed = match status {
            AssumeStatus::Confirmed(by) => Some(by.as_ref().map_or(String::new(), |by| by.text.clone())),
            _ => None,
        };
        let place = Place { item: id, span: text.span };
        if confirmed.is_none() && options.strict == Strictness::Strict {
            acc.push(
                Diagnostic::new(codes::OPEN_ASSUMPTION, place, "this assumption is open")
                    .with_help("have it confirmed and write `confirmed \"by what\"` behind it"),
            );
        }
        let line = sheet.sources.location(place).line;
        results.assumptions.push(Assumption { text: text.text.clone(), confirmed, line });
    }
}

fn uncited(results: &Results, acc: &mut Vec<Diagnostic>) {
    for quantity in results.base.quantities.iter().filter(|it| it.group == Group::Given && it.source.is_empty()) {
        acc.push(
            Diagnostic::new(
                codes::UNCITED_GIVEN,
                quantity.place,
                format!("the given `{}` has no source", quantity.name),
            )
            .with_help("add `cite \"SOURCE\"`, or `cite common_practice`"),
        );
    }
}

/// A case: its names and what it changes. The first is the base.
struct Case<'s> {
    names: Vec<SmolStr>,
    overrides: Overrides<'s>,
}

impl Case<'_> {
    fn label(&self) -> String {
        self.names.join(" + ")
    }
}

fn cases<'s>(sheet: &'s names::Sheet, acc: &mut Vec<Diagnostic>) -> Vec<Case<'s>> {
    let mut declared: BTreeMap<SmolStr, Overrides<'s>> = BTreeMap::new();
    let mut order: Vec<Vec<SmolStr>> = vec![Vec::new()];
    for (id, item) in sheet.own_items() {
        let ItemKind::Case { name, overrides } = &item.kind else { continue };
        let mut changes = Overrides::default();
        for field in overrides {
            let path: String =
                sheet.sources.text(Place { item: id, span: field.path.span }).split_whitespace().collect();
            changes.fields.insert(path.into(), (id, field));
        }
        if declared.insert(name.text.clone(), changes).is_none() {
            order.push(vec![name.text.clone()]);
        }
    }
    for (id, item) in sheet.own_items() {
        let ItemKind::Ledger { under, .. } = &item.kind else { continue };
        for combination in under {
            let names: Vec<SmolStr> = combination.iter().map(|name| name.text.clone()).collect();
            for name in combination.iter().filter(|name| !declared.contains_key(&name.text)) {
                let known = declared.keys().map(|it| it.as_str());
                let place = Place { item: id, span: name.span };
                acc.push(
                    Diagnostic::new(codes::UNKNOWN_CASE, place, format!("no case is named `{}`", name.text)).with_help(
                        nearest::did_you_mean(&name.text, known)
                            .unwrap_or_else(|| "declare it: `case NAME { GIVEN = VALUE }`".into()),
                    ),
                );
            }
            if names.iter().all(|name| declared.contains_key(name)) && !order.contains(&names) {
                order.push(names);
            }
        }
    }
    order
        .into_iter()
        .map(|names| {
            let mut overrides = Overrides::default();
            for name in &names {
                if let Some(changes) = declared.get(name) {
                    overrides.fields.extend(changes.fields.iter().map(|(name, change)| (name.clone(), *change)));
                }
            }
            Case { names, overrides }
        })
        .collect()
}

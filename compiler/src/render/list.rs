//! Listings: what the language and its library offer, with sources.

use super::number;
use super::page::{Align, Colour, Page, Paint, Table};
use crate::library::{STANDARD, parsed};
use pintle_syntax::ast::{Cite, Clauses, Definition, Field, Item, ItemKind, Name, Parameter, SourceFile};
use pintle_units::{Kind, UnitDef, all};
use serde_json::{Value, json};

/// What can be listed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Topic {
    /// Units of the table.
    Units,
    /// Kinds of quantities.
    Kinds,
    /// Shapes of bodies.
    Shapes,
    /// Materials of the library.
    Materials,
    /// Functions of the language and formulas of the library.
    Functions,
}

impl Topic {
    /// All topics.
    pub const ALL: [Topic; 5] = [Topic::Units, Topic::Kinds, Topic::Shapes, Topic::Materials, Topic::Functions];

    /// The word on the command line.
    pub fn word(self) -> &'static str {
        match self {
            Topic::Units => "units",
            Topic::Kinds => "kinds",
            Topic::Shapes => "shapes",
            Topic::Materials => "materials",
            Topic::Functions => "functions",
        }
    }

    /// The topic of a word.
    pub fn from_word(word: &str) -> Option<Topic> {
        Topic::ALL.into_iter().find(|topic| topic.word() == word)
    }
}

/// One thing on offer.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Entry {
    /// Its name as sheets write it.
    pub name: String,
    /// How it is written, what it is worth: parameters, size in SI, fields.
    pub form: String,
    /// What it is, in words.
    pub words: String,
    /// Its published source.
    pub source: String,
    /// The `use` line that brings it; empty where none is needed.
    pub from: String,
}

/// Everything under a topic whose texts hold `word`, whatever its case.
pub fn entries(topic: Topic, word: Option<&str>) -> Vec<Entry> {
    let all = match topic {
        Topic::Units => units(),
        Topic::Kinds => kinds(),
        Topic::Shapes => built_in_shapes().chain(library(shape)).collect(),
        Topic::Materials => library(material).collect(),
        Topic::Functions => built_in_functions().chain(library(formula)).collect(),
    };
    let Some(word) = word.map(str::to_lowercase) else { return all };
    let holds = |it: &Entry| {
        [&it.name, &it.form, &it.words, &it.source, &it.from].iter().any(|text| text.to_lowercase().contains(&word))
    };
    // A name that is exactly what was asked for comes before what only mentions it.
    let (exact, others): (Vec<Entry>, Vec<Entry>) =
        all.into_iter().filter(holds).partition(|it| it.name.to_lowercase() == word);
    exact.into_iter().chain(others).collect()
}

/// The names under a topic.
pub fn names(topic: Topic) -> Vec<String> {
    entries(topic, None).into_iter().map(|it| it.name).collect()
}

/// The entries as text.
pub fn text(topic: Topic, entries: &[Entry], colour: Colour) -> String {
    let mut page = Page::new(colour);
    match topic {
        Topic::Units | Topic::Kinds => {
            let mut table = Table::new(0, &[Align::Left, Align::Left, Align::Left]);
            for it in entries {
                let words =
                    if it.source.is_empty() { it.words.clone() } else { format!("{} [{}]", it.words, it.source) };
                table.row(vec![it.name.as_str().into(), it.form.as_str().into(), words.into()]);
            }
            table.write(&mut page);
        }
        Topic::Shapes | Topic::Materials | Topic::Functions => {
            let mut from = None;
            for it in entries {
                if from != Some(&it.from) {
                    let heading = if it.from.is_empty() { "built in" } else { it.from.as_str() };
                    page.heading(heading);
                    from = Some(&it.from);
                }
                page.text_block(2, 6, &it.form, Paint::Plain);
                for text in [&it.words, &it.source].into_iter().filter(|text| !text.is_empty()) {
                    page.text_block(6, 6, text, Paint::Plain);
                }
            }
        }
    }
    page.text()
}

/// The entries as JSON.
pub fn json(entries: &[Entry]) -> Value {
    entries
        .iter()
        .map(|it| json!({"name": it.name, "form": it.form, "words": it.words, "source": it.source, "from": it.from}))
        .collect()
}

fn units() -> Vec<Entry> {
    let entry = |def: &UnitDef| {
        let size = match def.ice_point {
            Some(reading) => format!("{} at 273.15 K", number::engineering(reading)),
            None => format!("{} {}", exact(def.scale.value()), def.dim.si_symbol()),
        };
        let mut words = def.words.to_string();
        if !def.aliases.is_empty() {
            let aliases: Vec<&str> = def.aliases.iter().map(|it| it.as_str()).collect();
            words.push_str(&format!(" (also {})", aliases.join(", ")));
        }
        Entry { name: def.symbol.to_string(), form: size, words, source: def.source.into(), from: String::new() }
    };
    all().iter().map(entry).collect()
}

/// Every digit, with a power of ten where zeros would hide them.
fn exact(value: f64) -> String {
    if (1e-4..1e7).contains(&value) { value.to_string() } else { format!("{value:e}") }
}

fn kinds() -> Vec<Entry> {
    let entry = |def: &pintle_units::KindDef| {
        let symbol = if def.symbol.is_empty() { String::new() } else { format!("{} in ", def.symbol) };
        let mut words = def.words.to_string();
        if def.base != def.kind {
            words.push_str(&format!(", a {}", def.base.words()));
        }
        if !def.aliases.is_empty() {
            words.push_str(&format!(" (also {})", def.aliases.join(", ")));
        }
        Entry {
            name: def.name.into(),
            form: format!("{symbol}{}", def.unit),
            words,
            source: String::new(),
            from: String::new(),
        }
    };
    Kind::all().iter().map(entry).collect()
}

/// Shapes that the compiler knows without a library.
const SHAPES: [(&str, &str, &str); 4] = [
    (
        "turned",
        "turned { profile = [(axial, radial), ...] }",
        "a solid of revolution; corners in order round the outline",
    ),
    (
        "extruded",
        "extruded { outline = [(y, z), ...], holes = [[(y, z), ...], ...], length = ... }",
        "a plate or bar of constant section along x; holes may be left out",
    ),
    ("mesh", "mesh { file = \"part.stl\", unit = mm }", "the closed surface of an STL file, in the file's own axes"),
    (
        "measured",
        "measured { mass = ..., inertia = ..., cross_inertia = ..., centre = (x, y, z) }",
        "known from a data sheet or a test; cross_inertia and centre may be left out",
    ),
];

fn built_in_shapes() -> impl Iterator<Item = Entry> {
    SHAPES.into_iter().map(|(name, form, words)| Entry {
        name: name.into(),
        form: form.into(),
        words: words.into(),
        source: String::new(),
        from: String::new(),
    })
}

fn built_in_functions() -> impl Iterator<Item = Entry> {
    crate::lower::FUNCTIONS.iter().map(|(form, words)| Entry {
        name: form.split('(').next().unwrap_or(form).into(),
        form: (*form).into(),
        words: (*words).into(),
        source: String::new(),
        from: String::new(),
    })
}

/// What a file of the library says about one of its items.
struct InLibrary<'a> {
    text: &'a str,
    item: &'a Item,
}

impl InLibrary<'_> {
    fn text(&self, span: pintle_text::Span) -> String {
        let from = self.item.offset as usize;
        let text = self.text.get(from + span.start as usize..from + span.end as usize).unwrap_or("");
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }

    fn parameters(&self, parameters: &[Parameter]) -> String {
        let one = |it: &Parameter| {
            let kind = it.kind.as_ref().map_or(String::new(), |kind| format!(" : {}", kind.text));
            let default = it.default.as_ref().map_or(String::new(), |value| format!(" = {}", self.text(value.span)));
            format!("{}{kind}{default}", it.name.text)
        };
        parameters.iter().map(one).collect::<Vec<_>>().join(", ")
    }
}

fn library(read: fn(&InLibrary<'_>) -> Option<(String, String)>) -> impl Iterator<Item = Entry> {
    STANDARD.iter().flat_map(move |part| {
        let Some((text, syntax)) = parsed(part.name) else { return Vec::new() };
        let entry = |(at, item): (usize, &Item)| {
            let (name, form) = read(&InLibrary { text: &text, item })?;
            let words = prose_above(&text, &syntax, at);
            Some(Entry { name, form, words, source: source(&item.clauses), from: format!("use std.{}", part.name) })
        };
        syntax.items.iter().enumerate().filter_map(entry).collect::<Vec<Entry>>()
    })
}

fn shape(it: &InLibrary<'_>) -> Option<(String, String)> {
    let ItemKind::Shape { name, parameters, .. } = &it.item.kind else { return None };
    Some((name.text.to_string(), format!("{}({})", name.text, it.parameters(parameters))))
}

fn formula(it: &InLibrary<'_>) -> Option<(String, String)> {
    let ItemKind::Formula { name, parameters, kind, .. } = &it.item.kind else { return None };
    let kind = kind.as_ref().map_or(String::new(), |kind: &Name| format!(" : {}", kind.text));
    Some((name.text.to_string(), format!("{}({}){kind}", name.text, it.parameters(parameters))))
}

fn material(it: &InLibrary<'_>) -> Option<(String, String)> {
    let ItemKind::Material { name, fields } = &it.item.kind else { return None };
    let field = |field: &Field| {
        let Some(Definition::Value(value)) = &field.value else { return None };
        let source = match source(&field.clauses) {
            source if source.is_empty() => source,
            source => format!(" ({source})"),
        };
        Some(format!("{} {}{source}", it.text(field.path.span), it.text(value.span)))
    };
    let fields: Vec<String> = fields.iter().filter_map(field).collect();
    Some((name.text.to_string(), format!("{}: {}", name.text, fields.join(", "))))
}

fn source(clauses: &Clauses) -> String {
    match &clauses.cite {
        Some(Cite::Source(text)) => text.text.clone(),
        Some(Cite::Word(word)) => word.text.replace('_', " "),
        None => String::new(),
    }
}

/// The prose that stands right above an item, its headings left out.
fn prose_above(text: &str, syntax: &SourceFile, at: usize) -> String {
    let (Some(above), Some(item)) = (at.checked_sub(1).and_then(|at| syntax.items.get(at)), syntax.items.get(at))
    else {
        return String::new();
    };
    let ItemKind::Prose { text: prose } = &above.kind else { return String::new() };
    let between = text.get((above.offset + above.len) as usize..item.offset as usize).unwrap_or("");
    if between.matches('\n').count() > 1 {
        return String::new();
    }
    prose.lines().map(str::trim).filter(|line| !line.starts_with('#')).collect::<Vec<_>>().join(" ").trim().into()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::page::{WIDTH, width};

    #[track_caller]
    fn check_listed(topic: Topic, word: &str, expected: &str) {
        let found = text(topic, &entries(topic, Some(word)), Colour::Off);
        assert!(found.contains(expected), "{found}");
    }

    #[test]
    fn everything_listed_fits_the_page() {
        for topic in Topic::ALL {
            let all = entries(topic, None);
            assert!(!all.is_empty());
            for line in text(topic, &all, Colour::Off).lines() {
                assert!(width(line) <= WIDTH, "{line}");
            }
        }
    }

    #[test]
    fn what_comes_from_the_library_is_cited() {
        for topic in [Topic::Units, Topic::Shapes, Topic::Functions] {
            for it in entries(topic, None).iter().filter(|it| topic == Topic::Units || !it.from.is_empty()) {
                assert!(!it.source.is_empty(), "{it:?}");
            }
        }
        for it in entries(Topic::Materials, None) {
            assert!(!it.source.is_empty() || it.form.contains('('), "{it:?}");
        }
    }

    #[test]
    fn a_word_filters() {
        check_listed(Topic::Functions, "capstan", "  capstan(slack : force, wrap : angle, mu : ratio) : force\n");
        check_listed(Topic::Functions, "CAPSTAN", "The load that a holding force keeps on a round bar or bollard.");
        check_listed(Topic::Functions, "sqrt", "sqrt(x)");
        check_listed(
            Topic::Shapes,
            "tube",
            "tube(outer_diameter : diameter, inner_diameter : diameter, length : length)",
        );
        check_listed(Topic::Shapes, "turned", "profile = [(axial, radial), ...]");
        check_listed(Topic::Materials, "structural", "density 7850 kg/m^3");
        check_listed(Topic::Kinds, "moment_of_inertia", "J in kg*m^2");
        check_listed(Topic::Units, "rpm", "rpm");
        assert!(entries(Topic::Units, Some("no such unit")).is_empty());
    }

    #[test]
    fn topics_read_their_own_words() {
        for topic in Topic::ALL {
            assert_eq!(Topic::from_word(topic.word()), Some(topic));
        }
        assert_eq!(Topic::from_word("unit"), None);
    }
}

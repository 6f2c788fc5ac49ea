//! A solved sheet as the suites see it: values, verdicts, diagnostics. The only place that touches the library.

use pintle::render::View;
use pintle::render::verdicts::{NominalOnly, Outcome, outcome};
use pintle::results::CaseResults;
use pintle::source::{Disk, Files};
use pintle::{Compilation, Options};
use std::path::Path;

/// A diagnostic with its place in the sheet.
#[derive(Clone, Debug)]
pub struct Found {
    /// `unit-mismatch`.
    pub code: &'static str,
    /// `error`, `warning` or `hint`.
    pub severity: &'static str,
    /// Line from 1; of the sheet itself.
    pub line: usize,
    /// The headline.
    pub message: String,
}

/// A sheet after all stages.
pub struct Solved {
    compilation: Compilation,
}

/// Files held in memory.
struct Beside<'a>(&'a [(String, String)]);

impl Files for Beside<'_> {
    fn read(&self, path: &str) -> Result<Vec<u8>, String> {
        let found = self.0.iter().find(|(name, _)| name == path);
        found.map(|(_, text)| text.clone().into_bytes()).ok_or_else(|| "no such file".into())
    }
}

impl Solved {
    /// Solves a sheet of the disk.
    #[track_caller]
    pub fn file(path: &Path) -> Solved {
        let compilation = pintle::compile(&path.to_string_lossy(), &Disk, &Options::default());
        Solved { compilation: compilation.unwrap_or_else(|error| panic!("{}: {}", error.path, error.why)) }
    }

    /// Solves a text, with files beside it.
    pub fn text(text: &str, beside: &[(String, String)]) -> Solved {
        Solved { compilation: pintle::compile_text("sheet.pintle", text, &Beside(beside), &Options::default()) }
    }

    /// The results of a case; None: the sheet as it stands.
    pub fn case(&self, case: Option<&str>) -> Option<&CaseResults> {
        self.compilation.results.all_cases().find(|it| it.case.as_deref() == case)
    }

    /// The value of a quantity in SI.
    pub fn si(&self, case: Option<&str>, name: &str) -> Option<f64> {
        self.case(case)?.quantity(name)?.si
    }

    /// The lower limit of a quantity in SI.
    pub fn low(&self, case: Option<&str>, name: &str) -> Option<f64> {
        self.case(case)?.quantity(name)?.low
    }

    /// The upper limit of a quantity in SI.
    pub fn high(&self, case: Option<&str>, name: &str) -> Option<f64> {
        self.case(case)?.quantity(name)?.high
    }

    /// Value and unit of a quantity as tables show them.
    pub fn shown(&self, name: &str) -> Option<(f64, String)> {
        let quantity = self.compilation.results.base.quantity(name)?;
        Some((quantity.unit.from_si(quantity.si?), quantity.unit.text.to_string()))
    }

    /// The status of a quantity, as a word.
    pub fn status(&self, case: Option<&str>, name: &str) -> Option<String> {
        Some(self.case(case)?.quantity(name)?.status.word())
    }

    /// The verdict of the limit that reads so.
    pub fn verdict(&self, case: Option<&str>, text: &str) -> Option<&'static str> {
        let limits = &self.case(case)?.limits;
        limits.iter().find(|it| plain(&it.text) == plain(text)).map(|it| it.verdict.words())
    }

    /// The limits of a case as written.
    pub fn limit_texts(&self, case: Option<&str>) -> Vec<String> {
        self.case(case).map(|it| it.limits.iter().map(|it| plain(&it.text).to_string()).collect()).unwrap_or_default()
    }

    /// The cautions of the sheet.
    pub fn cautions(&self) -> &[String] {
        &self.compilation.results.cautions
    }

    /// All diagnostics in order.
    pub fn diagnostics(&self) -> Vec<Found> {
        let found = self.compilation.diagnostics.iter().map(|it| Found {
            code: it.code.name,
            severity: it.severity().word(),
            line: self.compilation.sources.location(it.place).line,
            message: it.message.clone(),
        });
        found.collect()
    }

    /// What a person would look for when a name is not there.
    pub fn near(&self, name: &str) -> String {
        let last = name.rsplit('.').next().unwrap_or(name);
        let names = self.compilation.results.base.quantities.iter().map(|it| it.name.as_str());
        let near: Vec<&str> = names.filter(|it| it.ends_with(last)).take(5).collect();
        if near.is_empty() { String::new() } else { format!("; there are {}", near.join(", ")) }
    }

    /// The exit code that the command line gives.
    pub fn exit_code(&self) -> i32 {
        let Compilation { sources, diagnostics, results, models } = &self.compilation;
        match outcome(&View { sources, diagnostics, results, models }, NominalOnly::Refused) {
            Outcome::Sound => 0,
            Outcome::NotMet => 1,
            Outcome::Errors => 2,
            Outcome::Open => 3,
        }
    }
}

/// The condition without its `every`.
fn plain(text: &str) -> &str {
    text.strip_prefix("every ").unwrap_or(text)
}

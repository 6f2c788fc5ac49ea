//! Verdicts counted: the line that a checking engineer reads first, and the
//! outcome that decides the exit code.

use super::View;
use crate::results::{CaseResults, Status, Verdict};
use pintle_text::Severity;

/// Instead of a count where errors may have kept limits from being read.
pub const NONE_JUDGED: &str = "no limit is judged";

/// How many limits have which verdict, in one case.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Count {
    /// Hold on the whole worst-case set.
    pub met: usize,
    /// Hold at the nominal values.
    pub nominal_only: usize,
    /// Fail.
    pub not_met: usize,
    /// Not known.
    pub undecided: usize,
}

impl Count {
    /// Counts the limits of a case.
    pub fn of(case: &CaseResults) -> Count {
        let mut count = Count::default();
        for limit in &case.limits {
            match limit.verdict {
                Verdict::Met => count.met += 1,
                Verdict::MetAtNominalOnly => count.nominal_only += 1,
                Verdict::NotMet => count.not_met += 1,
                Verdict::Undecided => count.undecided += 1,
            }
        }
        count
    }

    /// All of them.
    pub fn total(self) -> usize {
        self.met + self.nominal_only + self.not_met + self.undecided
    }

    /// The gravest verdict among them.
    pub fn gravest(self) -> Verdict {
        match self {
            Count { not_met: 1.., .. } => Verdict::NotMet,
            Count { undecided: 1.., .. } => Verdict::Undecided,
            Count { nominal_only: 1.., .. } => Verdict::MetAtNominalOnly,
            _ => Verdict::Met,
        }
    }

    /// Both together.
    pub fn plus(self, other: Count) -> Count {
        Count {
            met: self.met + other.met,
            nominal_only: self.nominal_only + other.nominal_only,
            not_met: self.not_met + other.not_met,
            undecided: self.undecided + other.undecided,
        }
    }

    /// "3 limits met, 1 not met"; "no limits".
    pub fn words(self) -> String {
        let total = self.total();
        if total == 0 {
            return "no limits".into();
        }
        if self.met == total {
            return match total {
                1 => "the limit is met".into(),
                _ => format!("all {total} limits met"),
            };
        }
        let limits = |n: usize| if n == 1 { "limit" } else { "limits" };
        let mut words = vec![format!("{} {} met", self.met, limits(self.met))];
        for (n, verdict) in [
            (self.not_met, Verdict::NotMet),
            (self.undecided, Verdict::Undecided),
            (self.nominal_only, Verdict::MetAtNominalOnly),
        ] {
            if n > 0 {
                words.push(format!("{n} {}", verdict.words()));
            }
        }
        words.join(", ")
    }
}

/// The verdict line of a case, with the limits that need a look.
pub fn line(case: &CaseResults) -> String {
    let count = Count::of(case);
    let mut open: Vec<&str> = Vec::new();
    for wanted in [Verdict::NotMet, Verdict::Undecided, Verdict::MetAtNominalOnly] {
        open.extend(case.limits.iter().filter(|limit| limit.verdict == wanted).map(|limit| limit.text.as_str()));
    }
    match open.as_slice() {
        [] => count.words(),
        _ => format!("{}: {}", count.words(), open.join("; ")),
    }
}

/// How many diagnostics of one severity there are.
pub fn n_reported(view: &View<'_>, severity: Severity) -> usize {
    view.diagnostics.iter().filter(|it| it.severity() == severity).count()
}

/// Whether "met at nominal only" counts as met.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum NominalOnly {
    /// It does not: the tolerances may break the limit.
    Refused,
    /// It does, as the user asked for.
    Accepted,
}

/// What a sheet comes to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Outcome {
    /// Compiled, every limit met.
    Sound,
    /// It has errors.
    Errors,
    /// A limit is not met, or a second route disagrees.
    NotMet,
    /// A limit or unknown is undecided, or a limit is met at nominal only.
    Open,
}

/// The outcome; where several apply, errors come before limits that are not
/// met, and these before what is open.
pub fn outcome(view: &View<'_>, nominal_only: NominalOnly) -> Outcome {
    if n_reported(view, Severity::Error) > 0 {
        return Outcome::Errors;
    }
    let cases = || view.results.all_cases();
    let limits = || cases().flat_map(|case| &case.limits);
    let confirms = || cases().flat_map(|case| &case.confirms);
    if limits().any(|it| it.verdict == Verdict::NotMet) || confirms().any(|it| it.agrees == Some(false)) {
        return Outcome::NotMet;
    }
    let open_limit = limits().any(|it| match it.verdict {
        Verdict::Undecided => true,
        Verdict::MetAtNominalOnly => nominal_only == NominalOnly::Refused,
        Verdict::Met | Verdict::NotMet => false,
    });
    let open_value = cases()
        .flat_map(|case| &case.quantities)
        .any(|it| matches!(it.status, Status::Undecided(_) | Status::OneOf(_)));
    if open_limit || open_value || confirms().any(|it| it.agrees.is_none()) { Outcome::Open } else { Outcome::Sound }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::fixture::Fixture;

    #[track_caller]
    fn check_words(count: Count, expected: &str) {
        assert_eq!(count.words(), expected);
    }

    #[test]
    fn verdicts_read_as_a_sentence() {
        check_words(Count::default(), "no limits");
        check_words(Count { met: 1, ..Count::default() }, "the limit is met");
        check_words(Count { met: 3, ..Count::default() }, "all 3 limits met");
        check_words(Count { met: 3, not_met: 1, ..Count::default() }, "3 limits met, 1 not met");
        check_words(
            Count { met: 1, not_met: 2, undecided: 1, nominal_only: 3 },
            "1 limit met, 2 not met, 1 undecided, 3 met at nominal only",
        );
    }

    #[test]
    fn the_line_names_what_is_not_met() {
        let mut fixture = Fixture::winch();
        assert_eq!(line(&fixture.results.base), "1 limit met, 1 not met: pull <= 4 kN");
        fixture.results.base.limits.clear();
        assert_eq!(line(&fixture.results.base), "no limits");
    }

    #[track_caller]
    fn check_outcome(change: impl Fn(&mut Fixture), nominal_only: NominalOnly, expected: Outcome) {
        let mut fixture = Fixture::winch();
        fixture.results.cases.clear();
        for limit in &mut fixture.results.base.limits {
            limit.verdict = Verdict::Met;
        }
        change(&mut fixture);
        assert_eq!(outcome(&fixture.view(), nominal_only), expected);
    }

    #[test]
    fn outcomes_have_an_order() {
        let set = |fixture: &mut Fixture, at: usize, verdict| fixture.results.base.limits[at].verdict = verdict;
        check_outcome(|_| (), NominalOnly::Refused, Outcome::Sound);
        check_outcome(|it| set(it, 0, Verdict::Undecided), NominalOnly::Refused, Outcome::Open);
        check_outcome(|it| set(it, 0, Verdict::MetAtNominalOnly), NominalOnly::Refused, Outcome::Open);
        check_outcome(|it| set(it, 0, Verdict::MetAtNominalOnly), NominalOnly::Accepted, Outcome::Sound);
        let both = |it: &mut Fixture| {
            set(it, 0, Verdict::NotMet);
            set(it, 1, Verdict::Undecided);
        };
        check_outcome(both, NominalOnly::Refused, Outcome::NotMet);
        let all = |it: &mut Fixture| {
            set(it, 0, Verdict::NotMet);
            it.report_error();
        };
        check_outcome(all, NominalOnly::Refused, Outcome::Errors);
        let unknown = |it: &mut Fixture| it.results.base.quantities[0].status = Status::Undecided("wide".into());
        check_outcome(unknown, NominalOnly::Accepted, Outcome::Open);
        check_outcome(|it| it.results.base.confirms[0].agrees = Some(false), NominalOnly::Refused, Outcome::NotMet);
    }
}

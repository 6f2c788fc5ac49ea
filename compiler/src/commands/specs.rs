//! Commands and flags as data: what the command line may say, and what the help
//! says about it.

/// What is to be done.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Command {
    /// `--help`, of one command or of all.
    Help(Option<&'static Spec>),
    /// `--version`.
    Version,
    /// `solve`.
    Solve,
    /// `check`.
    Check,
    /// `explain`.
    Explain,
    /// `format`.
    Format,
    /// `list`.
    List,
    /// `start`.
    Start,
    /// A command that is planned.
    Later(&'static str),
}

/// A command as the help shows it.
#[derive(Debug, PartialEq, Eq)]
pub struct Spec {
    /// What it is.
    pub command: Command,
    /// As typed.
    pub name: &'static str,
    /// The words behind it.
    pub usage: &'static str,
    /// One line of help.
    pub summary: &'static str,
    /// Least and greatest number of words.
    pub n_words: (usize, usize),
    /// The flags that mean something to it.
    pub flags: &'static [Flag],
}

const ANY: usize = usize::MAX;

/// What every command that solves takes.
macro_rules! solving {
    ($($more:expr),*) => {
        &[$($more,)* Flag::Color, Flag::Quiet, Flag::Strict, Flag::Accept, Flag::Seed, Flag::Samples, Flag::Threads]
    };
}

const fn later(name: &'static str, usage: &'static str, summary: &'static str) -> Spec {
    Spec { command: Command::Later(name), name, usage, summary, n_words: (0, ANY), flags: &[] }
}

/// The commands in the order of the help.
pub const COMMANDS: &[Spec] = &[
    Spec {
        command: Command::Solve,
        name: "solve",
        usage: "FILE",
        summary: "compile and solve a sheet: givens, results, ledgers, limits with verdicts",
        n_words: (1, 1),
        flags: solving!(Flag::Json, Flag::Csv),
    },
    Spec {
        command: Command::Check,
        name: "check",
        usage: "PATH...",
        summary: "the same without the tables, for files and folders: diagnostics and verdicts",
        n_words: (1, ANY),
        flags: solving!(Flag::Json),
    },
    Spec {
        command: Command::Explain,
        name: "explain",
        usage: "FILE NAME",
        summary: "how a value, ledger or limit comes about: formula, numbers, sources",
        n_words: (2, 2),
        flags: solving!(Flag::Json),
    },
    Spec {
        command: Command::Format,
        name: "format",
        usage: "PATH... [--check]",
        summary: "put files and folders into the canonical layout; comments are kept",
        n_words: (1, ANY),
        flags: &[Flag::Check, Flag::Json, Flag::Color, Flag::Quiet],
    },
    Spec {
        command: Command::List,
        name: "list",
        usage: "units|kinds|shapes|materials|functions [WORD]",
        summary: "what the language and its library offer, with sources",
        n_words: (1, 2),
        flags: &[Flag::Json, Flag::Color, Flag::Quiet],
    },
    Spec {
        command: Command::Start,
        name: "start",
        usage: "DIR",
        summary: "a new sheet with the sections in place",
        n_words: (1, 1),
        flags: &[Flag::Color, Flag::Quiet],
    },
    later("budget", "FILE NAME", "tolerance budget (not supported yet)"),
    later("report", "FILE -o OUT", "calculation package (not supported yet)"),
    later("draw", "FILE NAME -o OUT", "sketches and diagrams (not supported yet)"),
    later("compare", "OLD NEW", "what differs between two sheets (not supported yet)"),
    later("seal", "FILE", "write the signed-off record (not supported yet)"),
    later("verify", "FILE", "check the signed-off record again (not supported yet)"),
];

/// A flag.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Flag {
    /// Results as JSON.
    Json,
    /// Results as comma-separated values.
    Csv,
    /// When to colour.
    Color,
    /// Less output.
    Quiet,
    /// Open assumptions and uncited givens are errors.
    Strict,
    /// What counts as met besides "met".
    Accept,
    /// Look, change nothing.
    Check,
    /// Seed of the sampling.
    Seed,
    /// Number of samples.
    Samples,
    /// Number of threads.
    Threads,
}

/// What stands behind a flag.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Takes {
    /// Nothing.
    Nothing,
    /// One of these words.
    OneOf(&'static [&'static str]),
    /// A whole number.
    Number,
}

impl Flag {
    /// All flags, in the order of the help.
    pub const ALL: [Flag; 10] = [
        Flag::Json,
        Flag::Csv,
        Flag::Color,
        Flag::Quiet,
        Flag::Strict,
        Flag::Accept,
        Flag::Check,
        Flag::Seed,
        Flag::Samples,
        Flag::Threads,
    ];

    /// As typed.
    pub fn name(self) -> &'static str {
        match self {
            Flag::Json => "--json",
            Flag::Csv => "--csv",
            Flag::Color => "--color",
            Flag::Quiet => "--quiet",
            Flag::Strict => "--strict",
            Flag::Accept => "--accept",
            Flag::Check => "--check",
            Flag::Seed => "--seed",
            Flag::Samples => "--samples",
            Flag::Threads => "--threads",
        }
    }

    /// What stands behind it.
    pub fn takes(self) -> Takes {
        match self {
            Flag::Json | Flag::Csv | Flag::Quiet | Flag::Strict | Flag::Check => Takes::Nothing,
            Flag::Color => Takes::OneOf(&["auto", "always", "never"]),
            Flag::Accept => Takes::OneOf(&["nominal"]),
            Flag::Seed | Flag::Samples | Flag::Threads => Takes::Number,
        }
    }

    /// One line of help.
    pub fn words(self) -> &'static str {
        match self {
            Flag::Json => "results as one JSON value",
            Flag::Csv => "results as comma-separated values",
            Flag::Color => "colour: auto (the default), always or never",
            Flag::Quiet => "verdicts alone, one line a diagnostic",
            Flag::Strict => "open assumptions and givens without a source are errors",
            Flag::Accept => "a limit met at nominal only counts as met",
            Flag::Check => "change nothing; exit code 1 where a layout differs",
            Flag::Seed => "seed of the sampling (no effect yet)",
            Flag::Samples => "number of samples (no effect yet)",
            Flag::Threads => "number of threads (no effect yet)",
        }
    }

    /// Accepted, so that scripts can be written for later versions.
    pub fn has_no_effect_yet(self) -> bool {
        matches!(self, Flag::Seed | Flag::Samples | Flag::Threads)
    }
}

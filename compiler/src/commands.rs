//! The commands: from the words of the command line to text and an exit code.
//!
//! A command returns what it says as an [`Output`]; only `main` writes. Knows
//! files and flags; everything that is said about a sheet comes from
//! `pintle::render`.

mod arguments;
mod check;
mod explain;
mod format;
mod help;
mod list;
mod paths;
mod solve;
mod specs;
mod start;

use arguments::Arguments;
use pintle::render::verdicts::{self, NominalOnly, Outcome};
use pintle::render::{Colour, View, diagnostics};
use pintle::source::Disk;
use pintle::{Compilation, Options, Strictness};
use specs::{Command, Flag};
use std::ffi::OsString;
use std::sync::Mutex;

/// Exit codes; scripts rely on them.
pub mod exit {
    /// Compiled, every limit met.
    pub const SOUND: u8 = 0;
    /// A limit is not met, or `format --check` found a difference.
    pub const NOT_MET: u8 = 1;
    /// The sheet has errors.
    pub const ERRORS: u8 = 2;
    /// Something is undecided, or met at nominal only.
    pub const OPEN: u8 = 3;
    /// The command line is wrong.
    pub const USAGE: u8 = 64;
    /// A file cannot be read or written.
    pub const FILE: u8 = 66;
    /// A fault of the program itself.
    pub const FAULT: u8 = 70;
}

/// What a command says.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Output {
    /// Results.
    pub stdout: String,
    /// Diagnostics and notes.
    pub stderr: String,
    /// How it went.
    pub code: u8,
}

impl Output {
    /// Results and nothing else.
    fn sound(stdout: impl Into<String>) -> Output {
        Output { stdout: stdout.into(), ..Output::default() }
    }

    /// A complaint and nothing else.
    fn failed(code: u8, message: impl std::fmt::Display) -> Output {
        Output { stdout: String::new(), stderr: format!("error: {message}\n"), code }
    }
}

/// Where output goes.
#[derive(Clone, Copy, Debug, Default)]
pub struct Terminals {
    /// Standard output is a terminal.
    pub stdout: bool,
    /// Standard error is one.
    pub stderr: bool,
    /// The environment asks for no colour.
    pub no_color: bool,
}

/// The file being worked on, for the report of a fault.
static CURRENT: Mutex<String> = Mutex::new(String::new());

/// The file being worked on; empty where none is.
pub fn current_file() -> String {
    CURRENT.lock().map(|it| it.clone()).unwrap_or_default()
}

/// Runs the command that `words` ask for.
pub fn run(words: &[OsString], terminals: Terminals) -> Output {
    let words: Vec<String> = words.iter().map(|word| word.to_string_lossy().into_owned()).collect();
    let arguments = match arguments::read(&words) {
        Ok(arguments) => arguments,
        Err(message) => {
            return Output { stderr: format!("error: {message}\n"), code: exit::USAGE, ..Output::default() };
        }
    };
    let context = Context { arguments: &arguments, terminals };
    let mut output = match arguments.command {
        Command::Help(about) => Output::sound(help::text(about)),
        Command::Version => Output::sound(format!("pintle {}\n", env!("CARGO_PKG_VERSION"))),
        Command::Solve => solve::run(&context),
        Command::Check => check::run(&context),
        Command::Explain => explain::run(&context),
        Command::Format => format::run(&context),
        Command::List => list::run(&context),
        Command::Start => start::run(&context),
        Command::Later(name) => Output::failed(exit::USAGE, format!("`pintle {name}` is not supported yet")),
    };
    let notes: String = arguments
        .flags
        .iter()
        .filter(|(flag, _)| flag.has_no_effect_yet())
        .map(|(flag, _)| format!("note: `{}` has no effect yet\n", flag.name()))
        .collect();
    output.stderr.insert_str(0, &notes);
    output
}

/// What every command needs.
struct Context<'a> {
    arguments: &'a Arguments,
    terminals: Terminals,
}

impl Context<'_> {
    fn has(&self, flag: Flag) -> bool {
        self.arguments.has(flag)
    }

    /// The word at a place that the parser has checked to be there.
    fn word(&self, at: usize) -> &str {
        self.arguments.words.get(at).map_or("", String::as_str)
    }

    fn colour(&self, terminal: bool) -> Colour {
        let on = match self.arguments.value(Flag::Color) {
            Some("always") => true,
            Some("never") => false,
            _ => terminal && !self.terminals.no_color,
        };
        if on { Colour::On } else { Colour::Off }
    }

    fn out_colour(&self) -> Colour {
        self.colour(self.terminals.stdout)
    }

    fn err_colour(&self) -> Colour {
        self.colour(self.terminals.stderr)
    }

    fn compile(&self, path: &str) -> Result<Compilation, Output> {
        if let Ok(mut current) = CURRENT.lock() {
            *current = path.into();
        }
        let strict = if self.has(Flag::Strict) { Strictness::Strict } else { Strictness::Normal };
        let compiled = pintle::compile(path, &Disk, &Options { strict });
        if let Ok(mut current) = CURRENT.lock() {
            current.clear();
        }
        compiled.map_err(|error| Output::failed(exit::FILE, format!("{} cannot be read: {}", error.path, error.why)))
    }

    /// The exit code that a sheet comes to.
    fn code(&self, compilation: &Compilation) -> u8 {
        let internal = pintle::codes::INTERNAL_FAULT.name;
        if compilation.diagnostics.iter().any(|it| it.code.name == internal) {
            return exit::FAULT;
        }
        match self.outcome(compilation) {
            Outcome::Sound => exit::SOUND,
            Outcome::NotMet => exit::NOT_MET,
            Outcome::Errors => exit::ERRORS,
            Outcome::Open => exit::OPEN,
        }
    }

    fn outcome(&self, compilation: &Compilation) -> Outcome {
        let nominal_only = match self.arguments.value(Flag::Accept) {
            Some(_) => NominalOnly::Accepted,
            None => NominalOnly::Refused,
        };
        verdicts::outcome(&view(compilation), nominal_only)
    }

    /// The diagnostics of a sheet, with their lines of source unless it is to be quiet.
    fn diagnostics(&self, compilation: &Compilation) -> String {
        let render = if self.has(Flag::Quiet) { diagnostics::concise } else { diagnostics::full };
        render(&compilation.diagnostics, &compilation.sources, self.err_colour())
    }
}

fn view(compilation: &Compilation) -> View<'_> {
    View {
        sources: &compilation.sources,
        diagnostics: &compilation.diagnostics,
        results: &compilation.results,
        models: &compilation.models,
    }
}

/// JSON as it is printed: one object, indented, with a line end behind it.
fn json_text(value: &serde_json::Value) -> String {
    format!("{value:#}\n")
}

//! Commands of the program: words in, text and an exit code out.

mod diagnostics;
mod explain;
mod json;
mod table;

use pintle::render::text::Detail;
use pintle::render::verdicts::{self, NominalOnly, Outcome};
use pintle::render::{View, text};
use pintle::source::Disk;
use pintle::{Compilation, Options, Strictness};
use std::io::{IsTerminal, Write};
use std::path::{Path, PathBuf};

const USAGE: &str = "\
pintle: calculation sheets for rotating assemblies, checked and solved

  pintle solve FILE              givens, results, ledgers, limits with verdicts
  pintle check PATH...           diagnostics and verdicts, for files and folders
  pintle explain FILE NAME       how one value comes about
  pintle format PATH... [--check]  canonical layout
  pintle list units|kinds|shapes|materials|functions [WORD]
  pintle start DIR               a new sheet with the sections in place

  --json  --quiet  --strict  --accept nominal  --color auto|always|never  --version

exit codes: 0 all limits met; 1 a limit is not met; 2 errors in the sheet;
3 undecided or met at nominal only; 64 usage; 66 unreadable file; 70 internal fault
";

/// Commands that are planned and say so.
const LATER: &[&str] = &["budget", "report", "draw", "compare", "seal", "verify"];
const COMMANDS: &[&str] = &["solve", "check", "explain", "format", "list", "start"];

/// When to colour.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Colour {
    Auto,
    Always,
    Never,
}

impl Colour {
    fn on(self, terminal: bool) -> bool {
        match self {
            Colour::Always => true,
            Colour::Never => false,
            Colour::Auto => terminal && std::env::var_os("NO_COLOR").is_none(),
        }
    }
}

struct Flags {
    json: bool,
    quiet: bool,
    check: bool,
    accept_nominal: bool,
    colour: Colour,
    options: Options,
    words: Vec<String>,
}

/// Runs one command; gives the exit code.
pub fn run(arguments: Vec<String>) -> u8 {
    let flags = match flags(arguments) {
        Ok(Some(flags)) => flags,
        Ok(None) => return 0,
        Err(message) => return usage(&message),
    };
    let mut words = flags.words.iter().map(String::as_str);
    let command = words.next().unwrap_or("");
    let rest: Vec<&str> = words.collect();
    match (command, rest.as_slice()) {
        ("solve", [file]) => solve(file, &flags),
        ("check", [_, ..]) => check(&rest, &flags),
        ("explain", [file, name]) => explain_command(file, name, &flags),
        ("format", [_, ..]) => format_command(&rest, &flags),
        ("list", [what]) => list(what, "", &flags),
        ("list", [what, word]) => list(what, word, &flags),
        ("start", [folder]) => start(folder),
        ("", _) => usage("a command is needed"),
        (later, _) if LATER.contains(&later) => {
            eprintln!("`pintle {later}` is not supported yet");
            64
        }
        (known, _) if COMMANDS.contains(&known) => usage(&format!("`pintle {known}` is called with other words")),
        (other, _) => match pintle::nearest::did_you_mean(other, COMMANDS.iter().chain(LATER).copied()) {
            Some(hint) => usage(&format!("no command is named `{other}`; {hint}")),
            None => usage(&format!("no command is named `{other}`")),
        },
    }
}

fn usage(message: &str) -> u8 {
    eprintln!("{message}\n\n{USAGE}");
    64
}

fn flags(arguments: Vec<String>) -> Result<Option<Flags>, String> {
    let mut flags = Flags {
        json: false,
        quiet: false,
        check: false,
        accept_nominal: false,
        colour: Colour::Auto,
        options: Options::default(),
        words: Vec::new(),
    };
    let mut rest = arguments.into_iter();
    while let Some(word) = rest.next() {
        let mut value = |name: &str| rest.next().ok_or(format!("`{name}` needs a value"));
        match word.as_str() {
            "--help" | "-h" | "help" => {
                print(USAGE);
                return Ok(None);
            }
            "--version" => {
                print(&format!("pintle {}\n", env!("CARGO_PKG_VERSION")));
                return Ok(None);
            }
            "--json" => flags.json = true,
            "--quiet" => flags.quiet = true,
            "--check" => flags.check = true,
            "--strict" => flags.options.strict = Strictness::Strict,
            "--accept" => match value("--accept")?.as_str() {
                "nominal" => flags.accept_nominal = true,
                other => return Err(format!("`--accept` takes `nominal`, not `{other}`")),
            },
            "--color" => {
                flags.colour = match value("--color")?.as_str() {
                    "auto" => Colour::Auto,
                    "always" => Colour::Always,
                    "never" => Colour::Never,
                    other => return Err(format!("`--color` takes auto, always or never, not `{other}`")),
                }
            }
            "--seed" | "--samples" | "--threads" => {
                let given = value(&word)?;
                given.parse::<u64>().map_err(|_| format!("`{word}` takes a whole number, not `{given}`"))?;
                eprintln!("note: `{word}` has no effect yet");
            }
            other if other.starts_with('-') && other.len() > 1 => {
                let known = ["--json", "--quiet", "--check", "--strict", "--accept", "--color", "--version", "--help"];
                let hint = pintle::nearest::did_you_mean(other, known).unwrap_or_default();
                return Err(format!("no flag is named `{other}`; {hint}"));
            }
            _ => flags.words.push(word),
        }
    }
    Ok(Some(flags))
}

/// Writes to standard output; a closed pipe ends quietly.
fn print(text: &str) {
    if std::io::stdout().write_all(text.as_bytes()).is_err() {
        std::process::exit(0);
    }
}

fn compile(path: &str, flags: &Flags) -> Result<Compilation, u8> {
    pintle::compile(path, &Disk, &flags.options).map_err(|error| {
        eprintln!("cannot read `{}`: {}", error.path, error.why);
        66
    })
}

fn view(compilation: &Compilation) -> View<'_> {
    View {
        sources: &compilation.sources,
        diagnostics: &compilation.diagnostics,
        results: &compilation.results,
        models: &compilation.models,
    }
}

fn code(compilation: &Compilation, flags: &Flags) -> u8 {
    let nominal_only = if flags.accept_nominal { NominalOnly::Accepted } else { NominalOnly::Refused };
    match verdicts::outcome(&view(compilation), nominal_only) {
        Outcome::Sound => 0,
        Outcome::NotMet => 1,
        Outcome::Errors => 2,
        Outcome::Open => 3,
    }
}

fn page_colour(colour: Colour) -> pintle::render::Colour {
    if colour.on(std::io::stdout().is_terminal()) { pintle::render::Colour::On } else { pintle::render::Colour::Off }
}

fn solve(path: &str, flags: &Flags) -> u8 {
    let compilation = match compile(path, flags) {
        Ok(compilation) => compilation,
        Err(code) => return code,
    };
    if flags.json {
        print(&json::render(&compilation));
    } else {
        if !flags.quiet {
            print(&text::solve(&view(&compilation), Detail::Full, page_colour(flags.colour)));
        }
        eprint!("{}", diagnostics::render(&compilation, flags.colour.on(std::io::stderr().is_terminal())));
    }
    code(&compilation, flags)
}

fn check(paths: &[&str], flags: &Flags) -> u8 {
    let mut files = Vec::new();
    for path in paths {
        if let Err(why) = sheets(Path::new(path), &mut files) {
            eprintln!("cannot read `{path}`: {why}");
            return 66;
        }
    }
    // The gravest: 2 before 1 before 3.
    let grave = |code: u8| [0, 3, 1, 2, 66].iter().position(|it| *it == code).unwrap_or(0);
    let mut worst = 0;
    for file in files {
        let path = file.to_string_lossy();
        let found = match compile(&path, flags) {
            Ok(compilation) => {
                let found = code(&compilation, flags);
                if flags.json {
                    print(&json::render(&compilation));
                } else {
                    eprint!("{}", diagnostics::render(&compilation, flags.colour.on(std::io::stderr().is_terminal())));
                    if !flags.quiet {
                        print(&format!("{path}: {}\n", verdicts::line(&compilation.results.base)));
                    }
                }
                found
            }
            Err(code) => code,
        };
        if grave(found) > grave(worst) {
            worst = found;
        }
    }
    worst
}

fn sheets(path: &Path, acc: &mut Vec<PathBuf>) -> std::io::Result<()> {
    if path.is_dir() {
        let mut entries: Vec<PathBuf> = std::fs::read_dir(path)?.filter_map(|it| it.ok()).map(|it| it.path()).collect();
        entries.sort();
        for entry in entries {
            if entry.is_dir() || entry.extension().is_some_and(|ending| ending == "pintle") {
                sheets(&entry, acc)?;
            }
        }
    } else {
        std::fs::metadata(path)?;
        acc.push(path.to_path_buf());
    }
    Ok(())
}

fn explain_command(path: &str, name: &str, flags: &Flags) -> u8 {
    let compilation = match compile(path, flags) {
        Ok(compilation) => compilation,
        Err(code) => return code,
    };
    match explain::render(&compilation, name) {
        Some(text) => {
            print(&text);
            code(&compilation, flags)
        }
        None => {
            let names = compilation.results.base.quantities.iter().map(|it| it.name.as_str());
            let hint = pintle::nearest::did_you_mean(name, names).unwrap_or_default();
            eprintln!("nothing in `{path}` is named `{name}`; {hint}");
            eprint!("{}", diagnostics::render(&compilation, flags.colour.on(std::io::stderr().is_terminal())));
            64
        }
    }
}

fn format_command(paths: &[&str], flags: &Flags) -> u8 {
    let mut files = Vec::new();
    for path in paths {
        if let Err(why) = sheets(Path::new(path), &mut files) {
            eprintln!("cannot read `{path}`: {why}");
            return 66;
        }
    }
    let mut differs = false;
    for file in files {
        let text = match std::fs::read_to_string(&file) {
            Ok(text) => text,
            Err(why) => {
                eprintln!("cannot read `{}`: {why}", file.display());
                return 66;
            }
        };
        let formatted = pintle_syntax::format(&text);
        if formatted == text {
            continue;
        }
        differs = true;
        if flags.check {
            print(&format!("{} is not in canonical layout\n", file.display()));
        } else if let Err(why) = std::fs::write(&file, formatted) {
            eprintln!("cannot write `{}`: {why}", file.display());
            return 66;
        }
    }
    u8::from(differs && flags.check)
}

fn list(what: &str, word: &str, flags: &Flags) -> u8 {
    let Some(rows) = table::listing(what) else {
        return usage(&format!("`pintle list` takes units, kinds, shapes, materials or functions, not `{what}`"));
    };
    let word = word.to_lowercase();
    let rows: Vec<_> =
        rows.into_iter().filter(|row| row.iter().any(|cell| cell.to_lowercase().contains(&word))).collect();
    if flags.json {
        let json: Vec<serde_json::Value> = rows.iter().map(|row| serde_json::json!(row)).collect();
        print(&format!("{}\n", serde_json::Value::Array(json)));
    } else {
        print(&table::columns(&rows));
    }
    0
}

fn start(folder: &str) -> u8 {
    let path = Path::new(folder).join("sheet.pintle");
    if path.exists() {
        eprintln!("`{}` is there already and stays as it is", path.display());
        return 64;
    }
    let written =
        std::fs::create_dir_all(folder).and_then(|()| std::fs::write(&path, include_str!("shell/start.pintle")));
    match written {
        Ok(()) => {
            print(&format!("{} written; next: pintle solve {}\n", path.display(), path.display()));
            0
        }
        Err(why) => {
            eprintln!("cannot write `{}`: {why}", path.display());
            66
        }
    }
}

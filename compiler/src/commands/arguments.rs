//! The words of the command line, checked: which command, which flags, which
//! files. Reads no file and prints nothing.

use super::help;
use super::specs::{COMMANDS, Command, Flag, Spec, Takes};
use pintle::nearest::did_you_mean;

/// A command line that makes sense.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Arguments {
    /// What is to be done.
    pub command: Command,
    /// Files, names and folders, in order.
    pub words: Vec<String>,
    /// Flags with what stands behind them; the last one of a kind counts.
    pub flags: Vec<(Flag, String)>,
}

impl Arguments {
    /// Whether a flag is there.
    pub fn has(&self, flag: Flag) -> bool {
        self.flags.iter().any(|(it, _)| *it == flag)
    }

    /// What stands behind a flag.
    pub fn value(&self, flag: Flag) -> Option<&str> {
        self.flags.iter().rev().find(|(it, _)| *it == flag).map(|(_, value)| value.as_str())
    }

    fn plain(command: Command) -> Arguments {
        Arguments { command, words: Vec::new(), flags: Vec::new() }
    }
}

/// Reads the words; an error says what is wrong and what was perhaps meant.
pub fn read(words: &[String]) -> Result<Arguments, String> {
    let mut found = Vec::new();
    let mut flags = Vec::new();
    let mut asks_help = false;
    let mut asks_version = false;
    let mut rest = words.iter();
    let mut only_words = false;
    while let Some(word) = rest.next() {
        if only_words || !word.starts_with('-') || word == "-" {
            found.push(word.clone());
            continue;
        }
        let (name, inline) = match word.split_once('=') {
            Some((name, value)) => (name, Some(value.to_string())),
            None => (word.as_str(), None),
        };
        match name {
            "--" => only_words = true,
            "--help" | "-h" => asks_help = true,
            "--version" | "-V" => asks_version = true,
            // A flag of commands to come.
            "-o" if found.first().is_some_and(|it| is_later(it)) => {}
            _ => {
                let name = if name == "-q" { "--quiet" } else { name };
                let flag = Flag::ALL.into_iter().find(|flag| flag.name() == name).ok_or_else(|| unknown_flag(name))?;
                flags.push((flag, value(flag, inline, &mut rest)?));
            }
        }
    }
    if asks_version && found.is_empty() {
        return Ok(Arguments::plain(Command::Version));
    }
    let mut found = found.into_iter();
    let name = match found.next() {
        Some(name) if name == "help" => match found.next() {
            Some(about) => return known(&about).map(|spec| Arguments::plain(Command::Help(Some(spec)))),
            None => return Ok(Arguments::plain(Command::Help(None))),
        },
        Some(name) => name,
        None if asks_help => return Ok(Arguments::plain(Command::Help(None))),
        None => return Err(format!("a command is needed\n\n{}", help::text(None).trim_end())),
    };
    let spec = known(&name)?;
    if asks_help {
        return Ok(Arguments::plain(Command::Help(Some(spec))));
    }
    let words: Vec<String> = found.collect();
    if matches!(spec.command, Command::Later(_)) {
        return Ok(Arguments { command: spec.command, words, flags: Vec::new() });
    }
    let (least, most) = spec.n_words;
    if words.len() < least || words.len() > most {
        let what = if words.len() < least { "something is missing" } else { "there is a word too many" };
        return Err(format!("{what}; usage: pintle {} {}", spec.name, spec.usage));
    }
    if let Some((flag, _)) = flags.iter().find(|(flag, _)| !spec.flags.contains(flag)) {
        let name = spec.name;
        return Err(format!("`{}` means nothing to `pintle {name}`; see `pintle {name} --help`", flag.name()));
    }
    let given = |flag: Flag| flags.iter().any(|(it, _)| *it == flag);
    if given(Flag::Json) && given(Flag::Csv) {
        return Err("`--json` and `--csv` exclude each other".into());
    }
    Ok(Arguments { command: spec.command, words, flags })
}

fn find(name: &str) -> Option<&'static Spec> {
    COMMANDS.iter().find(|spec| spec.name == name)
}

fn is_later(name: &str) -> bool {
    find(name).is_some_and(|spec| matches!(spec.command, Command::Later(_)))
}

fn known(name: &str) -> Result<&'static Spec, String> {
    find(name).ok_or_else(|| {
        let hint = did_you_mean(name, COMMANDS.iter().map(|spec| spec.name)).unwrap_or_else(|| {
            let ready: Vec<&str> = COMMANDS.iter().map(|spec| spec.name).filter(|name| !is_later(name)).collect();
            format!("there are {}", ready.join(", "))
        });
        format!("no command is named `{name}`; {hint}")
    })
}

fn unknown_flag(name: &str) -> String {
    let known = Flag::ALL.into_iter().map(Flag::name).chain(["--help", "--version"]);
    let hint = did_you_mean(name, known).unwrap_or_else(|| "`pintle --help` shows them all".into());
    format!("no flag is named `{name}`; {hint}")
}

fn value(flag: Flag, inline: Option<String>, rest: &mut std::slice::Iter<'_, String>) -> Result<String, String> {
    let name = flag.name();
    let mut next = |what: &str| match &inline {
        Some(value) => Ok(value.clone()),
        None => rest.next().cloned().ok_or_else(|| format!("`{name}` takes {what}")),
    };
    match flag.takes() {
        Takes::Nothing if inline.is_some() => Err(format!("`{name}` takes no value")),
        Takes::Nothing => Ok(String::new()),
        Takes::OneOf(choices) => {
            let what = choices.join(" or ");
            let given = next(&what)?;
            if choices.contains(&given.as_str()) {
                Ok(given)
            } else {
                Err(format!("`{name}` takes {what}, not `{given}`"))
            }
        }
        Takes::Number => {
            let given = next("a whole number")?;
            match given.parse::<u64>() {
                Ok(_) => Ok(given),
                Err(_) => Err(format!("`{name}` takes a whole number, not `{given}`")),
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn words(line: &str) -> Vec<String> {
        line.split_whitespace().map(String::from).collect()
    }

    #[track_caller]
    fn check_read(line: &str, command: Command, n_words: usize, flags: &[(Flag, &str)]) {
        let found = read(&words(line)).unwrap();
        let found_flags: Vec<(Flag, &str)> = found.flags.iter().map(|(flag, value)| (*flag, value.as_str())).collect();
        assert_eq!((found.command, found.words.len(), found_flags.as_slice()), (command, n_words, flags));
    }

    #[track_caller]
    fn check_refused(line: &str, expected: &str) {
        let message = read(&words(line)).unwrap_err();
        assert!(message.contains(expected), "{message}");
    }

    #[test]
    fn flags_stand_anywhere() {
        check_read("solve a.pintle", Command::Solve, 1, &[]);
        check_read("--json solve a.pintle", Command::Solve, 1, &[(Flag::Json, "")]);
        check_read("solve --color never a.pintle", Command::Solve, 1, &[(Flag::Color, "never")]);
        check_read("check --color=always a b -q", Command::Check, 2, &[(Flag::Color, "always"), (Flag::Quiet, "")]);
        check_read("solve a --seed 7 --threads=4", Command::Solve, 1, &[(Flag::Seed, "7"), (Flag::Threads, "4")]);
        check_read("solve -- --json", Command::Solve, 1, &[]);
    }

    #[test]
    fn help_and_version_are_commands() {
        check_read("--version", Command::Version, 0, &[]);
        check_read("--help", Command::Help(None), 0, &[]);
        check_read("help", Command::Help(None), 0, &[]);
        check_read("solve --help", Command::Help(find("solve")), 0, &[]);
        check_read("help solve", Command::Help(find("solve")), 0, &[]);
    }

    #[test]
    fn planned_commands_are_known() {
        check_read("budget a.pintle drum.J", Command::Later("budget"), 2, &[]);
        check_read("report a.pintle -o out.html", Command::Later("report"), 2, &[]);
    }

    #[test]
    fn misspelt_words_offer_the_nearest() {
        check_refused("slove a.pintle", "did you mean `solve`?");
        check_refused("frobnicate", "there are solve, check, explain, format, list, start");
        check_refused("solve a --jsn", "did you mean `--json`");
        check_refused("solve a --colour never", "did you mean `--color`?");
        check_refused("solve a -x", "no flag is named `-x`");
    }

    #[test]
    fn what_makes_no_sense_is_refused() {
        check_refused("", "a command is needed");
        check_refused("solve", "usage: pintle solve FILE");
        check_refused("solve a b", "a word too many");
        check_refused("explain a", "usage: pintle explain FILE NAME");
        check_refused("solve a --check", "`--check` means nothing to `pintle solve`");
        check_refused("explain a b --csv", "`--csv` means nothing to `pintle explain`");
        check_refused("solve a --json --csv", "exclude each other");
        check_refused("solve a --accept", "`--accept` takes nominal");
        check_refused("solve a --accept all", "not `all`");
        check_refused("solve a --seed x", "whole number");
        check_refused("solve a --quiet=yes", "takes no value");
    }
}

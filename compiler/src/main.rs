//! The `pintle` program: runs a command on a stack of its own, writes what it
//! says, and turns a fault of the program into a report.

mod commands;

use commands::Output;
use commands::exit;
use std::ffi::OsString;
use std::io::{ErrorKind, IsTerminal, Write};
use std::process::ExitCode;
use std::sync::Mutex;

/// What the last panic said and where.
static FAULT: Mutex<Option<String>> = Mutex::new(None);

fn main() -> ExitCode {
    let arguments: Vec<OsString> = std::env::args_os().skip(1).collect();
    let terminals = commands::Terminals {
        stdout: std::io::stdout().is_terminal(),
        stderr: std::io::stderr().is_terminal(),
        no_color: std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty())
            || std::env::var_os("TERM").is_some_and(|value| value == "dumb"),
    };
    let output = guarded(move || commands::run(&arguments, terminals));
    let mut code = output.code;
    if let Err(error) = write_out(&output.stdout) {
        // A reader that has seen enough, such as `head`, is no fault.
        if error.kind() != ErrorKind::BrokenPipe {
            code = exit::FILE;
            complain(&format!("error: standard output cannot be written: {error}\n"));
        }
    }
    complain(&output.stderr);
    ExitCode::from(code)
}

/// Runs `work`; a panic becomes exit code 70 with what to report.
fn guarded(work: impl FnOnce() -> Output + Send + 'static) -> Output {
    std::panic::set_hook(Box::new(|info| {
        if let Ok(mut fault) = FAULT.lock() {
            fault.get_or_insert_with(|| info.to_string());
        }
    }));
    // Main threads have a small stack on some systems.
    let thread = std::thread::Builder::new().name("command".into()).stack_size(64 << 20).spawn(work);
    match thread.map(std::thread::JoinHandle::join) {
        Ok(Ok(output)) => output,
        Ok(Err(_)) => fault(FAULT.lock().ok().and_then(|mut it| it.take()).unwrap_or_default()),
        Err(error) => fault(format!("no thread can be started: {error}")),
    }
}

fn fault(what: String) -> Output {
    let file = commands::current_file();
    let while_reading = if file.is_empty() { String::new() } else { format!("while working on {file}\n") };
    let stderr = format!(
        "internal fault: {what}\n{while_reading}\
         This is a fault of pintle, not of the sheet.\n\
         Please report it with the lines above, the command as typed, the sheet, and\n\
         the version: pintle {} on {} {}\n",
        env!("CARGO_PKG_VERSION"),
        std::env::consts::OS,
        std::env::consts::ARCH,
    );
    Output { stdout: String::new(), stderr, code: exit::FAULT }
}

fn write_out(text: &str) -> std::io::Result<()> {
    let mut out = std::io::stdout().lock();
    out.write_all(text.as_bytes())?;
    out.flush()
}

/// Writes to standard error. Where that is closed nobody is left to tell.
fn complain(text: &str) {
    let mut err = std::io::stderr().lock();
    let _ = err.write_all(text.as_bytes()).and_then(|()| err.flush());
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_panic_becomes_a_report() {
        let output = guarded(|| panic!("the drum fell off"));
        let _ = std::panic::take_hook();
        assert_eq!((output.code, output.stdout.as_str()), (70, ""));
        for part in ["internal fault: ", "the drum fell off", "main.rs:", "report", env!("CARGO_PKG_VERSION")] {
            assert!(output.stderr.contains(part), "{part}: {}", output.stderr);
        }
    }
}

//! `pintle-server`: the language server on standard input and output.

#![deny(clippy::print_stdout, clippy::print_stderr)]

use pintle_server::Log;
use std::io::Write;
use std::process::ExitCode;

const USAGE: &str = "pintle-server: language server of Pintle on standard input and output

  --log FILE   write what happens to FILE
  --version    print the version
  --help       print this
  --stdio      accepted, has no effect: it is the only transport
";
const BAD_USAGE: u8 = 64;
const FAULT: u8 = 70;
const CANNOT_WRITE: u8 = 73;

fn main() -> ExitCode {
    let mut log = Log::nowhere();
    let mut arguments = std::env::args_os().skip(1);
    while let Some(argument) = arguments.next() {
        match argument.to_str() {
            Some("--version" | "-V") => return say(concat!("pintle-server ", env!("CARGO_PKG_VERSION"), "\n")),
            Some("--help" | "-h") => return say(USAGE),
            // Clients that name the transport append this.
            Some("--stdio") => {}
            Some("--log") => {
                let Some(path) = arguments.next() else { return complain(BAD_USAGE, "`--log` needs a file") };
                log = match Log::to_file(path.as_ref()) {
                    Ok(log) => log,
                    Err(error) => {
                        return complain(CANNOT_WRITE, &format!("cannot write the log `{}`: {error}", path.display()));
                    }
                };
            }
            _ => {
                let words = format!("unknown argument `{}`; see `pintle-server --help`", argument.display());
                return complain(BAD_USAGE, &words);
            }
        }
    }
    log.line(format_args!("pintle-server {}", env!("CARGO_PKG_VERSION")));
    match pintle_server::serve(
        std::io::stdin(),
        std::io::stdout(),
        |snapshot, path, cancel| snapshot.compile(path, cancel),
        log,
    ) {
        Ok(end) => ExitCode::from(end.code()),
        Err(error) => complain(FAULT, &format!("cannot start: {error}")),
    }
}

fn say(words: &str) -> ExitCode {
    // The reader may have left already; nothing is lost.
    let _ = std::io::stdout().write_all(words.as_bytes());
    ExitCode::SUCCESS
}

fn complain(code: u8, words: &str) -> ExitCode {
    let _ = writeln!(std::io::stderr(), "pintle-server: {words}");
    ExitCode::from(code)
}

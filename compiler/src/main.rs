//! The `pintle` program.

mod shell;

fn main() -> std::process::ExitCode {
    // A fault of the program itself is said as such, with what to report.
    let outcome = std::panic::catch_unwind(|| shell::run(std::env::args().skip(1).collect()));
    std::process::ExitCode::from(outcome.unwrap_or_else(|_| {
        eprintln!("internal fault: please report the sheet and the message above");
        70
    }))
}

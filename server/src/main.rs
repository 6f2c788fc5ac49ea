//! `pintle-server`: the language server on standard input and output.

use std::io::Write;

#[tokio::main(flavor = "multi_thread", worker_threads = 2)]
async fn main() {
    let mut arguments = std::env::args().skip(1);
    while let Some(argument) = arguments.next() {
        match argument.as_str() {
            "--version" => {
                let _ = writeln!(std::io::stdout(), "pintle-server {}", env!("CARGO_PKG_VERSION"));
                return;
            }
            // Clients that name the transport append this.
            "--stdio" => {}
            "--log" => match arguments.next().map(std::fs::File::create) {
                Some(Ok(mut file)) => {
                    let _ = writeln!(file, "pintle-server {} started", env!("CARGO_PKG_VERSION"));
                }
                _ => {
                    let _ = writeln!(std::io::stderr(), "`--log` needs a file that can be written");
                    std::process::exit(64);
                }
            },
            other => {
                let _ =
                    writeln!(std::io::stderr(), "unknown argument `{other}`; known are --version, --log FILE, --stdio");
                std::process::exit(64);
            }
        }
    }
    pintle_server::serve().await;
    // Standard input is read by a thread that cannot be stopped.
    std::process::exit(0);
}

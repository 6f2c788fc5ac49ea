//! Measures lexing and parsing of a generated sheet of 10,000 lines, or of the
//! texts that are made to be slow (`--hard`). Only prints; gates belong to tests.

use std::time::Instant;

fn main() {
    if std::env::args().any(|argument| argument == "--hard") {
        for (name, text) in hard_texts() {
            let start = Instant::now();
            let n_items = pintle_syntax::parse(&text).items.len();
            let parsed = start.elapsed();
            let n_bytes = pintle_syntax::format(&text).len();
            println!("{name}: {parsed:?}, {n_items} items; formatted {:?}, {n_bytes} bytes", start.elapsed() - parsed);
        }
        return;
    }
    let text = sheet();
    let best = |run: &dyn Fn() -> usize| {
        (0..20)
            .map(|_| {
                let start = Instant::now();
                let count = run();
                (start.elapsed(), count)
            })
            .min()
            .unwrap_or_default()
    };
    println!("{} lines, {} bytes", text.lines().count(), text.len());
    println!("lex: {:?} (tokens)", best(&|| pintle_lexer::lex(&text).len()));
    println!("parse: {:?} (items)", best(&|| pintle_syntax::parse(&text).items.len()));
    println!("format: {:?} (bytes)", best(&|| pintle_syntax::format(&text).len()));
    let n_faults: usize = pintle_syntax::parse(&text).items.iter().map(|item| item.errors.len()).sum();
    println!("faults: {n_faults}");
}

/// Ten lines, a thousand times, numbered.
fn sheet() -> String {
    let mut text = String::new();
    for n in 0..1_000 {
        text += &format!(
            "# part {n}\n\
             given mass_{n} : mass = 6.4 t ± 4 %   cite \"weighbridge ticket {n}\"\n\
             pull_{n} = mass_{n} * g_n * sin(slope) + 1/2 * rho * (v^2 - u^2) * area as kN\n\
             body barrel_{n} = tube {{ outer_diameter = 420 mm ± 0.5 mm, inner_diameter = 380 mm, length = 600 mm }}\n\
             rotor drum_{n} about x {{\n  barrel_{n} at 0 mm\n  flange at 600 mm {{ named = far_flange }}\n}}\n\
             limit drum_{n}.rim_speed <= 25 m/s because \"type test\"\n\
             wanted w_{n} : length within 20 mm .. 300 mm where drum_{n}.J == 12.5 kg*m^2\n"
        );
    }
    text
}

fn hard_texts() -> Vec<(&'static str, String)> {
    const MANY: usize = 100_000;
    vec![
        ("open round brackets", "(".repeat(MANY)),
        ("closing braces", "}".repeat(MANY)),
        ("closing brackets", ")".repeat(MANY)),
        ("open lines", "a {\n".repeat(MANY)),
        ("open bodies", "body a = b { c = 1\n".repeat(MANY / 10)),
        ("open fields", "a { b\n".repeat(MANY)),
        ("nested blocks", format!("cycle a {{ {}{} }}", "b {".repeat(MANY), "}".repeat(MANY))),
        ("open nested blocks", format!("cycle a {{ {}", "b {".repeat(MANY))),
        ("one sum", format!("x = 1{}", "+1".repeat(MANY))),
        ("remarks in a sum", format!("x = 1 +\n{}2", "# remark\n".repeat(MANY))),
        ("commas", format!("body a = b {{ {}", ",".repeat(MANY))),
        ("words", "a ".repeat(MANY)),
        ("words in a block", format!("ledger a {{ {} }}", "a ".repeat(MANY))),
        ("clauses", format!("x = 1 {}", "cite \"a\" ".repeat(MANY))),
        ("open square in round", format!("x = {}{}", "[".repeat(MANY), ")".repeat(MANY))),
        ("wanted with commas", format!("ledger a {{ wanted b where c == 1{} }}", ", c == 1".repeat(MANY))),
    ]
}

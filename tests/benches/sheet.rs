//! How long a sheet takes, stage by stage, and whether what comes out is right.
//!
//! Every time is the least of several runs. Results are asserted against hand
//! formulas (`pintle_tests::generate`) before anything is timed, so a fast
//! wrong answer is no answer. Prints only; budgets are asserted with
//! `PINTLE_BUDGET=assert`, since a busy machine is no fault of the program.

use pintle::lower::{Overrides, lower};
use pintle::model::InputValue;
use pintle::results::Verdict;
use pintle::source::Disk;
use pintle_solve::{Equation, Problem, Unknown};
use pintle_tests::generate::{Generated, sheet};
use std::process::Command;
use std::time::{Duration, Instant};

const SEED: u64 = 20_260_401;
/// A 10,000-line sheet, compiled and solved.
const SHEET_BUDGET: Duration = Duration::from_millis(100);
/// The winch example as a whole process.
const PROCESS_BUDGET: Duration = Duration::from_millis(15);

fn main() {
    let budget = std::env::var("PINTLE_BUDGET").is_ok_and(|value| value == "assert");
    println!("least times in ms; in brackets as multiples of lexing");
    println!(
        "{:>7} {:>6} {:>8} {:>15} {:>15} {:>15} {:>15} {:>15}",
        "lines", "nodes", "lexing", "parsing", "names", "lowering", "solving", "whole"
    );
    for lines in [10, 1_000, 10_000] {
        let generated = sheet(lines, SEED);
        check(&generated);
        let whole = stages(&generated);
        if budget && lines == 10_000 {
            assert!(whole <= SHEET_BUDGET, "{lines} lines take {whole:?}");
        }
    }
    match process() {
        Some(median) => {
            println!("winch example, whole process: median {:.2} ms of 20", millis(median));
            assert!(!budget || median <= PROCESS_BUDGET, "the process takes {median:?}");
        }
        None => println!("winch example, whole process: no program built yet (cargo build --release -p pintle)"),
    }
}

fn millis(time: Duration) -> f64 {
    time.as_secs_f64() * 1e3
}

/// The least time of some runs, at least half a second of them or thirty.
fn least<T>(mut run: impl FnMut() -> T) -> Duration {
    let begin = Instant::now();
    let mut best = Duration::MAX;
    for _ in 0..30 {
        let start = Instant::now();
        let result = run();
        best = best.min(start.elapsed());
        drop(result);
        if begin.elapsed() > Duration::from_millis(1500) {
            break;
        }
    }
    best
}

/// Everything that must come out.
fn check(generated: &Generated) {
    let compilation = pintle::compile_text("generated.pintle", &generated.text, &Disk, &pintle::Options::default());
    let errors: Vec<_> =
        compilation.diagnostics.iter().filter(|it| it.severity() == pintle_text::Severity::Error).collect();
    assert!(errors.is_empty(), "{} errors, the first: {:?}", errors.len(), errors.first());
    let base = &compilation.results.base;
    let by_name: std::collections::HashMap<&str, Option<f64>> =
        base.quantities.iter().map(|it| (it.name.as_str(), it.si)).collect();
    let mut worst = 0.0_f64;
    for (name, expected) in &generated.expected {
        let found = by_name.get(name.as_str()).copied().flatten();
        let found = found.unwrap_or_else(|| panic!("{name} has no value"));
        let off = ((found - expected) / expected).abs();
        assert!(off < 1e-10, "{name}: {found}, by hand {expected}");
        worst = worst.max(off);
    }
    assert_eq!(base.ledgers.len(), generated.ledgers);
    for ledger in &base.ledgers {
        let residual = ledger.residual.unwrap_or_else(|| panic!("{} does not close", ledger.name));
        assert!(residual.abs() < 1e-9 * ledger.largest, "{}: {residual} of {}", ledger.name, ledger.largest);
    }
    let count = |verdict| base.limits.iter().filter(|limit| limit.verdict == verdict).count();
    assert_eq!((count(Verdict::Met), count(Verdict::NotMet)), (generated.met, generated.not_met));
    assert_eq!(base.limits.len(), generated.met + generated.not_met);
    println!(
        "{} values agree with hand formulas to {worst:.1e}, {} ledgers close, {} limits met and {} not met",
        generated.expected.len(),
        generated.ledgers,
        generated.met,
        generated.not_met
    );
}

/// Times the stages one by one and the whole; gives the whole.
fn stages(generated: &Generated) -> Duration {
    let text = generated.text.as_str();
    let lexing = least(|| pintle_lexer::lex(text));
    let parsing = least(|| pintle_syntax::parse(text));
    let resolving = least(|| pintle::names::resolve("generated.pintle", text.into(), &Disk));
    let (named, _) = pintle::names::resolve("generated.pintle", text.into(), &Disk);
    let overrides = Overrides::default();
    let lowering = least(|| lower(&named, &overrides, &[], &Disk));
    let lowered = lower(&named, &overrides, &[], &Disk);
    let model = &lowered.model;
    let unknowns: Vec<Unknown> = lowered
        .unknowns
        .iter()
        .filter_map(|&(input, _)| match model.input(input).value {
            InputValue::Wanted { low, high, .. } => Some(Unknown { input, low, high }),
            InputValue::Given { .. } => None,
        })
        .collect();
    assert_eq!(unknowns.len(), generated.unknowns);
    let equations = lowered.equations.iter().map(|it| Equation { left: it.left, right: it.right }).collect();
    let problem = Problem { unknowns, equations };
    let nominal: Vec<f64> = model
        .inputs
        .iter()
        .map(|input| match input.value {
            InputValue::Given { nominal, .. } => nominal,
            InputValue::Wanted { .. } => f64::NAN,
        })
        .collect();
    let solve = || {
        let structure = pintle_solve::structure(&model.graph, &problem);
        let mut inputs = nominal.clone();
        let mut values = pintle_graph::evaluate(&model.graph, &inputs);
        pintle_solve::solve(&model.graph, &problem, &structure, &mut inputs, &mut values, &|| false)
    };
    assert!(solve().iter().all(|outcome| outcome.value().is_some()));
    let solving = least(solve);
    let whole = least(|| pintle::compile_text("generated.pintle", text, &Disk, &pintle::Options::default()));
    let column = |time: Duration| format!("{:.2} ({:.1})", millis(time), millis(time) / millis(lexing));
    println!(
        "{:>7} {:>6} {:>8.3} {:>15} {:>15} {:>15} {:>15} {:>15}",
        text.lines().count(),
        model.graph.len(),
        millis(lexing),
        column(parsing),
        column(resolving.saturating_sub(parsing)),
        column(lowering),
        column(solving),
        column(whole)
    );
    whole
}

/// Median of twenty runs of the real program on the winch example.
fn process() -> Option<Duration> {
    // Benches lie in TARGET/release/deps, the program in TARGET/release.
    let own = std::env::current_exe().ok()?;
    let program = own.parent()?.parent()?.join(format!("pintle{}", std::env::consts::EXE_SUFFIX));
    let example = concat!(env!("CARGO_MANIFEST_DIR"), "/../stdlib/examples/winch.pintle");
    let mut times = Vec::new();
    for _ in 0..20 {
        let begin = Instant::now();
        let output = Command::new(&program).args(["solve", example]).output().ok()?;
        times.push(begin.elapsed());
        let text = String::from_utf8_lossy(&output.stdout);
        assert!(text.contains("runaway"), "the program did not solve the example: {text}");
    }
    times.sort();
    times.get(times.len() / 2).copied()
}

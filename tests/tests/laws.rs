//! The laws of `laws.txt` as lines of real sheets: laws are accepted, slips refused.

mod common;

use common::sheet::Solved;

struct Law {
    accept: bool,
    sheet: String,
    line: usize,
    text: String,
}

/// A literal that is of a kind and of nothing else: the kind's declaration does the rest.
fn number_of(kind: &str) -> &'static str {
    match kind {
        "torque" => "2 N*m",
        "angular_velocity" => "2 rad/s",
        "angular_acceleration" => "2 rad/s^2",
        "moment_of_inertia" | "product_of_inertia" => "2 kg*m^2",
        "flywheel_effect" => "2 kgf*m^2",
        "flywheel_effect_mass" => "2 kg*m^2",
        "angle" => "2 rad",
        "energy" | "work" | "heat" => "2 J",
        "power" => "2 W",
        "force" | "weight" => "2 N",
        "mass" => "2 kg",
        "time" => "2 s",
        "speed" => "2 m/s",
        "acceleration" => "2 m/s^2",
        "rotational_frequency" | "frequency" => "2 1/s",
        "radius" | "diameter" | "lever_arm" | "gyration_radius" | "length" | "thickness" | "travel" | "height"
        | "specific_unbalance" | "deflection" | "width" | "path_length" => "2 m",
        "lead" => "2 m/rad",
        "area" => "2 m^2",
        "volume" => "2 m^3",
        "second_moment_of_area" => "2 m^4",
        "section_modulus" => "2 m^3",
        "displacement_volume" => "2 m^3/rad",
        "density" => "2 kg/m^3",
        "linear_density" => "2 kg/m",
        "mass_flow" => "2 kg/s",
        "angular_momentum" => "2 kg*m^2/s",
        "unbalance" => "2 kg*m",
        "stiffness" => "2 N/m",
        "torsional_stiffness" => "2 N*m/rad",
        "damping" => "2 N*s/m",
        "torsional_damping" => "2 N*m*s/rad",
        "line_load" => "2 N/m",
        "pressure" | "gauge_pressure" | "absolute_pressure" | "stress" | "modulus" => "2 Pa",
        "temperature" => "300 K",
        "temperature_difference" => "2 K",
        "specific_heat" => "2 J/(kg*K)",
        "thermal_expansion" => "2 1/K",
        "voltage" => "2 V",
        "current" => "2 A",
        "ratio" | "efficiency" => "0.5",
        other => panic!("the suite has no number of the kind `{other}`"),
    }
}

fn laws() -> Vec<Law> {
    let text = common::read(&common::folder().join("laws.txt"));
    let mut laws = Vec::new();
    for (at, line) in text.lines().enumerate() {
        if line.trim().is_empty() || line.starts_with('#') {
            continue;
        }
        let parts: Vec<&str> = line.split(';').map(str::trim).collect();
        let [verdict, declarations, kind, expression, ..] = parts.as_slice() else { panic!("line {}: {line}", at + 1) };
        let mut sheet = String::new();
        for declaration in declarations.split(',').map(str::trim).filter(|it| !it.is_empty()) {
            let (name, kind) = declaration.split_once(" : ").unwrap_or_else(|| panic!("line {}: {line}", at + 1));
            sheet.push_str(&format!("given {name} : {kind} = {}\n", number_of(kind)));
        }
        let colon = if *kind == "-" { String::new() } else { format!(" : {kind}") };
        sheet.push_str(&format!("the_law{colon} = {expression}\n"));
        laws.push(Law { accept: *verdict == "accept", sheet, line: at + 1, text: line.to_string() });
    }
    laws
}

#[track_caller]
fn check_laws(accept: bool) {
    let mut faults = Vec::new();
    let mut checked = 0;
    for law in laws().into_iter().filter(|law| law.accept == accept) {
        checked += 1;
        let solved = Solved::text(&law.sheet, &[]);
        let errors: Vec<String> = solved
            .diagnostics()
            .iter()
            .filter(|it| it.severity == "error")
            .map(|it| format!("{} at line {}: {}", it.code, it.line, it.message))
            .collect();
        let last = law.sheet.lines().count();
        let refused = solved.diagnostics().iter().any(|it| it.severity == "error" && it.line == last);
        if accept && !errors.is_empty() {
            faults.push(format!("line {}: {}\n    refused: {}", law.line, law.text, errors.join("; ")));
        }
        if !accept && !refused {
            faults.push(format!("line {}: {}\n    accepted", law.line, law.text));
        }
    }
    common::report(&faults, checked);
}

#[test]
fn laws_of_the_trade_are_accepted() {
    check_laws(true);
}

#[test]
fn slips_are_refused_at_their_line() {
    check_laws(false);
}

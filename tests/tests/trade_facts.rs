//! Facts of the trade that hold for every size: checked over random sizes.

mod common;

use common::agrees;
use common::sheet::Solved;
use proptest::prelude::*;

#[track_caller]
fn value(solved: &Solved, name: &str) -> f64 {
    let errors: Vec<_> =
        solved.diagnostics().iter().filter(|it| it.severity == "error").map(|it| it.message.clone()).collect();
    assert!(errors.is_empty(), "{errors:?}");
    solved.si(None, name).unwrap_or_else(|| panic!("`{name}` has no value"))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn solid_cylinder_has_half_the_inertia_of_a_thin_tube(diameter in 1.0..2000.0_f64, length in 1.0..3000.0_f64, mass in 0.01..5000.0_f64) {
        let solved = Solved::text(&format!(
            "use std.shapes\n\
             body solid = cylinder {{ diameter = {diameter} mm, length = {length} mm, mass = {mass} kg }}\n\
             body shell = thin_tube {{ mean_diameter = {diameter} mm, length = {length} mm, mass = {mass} kg }}\n"
        ), &[]);
        prop_assert!(agrees(value(&solved, "solid.J") * 2.0, value(&solved, "shell.J"), 1e-12, 0.0));
    }

    #[test]
    fn thick_tube_tends_to_the_thin_one(mean in 50.0..2000.0_f64, share in 1e-6..1e-3_f64, mass in 0.01..5000.0_f64) {
        let wall = mean * share;
        let (outer, inner) = (mean + wall, mean - wall);
        let solved = Solved::text(&format!(
            "use std.shapes\n\
             body thick = tube {{ outer_diameter = {outer} mm, inner_diameter = {inner} mm, length = 100 mm, mass = {mass} kg }}\n\
             body thin = thin_tube {{ mean_diameter = {mean} mm, length = 100 mm, mass = {mass} kg }}\n"
        ), &[]);
        // (D + w)^2 + (D - w)^2 = 2 D^2 (1 + share^2)
        let expected = value(&solved, "thin.J") * (1.0 + share * share);
        prop_assert!(agrees(value(&solved, "thick.J"), expected, 1e-12, 0.0));
        prop_assert!(value(&solved, "thick.J") > value(&solved, "thin.J") * (1.0 - 1e-12));
    }

    #[test]
    fn falling_speed_does_not_depend_on_the_drum_radius(first in 20.0..3000.0_f64, second in 20.0..3000.0_f64, drop in 0.1..50.0_f64, mass in 0.1..20000.0_f64) {
        let sheet = |diameter: f64| Solved::text(&format!(
            "body nothing = measured {{ mass = 1 kg, inertia = 0 kg*m^2 }}\n\
             rotor drum about x {{ nothing }}\n\
             load weight {{ mass = {mass} kg, path = vertical }}\n\
             train hoist {{ rope line = drum -> weight {{ pitch_diameter = {diameter} mm }} }}\n\
             ledger fall of hoist {{\n  start at rest\n  travel weight {drop} m down_path\n  wanted weight.speed within 0 m/s .. 1000 m/s\n}}\n"
        ), &[]);
        let (a, b) = (value(&sheet(first), "fall.weight.speed"), value(&sheet(second), "fall.weight.speed"));
        prop_assert!(agrees(a, b, 1e-9, 0.0), "{a} and {b}");
        prop_assert!(agrees(a * a, 2.0 * 9.80665 * drop, 1e-8, 0.0));
    }

    #[test]
    fn reflected_inertia_goes_with_the_square_of_the_ratio(ratio in 0.05..200.0_f64, inertia in 1e-4..1e3_f64) {
        let solved = Solved::text(&format!(
            "body a = measured {{ mass = 1 kg, inertia = 0 kg*m^2 }}\n\
             body b = measured {{ mass = 1 kg, inertia = {inertia} kg*m^2 }}\n\
             rotor motor about x {{ a }}\n\
             rotor drum about x {{ b }}\n\
             train gears {{ gear g = motor -> drum {{ ratio = {ratio} }} }}\n\
             at_motor = gears.reflected(J, at = motor)\n"
        ), &[]);
        prop_assert!(agrees(value(&solved, "at_motor"), inertia / (ratio * ratio), 1e-12, 0.0));
    }

    #[test]
    fn a_rotor_weighs_what_its_parts_weigh(first in 50.0..500.0_f64, second in 50.0..500.0_f64, at in -1000.0..1000.0_f64) {
        let solved = Solved::text(&format!(
            "use std.shapes\n\
             body a = cylinder {{ diameter = {first} mm, length = 80 mm, density = 7850 kg/m^3 }}\n\
             body b = cylinder {{ diameter = {second} mm, length = 40 mm, density = 2700 kg/m^3 }}\n\
             rotor both about x {{\n  a at 0 mm\n  b at {at} mm\n}}\n"
        ), &[]);
        prop_assert!(agrees(value(&solved, "both.mass"), value(&solved, "a.mass") + value(&solved, "b.mass"), 1e-12, 0.0));
        prop_assert!(agrees(value(&solved, "both.J"), value(&solved, "a.J") + value(&solved, "b.J"), 1e-12, 0.0));
    }
}

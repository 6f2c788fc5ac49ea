//! Sheets of any length from a seed, with the results that they must have,
//! reckoned here by hand formulas. All numbers are invented demo data.

use std::f64::consts::PI;
use std::fmt::Write;

/// A generated sheet and what must come out of it.
#[derive(Clone, Debug, Default)]
pub struct Generated {
    /// The sheet.
    pub text: String,
    /// Full dotted names with their values in SI.
    pub expected: Vec<(String, f64)>,
    /// Limits that hold.
    pub met: usize,
    /// Limits that do not.
    pub not_met: usize,
    /// Ledgers.
    pub ledgers: usize,
    /// Unknowns, in ledgers and outside.
    pub unknowns: usize,
}

/// High bits of a linear congruential sequence (constants of Knuth's MMIX, from memory).
#[derive(Clone, Debug)]
pub struct Random(u64);

impl Random {
    /// The sequence of `seed`.
    pub fn new(seed: u64) -> Random {
        Random(seed)
    }

    /// A number in 0..1.
    pub fn unit(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }

    /// A whole number between `low` and `high`, both included.
    pub fn between(&mut self, low: u32, high: u32) -> u32 {
        low + ((self.unit() * f64::from(high - low + 1)) as u32).min(high - low)
    }
}

/// A sheet of at least `lines` lines: one winch after the other, each with its
/// own givens, bodies, rotors, train, ledger and limits; every fourth with a
/// flywheel whose size is wanted.
pub fn sheet(lines: usize, seed: u64) -> Generated {
    let mut random = Random::new(seed);
    let mut out = Generated::default();
    out.text.push_str("sheet \"Generated winches\" {\n  number = \"GEN-1\"\n  revision = \"A\"\n}\n");
    out.text.push_str("use std.materials\nuse std.shapes\n\n");
    let mut group = 0;
    let mut count = out.text.lines().count();
    while count < lines {
        group += 1;
        let before = out.text.len();
        if lines < 40 {
            small(&mut out, &mut random, group);
        } else {
            winch(&mut out, &mut random, group);
        }
        count += out.text.get(before..).map_or(1, |added| added.lines().count());
    }
    out
}

/// Writing to a String cannot fail.
macro_rules! line {
    ($out:expr, $($argument:tt)*) => {{
        let _ = writeln!($out.text, $($argument)*);
    }};
}

fn small(out: &mut Generated, random: &mut Random, k: usize) {
    let (mass, radius) = (random.between(10, 90), random.between(100, 900));
    line!(out, "given mass_{k} = {mass} kg cite \"invented demo data\"");
    line!(out, "given radius_{k} : radius = {radius} mm # to the centre");
    line!(out, "weight_{k} = mass_{k} * g_n as kN");
    line!(out, "limit weight_{k} <= 2 kN because \"hook\"");
    let weight = f64::from(mass) * 9.80665;
    out.expected.push((format!("weight_{k}"), weight));
    out.met += 1;
}

fn winch(out: &mut Generated, random: &mut Random, k: usize) {
    let g = 9.80665;
    let (load, slope, pitch) = (random.between(1200, 6400), random.between(4, 12), random.between(280, 460));
    let (way, roll) = (random.between(3, 12), random.between(10, 25));
    let (outer, wall, length) = (random.between(300, 420), random.between(12, 24), random.between(400, 700));
    let (flange, thickness, shaft) = (random.between(440, 640), random.between(10, 20), random.between(60, 110));
    let (ratio, efficiency, back) = (random.between(200, 480), random.between(90, 97), random.between(86, 93));
    let (motor_mass, motor_inertia) = (random.between(60, 140), random.between(20, 60));
    let inner = outer - 2 * wall;

    line!(out, "| # Winch {k}");
    line!(out, "| The trolley of winch {k} runs on two rails; the rope leaves the drum parallel to the slope.");
    line!(out, "# weighed and measured");
    line!(out, "given load_mass_{k} = {load} kg              cite \"invented demo data: weighing list\"");
    line!(out, "given slope_{k}     = {slope} deg            cite \"invented demo data: survey\"");
    line!(out, "given roll_{k}      = 0.0{roll}              cite \"invented demo data\"");
    line!(out, "given way_{k}       = {way} m                # upper stop to buffer");
    line!(out, "given pitch_{k}     : diameter = {pitch} mm  cite \"invented demo data\"");
    line!(out, "assume \"The rope's own mass of winch {k} is left out.\" open");
    line!(out, "rolling_{k} = roll_{k} * load_mass_{k} * g_n * cos(slope_{k}) as kN");
    line!(out, "pull_{k}    = load_mass_{k} * g_n * sin(slope_{k}) + rolling_{k} as kN");
    line!(out, "share_{k}   = rolling_{k} / pull_{k}");
    line!(out, "");
    line!(
        out,
        "body barrel_{k}   = tube {{ outer_diameter = {outer} mm, inner_diameter = {inner} mm, length = {length} mm, material = structural_steel }}"
    );
    line!(
        out,
        "body flange_{k}   = disc {{ diameter = {flange} mm, bore = {inner} mm, thickness = {thickness} mm, material = structural_steel }}"
    );
    line!(
        out,
        "body shaft_{k}    = cylinder {{ diameter = {shaft} mm, length = {length} mm, material = structural_steel }}"
    );
    line!(
        out,
        "body armature_{k} = measured {{ mass = {}.{} kg, inertia = 0.0{motor_inertia} kg*m^2 }} cite \"invented demo data\"",
        motor_mass / 10,
        motor_mass % 10
    );
    line!(out, "rotor drum_{k} about x {{");
    line!(out, "  shaft_{k}  at 0 mm");
    line!(out, "  barrel_{k} at 0 mm");
    line!(out, "  flange_{k} at -{thickness} mm");
    line!(out, "  flange_{k} at {length} mm {{ named = far_flange }}");
    line!(out, "}}");
    line!(out, "rotor motor_{k} about x {{ armature_{k} }}");
    line!(out, "load trolley_{k} {{ mass = load_mass_{k}, path = incline slope_{k} }}");
    line!(out, "train haul_{k} {{");
    line!(
        out,
        "  gear gearbox = motor_{k} -> drum_{k}   {{ ratio = {}.{}, efficiency = 0.{efficiency}, back = 0.{back} }}",
        ratio / 10,
        ratio % 10
    );
    line!(
        out,
        "  rope line    = drum_{k} -> trolley_{k} {{ pitch_diameter = pitch_{k}, falls = 1, efficiency = 0.98 }}"
    );
    line!(out, "}}");
    line!(out, "ledger runaway_{k} of haul_{k} {{");
    line!(out, "  start  at rest");
    line!(out, "  travel trolley_{k} way_{k} down_path");
    line!(out, "  lose   rolling_heat = rolling_{k} * trolley_{k}.travel");
    line!(out, "  wanted drum_{k}.speed within 0 rpm .. 3000 rpm");
    line!(out, "}}");

    let m = |mm: u32| f64::from(mm) / 1000.0;
    let (load, angle, roll) = (f64::from(load), f64::from(slope) * PI / 180.0, f64::from(roll) / 1000.0);
    let rolling = roll * load * g * libm::cos(angle);
    let pull = load * g * libm::sin(angle) + rolling;
    // Mass and moment of a round body of steel with a bore.
    let ring = |outer: f64, inner: f64, length: f64| {
        let mass = 7850.0 * PI / 4.0 * (outer * outer - inner * inner) * length;
        (mass, mass / 8.0 * (outer * outer + inner * inner))
    };
    let bodies = [
        ring(m(outer), m(inner), m(length)),
        ring(m(flange), m(inner), m(thickness)),
        ring(m(flange), m(inner), m(thickness)),
        ring(m(shaft), 0.0, m(length)),
    ];
    let drum_mass: f64 = bodies.iter().map(|body| body.0).sum();
    let drum_inertia: f64 = bodies.iter().map(|body| body.1).sum();
    // The trolley drives: what it does not keep crosses the rope, what the drum does not keep crosses the gear.
    let (rope, gear) = (0.98, f64::from(back) / 100.0);
    let (ratio, radius) = (f64::from(ratio) / 10.0, m(pitch) / 2.0);
    let motor = f64::from(motor_inertia) / 1000.0;
    let input = (load * g * libm::sin(angle) - rolling) * f64::from(way);
    let taken = 0.5 * load * radius * radius * rope * gear + 0.5 * drum_inertia * gear + 0.5 * motor * ratio * ratio;
    let speed = (input * rope * gear / taken).sqrt();

    out.expected.push((format!("rolling_{k}"), rolling));
    out.expected.push((format!("pull_{k}"), pull));
    out.expected.push((format!("share_{k}"), rolling / pull));
    out.expected.push((format!("drum_{k}.mass"), drum_mass));
    out.expected.push((format!("drum_{k}.J"), drum_inertia));
    out.expected.push((format!("runaway_{k}.drum_{k}.speed"), speed));
    out.ledgers += 1;
    out.unknowns += 1;

    // One limit that holds and one that may not.
    line!(out, "limit pull_{k} <= {} N because \"winch plate\"", (pull * 1.2).ceil());
    out.met += 1;
    let rpm = speed * 30.0 / PI;
    if random.unit() < 0.5 {
        line!(out, "limit runaway_{k}.drum_{k}.speed <= {} rpm because \"type test\"", (rpm * 1.1).ceil());
        out.met += 1;
    } else {
        line!(out, "limit runaway_{k}.drum_{k}.speed <= {} rpm because \"type test\"", (rpm * 0.7).floor());
        out.not_met += 1;
    }
    if k.is_multiple_of(4) {
        wheel(out, random, k);
    }
    line!(out, "");
}

fn wheel(out: &mut Generated, random: &mut Random, k: usize) {
    let (bore, width, size) = (random.between(40, 80), random.between(40, 90), random.between(400, 900));
    let (inner, outer) = (f64::from(bore) / 1000.0, f64::from(size) / 1000.0);
    let inertia = 7850.0 * PI / 32.0
        * (f64::from(width) / 1000.0)
        * (outer * outer * outer * outer - inner * inner * inner * inner);
    line!(
        out,
        "body rim_{k} = disc {{ diameter = size_{k}, bore = {bore} mm, thickness = {width} mm, material = structural_steel }}"
    );
    line!(out, "rotor flywheel_{k} about x {{ rim_{k} }}");
    line!(out, "wanted size_{k} : diameter within 100 mm .. 1500 mm where flywheel_{k}.J == {inertia:.12} kg*m^2");
    out.expected.push((format!("size_{k}"), outer));
    out.unknowns += 1;
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_same_seed_gives_the_same_sheet() {
        let (a, b) = (sheet(500, 7), sheet(500, 7));
        assert_eq!(a.text, b.text);
        assert_ne!(a.text, sheet(500, 8).text);
        assert!(a.text.lines().count() >= 500 && a.text.lines().count() < 560);
        assert!(a.expected.len() > 60 && a.met > a.not_met && a.not_met > 0);
    }
}

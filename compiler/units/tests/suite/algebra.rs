//! The algebra of types beyond the list of laws: words, fixes, cautions, open lengths, levels.

use pintle_units::{
    FixHint, Kind, LengthRole, Mismatch, MismatchCode, Ratio, Type, WarningCode, display_unit, parse, unit_instead,
};

use crate::expression::{Trouble, declarations, type_of};

/// The declared names used by most tests here.
const NAMES: &str = "T : torque, T_2 : torque, E : energy, F : force, P : power, omega : angular_velocity, n : rotational_frequency, \
    v : speed, r : radius, D : diameter, k_g : gyration_radius, a : lever_arm, x : travel, z : height, l_b : length, \
    mass_c : mass, F_g : weight, J_d : moment_of_inertia, phi : angle, tau : time, mu : ratio, eta : efficiency, \
    th_1 : temperature, th_2 : temperature, dT : temperature_difference, p_e : gauge_pressure, p_abs : absolute_pressure, \
    k_t : torsional_stiffness, GD2 : flywheel_effect, GD2_m : flywheel_effect_mass,  p : pressure, rho : density, w_f : width, Q : heat";

fn ty(expression: &str) -> Type {
    match attempt(expression) {
        Ok(ty) => ty,
        Err(e) => panic!("{expression}: {e}"),
    }
}

fn attempt(expression: &str) -> Result<Type, Mismatch> {
    let names = declarations(NAMES).expect("the declarations are sound");
    match type_of(expression, &names) {
        Ok(ty) => Ok(ty),
        Err(Trouble::Mismatch(e)) => Err(*e),
        Err(Trouble::Text(e)) => panic!("{expression}: {e}"),
    }
}

fn literal(unit: &str) -> Type {
    Type::of_unit(&parse(unit, &|_| None).unwrap_or_else(|e| panic!("{unit}: {e}")))
}

#[track_caller]
fn check_words(expression: &str, words: &str) {
    assert_eq!(ty(expression).words_and_unit(), words, "{expression}");
}

#[track_caller]
fn check_kind(expression: &str, kind: Option<Kind>) {
    assert_eq!(ty(expression).kind, kind, "{expression}");
}

#[track_caller]
fn check_fix(expression: &str, wanted: Kind, fix: FixHint) {
    let e = ty(expression).fits(wanted).expect_err(expression);
    assert_eq!(e.fix.as_deref(), Some(&fix), "{expression}: {e}");
}

#[track_caller]
fn check_code(expression: &str, wanted: Kind, code: MismatchCode) {
    assert_eq!(ty(expression).fits(wanted).expect_err(expression).code, code, "{expression}");
}

#[track_caller]
fn check_caution(expression: &str, wanted: Kind, cautions: &[WarningCode]) {
    let fit = ty(expression).fit(wanted).unwrap_or_else(|e| panic!("{expression}: {e}"));
    let found: Vec<WarningCode> = fit.warnings.iter().map(|w| w.code).collect();
    assert_eq!(found, cautions, "{expression}");
}

fn after(text: &str) -> FixHint {
    FixHint::Append(text.into())
}

#[test]
fn expressions_are_named_in_words() {
    check_words("T * omega", "power (W)");
    check_words("F * r", "torque (N*m)");
    check_words("F * x", "energy (J)");
    check_words("40 N*m", "torque or energy (N*m)");
    check_words("40 J", "energy (J)");
    check_words("F * l_b", "torque or energy (N*m)");
    check_words("mass_c * v", "momentum (kg*m/s)");
    check_words("mass_c * v * v * v", "quantity in kg*m^3/s^3");
    check_words("omega", "angular velocity (rad/s)");
    check_words("T * n", "quantity in W/rad");
    check_words("phi", "angle (rad)");
    check_words("2", "pure number");
    check_words("D / r", "pure number");
    check_words("th_1", "temperature level (K)");
    check_words("k_t", "torsional stiffness (N*m/rad)");
    check_words("GD2", "flywheel effect GD² (N*m^2)");
    check_words("sqrt(k_t / J_d)", "frequency (1/s)");
    check_words("D^2", "area (m^2)");
}

#[test]
fn numbers_keep_the_kind_of_what_they_multiply() {
    check_kind("2 * T", Some(Kind::Torque));
    check_kind("T / 3", Some(Kind::Torque));
    check_kind("mu * mass_c", Some(Kind::Mass));
    check_kind("T * D / D", None);
    check_kind("T * (D / D)", Some(Kind::Torque));
    check_kind("mu * F_g", Some(Kind::Force));
    check_kind("2 * x", Some(Kind::Travel));
    check_kind("2 * l_b", Some(Kind::Length));
    check_kind("2 / T", None);
    check_kind("2 * th_1", None);
}

#[test]
fn a_number_makes_radius_and_diameter_a_plain_lever() {
    for expression in ["2 * r", "D / 2", "D * mu"] {
        check_kind(expression, None);
        for kind in [Kind::Radius, Kind::Diameter, Kind::LeverArm, Kind::GyrationRadius] {
            assert!(ty(expression).fits(kind).is_ok(), "{expression} as {kind}");
        }
    }
}

#[test]
fn a_literal_length_fits_every_kind_of_length_but_a_lead() {
    for def in Kind::all().iter().filter(|def| def.kind.root() == Kind::Length) {
        assert!(literal("mm").fits(def.kind).is_ok(), "{}", def.name);
    }
    check_fix("10 mm", Kind::Lead, after(" / 1 rev"));
    assert!(literal("mm/rev").fits(Kind::Lead).is_ok());
}

#[test]
fn a_literal_of_force_times_length_is_free() {
    for kind in [Kind::Torque, Kind::Energy] {
        for unit in ["N*m", "kN*m", "lbf*ft", "kgf*m"] {
            assert!(literal(unit).fits(kind).is_ok(), "{unit} as {kind}");
        }
    }
    assert!(literal("N*m").is_torque_or_energy());
    assert!(!literal("J").is_torque_or_energy());
    assert!(literal("N*m/rad").fits(Kind::TorsionalStiffness).is_ok());
    assert!(literal("N*m/(rad/s)").fits(Kind::TorsionalDamping).is_ok());
    assert!(ty("40 N*m + E").fits(Kind::Torque).is_err());
    assert!(ty("40 N*m + T").fits(Kind::Energy).is_err());
    assert!(ty("40 N*m * omega").fits(Kind::Power).is_ok());
    assert!(ty("40 N*m * phi").fits(Kind::Energy).is_ok());
}

#[test]
fn general_and_special_kinds_go_together() {
    check_kind("F + F_g", Some(Kind::Force));
    check_kind("E + Q", Some(Kind::Energy));
    check_kind("D + D", Some(Kind::Diameter));
    check_kind("D + 2 * w_f", Some(Kind::Diameter));
    check_kind("r + a", None);
    check_kind("x + z", Some(Kind::PathLength));
    assert!(ty("F").fits(Kind::Weight).is_ok());
    assert!(ty("r + a").fits(Kind::Diameter).is_ok());
}

#[test]
fn fixes_are_edits_that_mend() {
    check_fix("D", Kind::Radius, after(" / 2"));
    check_fix("r", Kind::Diameter, after(" * 2"));
    check_fix("GD2", Kind::MomentOfInertia, FixHint::Wrap("inertia_from_flywheel_effect(".into(), ")".into()));
    check_fix("F_g", Kind::Mass, after(" / g_n"));
    check_fix("mass_c", Kind::Force, after(" * g_n"));
    check_fix("n", Kind::AngularVelocity, after(" * 1 rev"));
    check_fix("24 Hz", Kind::AngularVelocity, after(" * 1 rev"));
    check_fix("sqrt(k_t / J_d)", Kind::AngularVelocity, after(" * 1 rad"));
    check_fix("omega", Kind::RotationalFrequency, after(" / 1 rev"));
    check_fix("T * n", Kind::Power, after(" * 1 rev"));
    check_fix("2 * pi * n * T", Kind::Power, after(" * 1 rad"));
    check_fix("2 * pi * n", Kind::AngularVelocity, after(" * 1 rad"));
    check_fix("20 / tau", Kind::AngularVelocity, after(" * 1 rev"));
    check_fix("2 * pi / tau", Kind::AngularVelocity, after(" * 1 rad"));
    check_fix("2 * pi * T", Kind::Energy, after(" * 1 rad"));
    check_fix("P / (2 * pi * n)", Kind::Torque, after(" / 1 rad"));
    check_fix("40 J", Kind::Torque, FixHint::AppendSlot(" / angle".into()));
    check_fix("mu", Kind::Angle, after(" * 1 rad"));
    check_fix("p_e", Kind::AbsolutePressure, after(" + 1 atm"));
    check_fix("T", Kind::Energy, FixHint::AppendSlot(" * angle".into()));
    check_fix("P", Kind::Energy, FixHint::AppendSlot(" * time".into()));
    check_fix("rho", Kind::Mass, FixHint::AppendSlot(" * volume".into()));
    check_fix("1/2 * J_d * omega", Kind::Energy, FixHint::AppendSlot(" * angular_velocity".into()));
    check_fix("85 degC", Kind::TemperatureDifference, FixHint::ReplaceUnit("K".into()));
}

#[test]
fn complete_fixes_make_the_expression_fit() {
    for (expression, wanted) in [
        ("D", Kind::Radius),
        ("r", Kind::Diameter),
        ("F_g", Kind::Mass),
        ("mass_c", Kind::Weight),
        ("n", Kind::AngularVelocity),
        ("24 Hz", Kind::AngularVelocity),
        ("sqrt(k_t / J_d)", Kind::AngularVelocity),
        ("omega", Kind::RotationalFrequency),
        ("T * n", Kind::Power),
        ("2 * pi * n * T", Kind::Power),
        ("mu", Kind::Angle),
        ("phi", Kind::Ratio),
        ("p_e", Kind::AbsolutePressure),
        ("p_abs", Kind::GaugePressure),
        ("l_b", Kind::Lead),
        ("GD2_m", Kind::MomentOfInertia),
        ("J_d", Kind::FlywheelEffect),
        ("GD2", Kind::FlywheelEffectMass),
        ("P / (2 * pi * n)", Kind::Torque),
        ("2 * pi * T", Kind::Energy),
        ("sqrt(mu / tau^2)", Kind::AngularVelocity),
        ("T", Kind::TorsionalStiffness),
    ] {
        let e = ty(expression).fits(wanted).expect_err(expression);
        let Some(FixHint::Append(text)) = e.fix.as_deref() else { panic!("{expression} as {wanted}: {:?}", e.fix) };
        let mended = format!("{expression}{text}");
        assert!(ty(&mended).fits(wanted).is_ok(), "{mended} as {wanted}: {:?}", ty(&mended).fits(wanted));
    }
}

#[test]
fn codes_say_what_differs() {
    check_code("T", Kind::Energy, MismatchCode::Angle);
    check_code("F * r", Kind::Energy, MismatchCode::Angle);
    check_code("n", Kind::AngularVelocity, MismatchCode::Angle);
    check_code("D", Kind::Radius, MismatchCode::Kind);
    check_code("F", Kind::Mass, MismatchCode::Dimension);
    check_code("th_1", Kind::TemperatureDifference, MismatchCode::Temperature);
    check_code("p_e", Kind::AbsolutePressure, MismatchCode::Kind);
}

#[test]
fn a_written_unit_is_answered_with_the_one_meant() {
    for (written, wanted, instead) in [
        ("lb", Kind::Force, Some("lbf")),
        ("lb", Kind::Weight, Some("lbf")),
        ("kgf", Kind::Mass, Some("kg")),
        ("Hz", Kind::AngularVelocity, Some("rps")),
        ("mm", Kind::Lead, Some("mm/rev")),
        ("lb", Kind::Energy, None),
    ] {
        assert_eq!(unit_instead(written, wanted), instead, "{written} as {wanted}");
        if let Some(instead) = instead {
            assert!(literal(instead).fits(wanted).is_ok(), "{instead} as {wanted}");
        }
    }
}

#[test]
fn circumferences_are_told_from_radii() {
    check_caution("v / (pi * D)", Kind::AngularVelocity, &[WarningCode::CircumferenceAsRadius]);
    check_caution("v / (2 * pi * r)", Kind::AngularVelocity, &[WarningCode::CircumferenceAsRadius]);
    check_caution("v / (pi * D) * 1 rev", Kind::AngularVelocity, &[]);
    check_caution("v / (pi * D)", Kind::RotationalFrequency, &[]);
    check_caution("pi * D * F", Kind::Energy, &[]);
    let fit = ty("v / (pi * D)").fit(Kind::AngularVelocity).expect("it passes");
    assert_eq!(fit.warnings.first().and_then(|w| w.fix.clone()), Some(after(" * 1 rev")));
}

#[test]
fn a_turn_counted_twice_is_noticed() {
    check_caution("2 * pi * omega * T", Kind::Power, &[WarningCode::TurnCountedTwice]);
    check_caution("pi * D * omega", Kind::Speed, &[WarningCode::TurnCountedTwice]);
    check_caution("2 * pi * 1 rad * n * T", Kind::Power, &[]);
    check_caution("2 * pi * omega * tau", Kind::Angle, &[WarningCode::TurnCountedTwice]);
    check_caution("pi * D * n", Kind::Speed, &[]);
    check_caution("1/2 * rho * pi * r^4 / 2 * w_f * omega^2", Kind::Energy, &[]);
    assert_eq!(ty("2 * pi * omega * T").warnings().len(), 1, "also where no kind is declared");
}

#[test]
fn a_diameter_as_lever_is_noticed() {
    check_caution("omega * D", Kind::Speed, &[WarningCode::DiameterAsLever]);
    check_caution("F * D", Kind::Torque, &[WarningCode::DiameterAsLever]);
    check_caution("v / D", Kind::AngularVelocity, &[WarningCode::DiameterAsLever]);
    check_caution("mass_c * D^2", Kind::MomentOfInertia, &[WarningCode::DiameterAsLever]);
    check_caution("omega * D / 2", Kind::Speed, &[]);
    check_caution("omega * (D / 2)", Kind::Speed, &[]);
    check_caution("mass_c * D^2 / 8", Kind::MomentOfInertia, &[]);
    check_caution("omega * r", Kind::Speed, &[]);
}

#[test]
fn an_open_length_takes_the_role_of_its_use() {
    let length = |id| Type::of_kind(Kind::Length).with_source(id);
    let force = Type::of_kind(Kind::Force);
    let work = force.mul(&length(7)).expect("a product");
    assert_eq!(work.fit(Kind::Energy).map(|fit| fit.resolved), Ok(Some((7, LengthRole::Path))));
    assert_eq!(work.fit(Kind::Torque).map(|fit| fit.resolved), Ok(Some((7, LengthRole::Lever))));
    let inertia = Type::of_kind(Kind::Mass).mul(&length(3).pow(Ratio::whole(2)).expect("a square")).expect("a product");
    assert_eq!(inertia.fit(Kind::MomentOfInertia).map(|fit| fit.resolved), Ok(Some((3, LengthRole::Lever))));
    let sum = work.add_noting(&Type::of_kind(Kind::Torque)).expect("they go together");
    assert_eq!(sum.resolved, Some((7, LengthRole::Lever)));
    assert_eq!(sum.ty, Type::of_kind(Kind::Torque));
    let volume = length(1).pow(Ratio::whole(3)).expect("a cube");
    assert_eq!(volume.fit(Kind::Volume).map(|fit| fit.resolved), Ok(None));
}

#[test]
fn a_resolved_length_no_longer_serves_both_ways() {
    let force = Type::of_kind(Kind::Force);
    let open = Type::of_kind(Kind::Length).with_source(5);
    let as_path = force.mul(&open.resolve(5, LengthRole::Path)).expect("a product");
    let as_lever = force.mul(&open.resolve(5, LengthRole::Lever)).expect("a product");
    assert!(as_path.fits(Kind::Energy).is_ok() && as_path.fits(Kind::Torque).is_err());
    assert!(as_lever.fits(Kind::Torque).is_ok() && as_lever.fits(Kind::Energy).is_err());
    assert_eq!(open.resolve(6, LengthRole::Path), open, "another length changes nothing");
}

#[test]
fn temperature_levels_add_and_subtract_as_levels() {
    check_kind("th_1 - th_2", Some(Kind::TemperatureDifference));
    check_kind("th_1 + dT", Some(Kind::Temperature));
    check_kind("dT + th_1", Some(Kind::Temperature));
    check_kind("th_1 - dT", Some(Kind::Temperature));
    check_kind("dT + dT", Some(Kind::TemperatureDifference));
    check_kind("th_1 + 20 K", Some(Kind::Temperature));
    check_kind("20 degC - 5 degC", Some(Kind::TemperatureDifference));
    assert!(attempt("dT - th_1").is_err());
    assert!(attempt("th_1 + th_2").is_err());
    assert!(attempt("20 degC * 2").is_err());
    assert!(ty("20 K").fits(Kind::Temperature).is_ok() && ty("20 K").fits(Kind::TemperatureDifference).is_ok());
}

#[test]
fn gauge_and_absolute_pressure_differ_by_the_ambient_one() {
    check_kind("p_e + p_abs", Some(Kind::AbsolutePressure));
    check_kind("p_abs - p_abs", Some(Kind::Pressure));
    check_kind("p_abs - 1 atm", Some(Kind::Pressure));
    assert!(ty("p_abs - 1 atm").fits(Kind::GaugePressure).is_ok());
    assert!(ty("p_abs").fits(Kind::GaugePressure).is_err());
    assert!(attempt("p_e - p_abs").is_err());
}

#[test]
fn radians_stand_for_numbers_with_a_note() {
    let note = ty("mu * phi").pure_number().expect("it passes");
    assert_eq!(note.first().map(|n| (n.code, n.code.is_note())), Some((WarningCode::AngleAsNumber, true)));
    assert_eq!(ty("mu").pure_number(), Ok(Vec::new()));
    let sum = ty("mu").add_noting(&ty("phi")).expect("it passes");
    assert_eq!(sum.warnings.first().map(|n| n.code), Some(WarningCode::AngleAsNumber));
    let sine = ty("mu").trig_argument().expect("it passes");
    assert_eq!(sine.first().map(|n| n.code), Some(WarningCode::NumberAsAngle));
    assert_eq!(ty("phi").trig_argument(), Ok(Vec::new()));
    assert!(ty("T").trig_argument().is_err() && ty("T").pure_number().is_err());
}

#[test]
fn a_product_beside_a_named_kind_takes_it() {
    check_kind("T + F * r", Some(Kind::Torque));
    check_kind("F * r + T", Some(Kind::Torque));
    check_kind("1/2 * mass_c * v^2 + mass_c * g_n * z + 1/2 * J_d * omega^2", None);
    check_kind("E + F * l_b", Some(Kind::Energy));
    check_kind("J_d + mass_c * (D / 2)^2 / mu^2", Some(Kind::MomentOfInertia));
}

#[test]
fn a_root_of_inertia_over_mass_is_a_length() {
    for kind in [Kind::Length, Kind::GyrationRadius, Kind::LeverArm] {
        assert!(ty("sqrt(J_d / mass_c)").fits(kind).is_ok(), "{kind}");
    }
    assert!(ty("sqrt(J_d / mass_c)").fits(Kind::Travel).is_err());
}

#[test]
fn misspelt_kinds_are_answered_with_the_nearest() {
    for (written, meant) in [
        ("moment_of_inerta", "moment_of_inertia"),
        ("Torque", "torque"),
        ("angular_velocty", "angular_velocity"),
        ("raduis", "radius"),
    ] {
        assert_eq!(Kind::nearest(written).first(), Some(&meant), "{written}");
    }
    assert_eq!(Kind::from_name("torqe"), None);
}

#[test]
fn natural_frequencies_are_angular_velocities() {
    let natural = |k, m| Type::natural_frequency(&Type::of_kind(k), &Type::of_kind(m)).map(|ty| ty.kind);
    assert_eq!(natural(Kind::Stiffness, Kind::Mass), Ok(Some(Kind::AngularVelocity)));
    assert_eq!(natural(Kind::TorsionalStiffness, Kind::MomentOfInertia), Ok(Some(Kind::AngularVelocity)));
    assert!(natural(Kind::TorsionalStiffness, Kind::Mass).is_err());
    assert!(natural(Kind::Torque, Kind::MomentOfInertia).is_err());
}

#[test]
fn conditions_are_no_quantities() {
    let condition = Type::condition();
    assert!(condition.is_condition());
    for e in [
        condition.add(&Type::number()).err(),
        condition.mul(&Type::number()).err(),
        condition.fits(Kind::Ratio).err(),
        condition.pure_number().err(),
        condition.trig_argument().err(),
        condition.neg().err(),
    ] {
        assert_eq!(e.map(|e| e.code), Some(MismatchCode::Condition));
    }
}

#[test]
fn exponents_out_of_range_are_refused() {
    let mut ty = ty("mass_c");
    let mut refused = false;
    for _ in 0..64 {
        match ty.pow(Ratio::whole(3)) {
            Ok(next) => ty = next,
            Err(e) => {
                refused = e.code == MismatchCode::ExponentRange;
                break;
            }
        }
    }
    assert!(refused);
}

#[test]
fn results_are_shown_in_usual_units() {
    for (expression, unit) in [
        ("T * omega", "W"),
        ("F * r", "N*m"),
        ("F * x", "J"),
        ("1/2 * J_d * omega^2", "J"),
        ("T / J_d", "rad/s^2"),
        ("v / r", "rad/s"),
        ("omega * r", "m/s"),
        ("omega", "rpm"),
        ("J_d", "kg*m^2"),
        ("F / D^2", "Pa"),
        ("mass_c * v", "kg*m/s"),
        ("D / r", "1"),
    ] {
        assert_eq!(display_unit(&ty(expression)).text, unit, "{expression}");
    }
}

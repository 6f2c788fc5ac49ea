//! Unit text: what is read, what is refused, and what is offered instead.

use pintle_units::{Dimension, Kind, Prefixes, Unit, UnitErrorCode, all, all_symbols, lookup, nearest, parse};

fn read(text: &str) -> Unit {
    parse(text, &|_| None).unwrap_or_else(|e| panic!("`{text}`: {e}"))
}

#[track_caller]
fn check_si(value: f64, unit: &str, expected: f64) {
    // Bit for bit: decimal units convert to the nearest double.
    assert_eq!(read(unit).to_si(value), expected, "{value} {unit}");
}

#[track_caller]
fn check_same(a: &str, b: &str) {
    let (x, y) = (read(a), read(b));
    assert_eq!((x.dim, x.scale), (y.dim, y.scale), "`{a}` and `{b}`");
}

#[track_caller]
fn check_dim(text: &str, dim: Dimension) {
    assert_eq!(read(text).dim, dim, "`{text}`");
}

#[track_caller]
fn check_error(text: &str, code: UnitErrorCode, at: &str, suggestions: &[&str]) {
    let e = parse(text, &|_| None).expect_err(text);
    assert_eq!((e.code, text.get(e.range.clone()), e.suggestions.as_slice().to_vec()), {
        let suggestions: Vec<String> = suggestions.iter().map(|s| String::from(*s)).collect();
        (code, Some(at), suggestions)
    });
}

#[test]
fn decimal_values_are_the_nearest_doubles() {
    check_si(60.0, "mm", 0.06);
    check_si(0.1, "mm", 0.0001);
    check_si(7.3, "g", 0.0073);
    check_si(6.3, "g*mm", 6.3e-6);
    check_si(12.4, "um", 12.4e-6);
    check_si(3.2, "kN", 3200.0);
    check_si(1.7, "%", 0.017);
    check_si(2.4, "t", 2400.0);
    check_si(0.42, "kW*h", 1_512_000.0);
    check_si(1.0, "in", 0.0254);
    check_si(235.0, "MPa", 235e6);
    check_si(7.85, "kg/dm^3", 7850.0);
    check_si(7.85, "g/cm^3", 7850.0);
}

#[test]
fn exact_definitions_stay_exact() {
    check_si(1.0, "lb", 0.45359237);
    check_si(1.0, "lbf", 4.4482216152605);
    check_si(1.0, "kgf", 9.80665);
    check_si(1.0, "PS", 735.49875);
    check_si(1.0, "gal", 0.003785411784);
    check_si(1.0, "kn*h", 1852.0);
    check_si(36.0, "km/h", 10.0);
    check_si(1.0, "Btu", 1055.05585262);
    check_si(1.0, "inH2O", 249.08891);
}

#[test]
fn products_may_be_written_in_several_ways() {
    check_same("kg*m^2", "kg·m²");
    check_same("kg*m^2", "kg⋅m^2");
    check_same("m^-1", "m⁻¹");
    check_same("m^-1", "1/m");
    check_same("N*m/(rad/s)", "N*m*s/rad");
    check_same("kJ/(kg*K)", "kJ*kg^-1*K^-1");
    check_same("m^(1/2)*m^(1/2)", "m");
    check_same("(kg*m)/s^2", "N");
    check_same("lbf/in^2", "psi");
    check_same("kgf/cm^2", "tech_atm");
    check_same("rev/min", "rpm");
    check_same("lbf*s^2/ft", "slug");
}

#[test]
fn micro_has_three_spellings() {
    check_same("µm", "um");
    check_same("\u{3bc}m", "um");
    check_same("µm", "m*ppm");
}

#[test]
fn kilogram_and_gram_are_read_with_prefixes() {
    check_si(1.0, "kg", 1.0);
    check_si(1.0, "Mg", 1000.0);
    check_si(1.0, "mg", 1e-6);
}

#[test]
fn prefixes_never_hide_a_unit() {
    check_si(1.0, "min", 60.0);
    check_si(1.0, "ft", 0.3048);
    check_si(1.0, "mil", 0.0254e-3);
    check_dim("cd", Dimension::LUMINOUS_INTENSITY);
    check_dim("Pa", Dimension::PRESSURE);
    check_dim("kn", Dimension::of(1, 0, -1, 0));
    check_dim("kN", Dimension::FORCE);
}

#[test]
fn clause_words_are_no_units() {
    for word in ["as", "at", "u", "to", "within"] {
        assert!(lookup(word).is_none(), "{word}");
    }
    assert!(lookup("in").is_some_and(|def| def.words == "inch"));
}

#[test]
fn angle_counts_in_units() {
    check_dim("rpm", Dimension::of(0, 0, -1, 1));
    check_dim("Hz", Dimension::of(0, 0, -1, 0));
    check_dim("N*m/rad", Dimension::of(2, 1, -2, -1));
    check_dim("mm/rev", Dimension::of(1, 0, 0, -1));
}

#[test]
fn a_unit_fixes_its_kind_where_it_has_one_reading() {
    for (text, kind) in [
        ("J", Some(Kind::Energy)),
        ("kW*h", None),
        ("W", Some(Kind::Power)),
        ("N*m/s", Some(Kind::Power)),
        ("N", Some(Kind::Force)),
        ("rpm", Some(Kind::AngularVelocity)),
        ("rad/s", Some(Kind::AngularVelocity)),
        ("1/min", Some(Kind::RotationalFrequency)),
        ("Hz", Some(Kind::Frequency)),
        ("m/s", Some(Kind::Speed)),
        ("degC", Some(Kind::Temperature)),
        ("delta_degC", Some(Kind::TemperatureDifference)),
        ("K", None),
        ("mm", None),
        ("N*m", None),
        ("kg*m^2", None),
    ] {
        assert_eq!(read(text).kind, kind, "{text}");
    }
}

#[test]
fn force_times_length_is_torque_or_energy() {
    for text in ["N*m", "kN*m", "lbf*ft", "ozf*in", "kgf*m", "N*mm", "N*m/rad"] {
        assert!(read(text).angle_open, "{text}");
    }
    for text in ["J", "kW*h", "N", "N/m", "kg*m^2"] {
        assert!(!read(text).angle_open, "{text}");
    }
}

#[test]
fn temperatures_have_offsets() {
    assert_eq!(read("degC").to_si(20.0), 293.15);
    assert_eq!(read("°C").from_si(293.15), 20.0);
    assert_eq!(read("degF").from_si(373.15), 212.0);
    assert_eq!(read("Δ°F").to_si(9.0), 5.0);
    assert_eq!(read("degC").difference_to_si(5.0), 5.0);
    assert_eq!(read("degF").of_differences().text, "delta_degF");
}

#[test]
fn a_second_solidus_is_refused_with_brackets() {
    check_error("kJ/kg/K", UnitErrorCode::Solidus, "kJ/kg/K", &["kJ/(kg*K)"]);
    check_error("kJ/kg*K", UnitErrorCode::Solidus, "kJ/kg*K", &["kJ/(kg*K)", "kJ*K/kg"]);
    check_error("N*m/rad/s", UnitErrorCode::Solidus, "N*m/rad/s", &["N*m/(rad*s)"]);
    check_error("W/m^2*K", UnitErrorCode::Solidus, "W/m^2*K", &["W/(m^2*K)", "W*K/m^2"]);
}

#[test]
fn every_offered_bracket_is_itself_read() {
    for text in ["kJ/kg/K", "a/b", "m/s*kg/K", "N/m*s*s", "1/s/s", "m/s/s"] {
        for suggestion in parse(text, &|_| None).err().into_iter().flat_map(|e| e.suggestions) {
            assert!(parse(&suggestion, &|_| None).is_ok() || text == "a/b", "`{text}` offers `{suggestion}`");
        }
    }
}

#[test]
fn a_bare_ton_is_refused_with_its_meanings() {
    check_error("ton", UnitErrorCode::Ambiguous, "ton", &["t", "short_ton", "long_ton", "tf"]);
    check_error("ton*m", UnitErrorCode::Ambiguous, "ton", &["t", "short_ton", "long_ton", "tf"]);
}

#[test]
fn a_temperature_level_in_a_product_is_refused() {
    check_error("kJ/(kg*degC)", UnitErrorCode::Offset, "degC", &["K", "delta_degC"]);
    check_error("W/°F", UnitErrorCode::Offset, "°F", &["K", "delta_degF"]);
    check_error("degC^2", UnitErrorCode::Offset, "degC", &["K", "delta_degC"]);
}

#[test]
fn unknown_units_are_placed_and_answered() {
    check_error("Nm", UnitErrorCode::Unknown, "Nm", &["N*m"]);
    check_error("kg*metre^2", UnitErrorCode::Unknown, "metre", &["m"]);
    check_error("kg/(sec*m)", UnitErrorCode::Unknown, "sec", &["s"]);
    check_error("qqqqq", UnitErrorCode::Unknown, "qqqqq", &[]);
}

#[test]
fn text_that_is_no_unit_is_refused() {
    for text in
        ["", "*", "m*", "/m", "m^", "m^(1/", "m^(1/0)", "m^0", "(m", "m)", "m s", "2*m", "10", "m^-", "⁻", "m⁻", "1/"]
    {
        assert!(parse(text, &|_| None).is_err(), "`{text}`");
    }
}

#[test]
fn monstrous_text_is_refused_without_harm() {
    for text in [
        "(".repeat(10_000),
        "m*".repeat(5_000) + "m",
        "m^64*".repeat(40) + "m^64",
        format!("m^{}", "9".repeat(50)),
        "m^64".into(),
        format!("{}m", "Qg*".repeat(100)),
        "m/s".repeat(3000),
    ] {
        let _ = parse(&text, &|_| None);
    }
    assert!(parse(&"(".repeat(10_000), &|_| None).is_err());
    assert!(parse("Qg^60*".repeat(20).trim_end_matches('*'), &|_| None).is_err());
}

#[test]
fn nearest_names_follow_the_shop_floor() {
    for (written, meant) in [
        ("Nm", "N*m"),
        ("KG", "kg"),
        ("RPM", "rpm"),
        ("lbs", "lb"),
        ("sec", "s"),
        ("sqm", "m^2"),
        ("Kn", "kn"),
        ("KN", "kN"),
        ("MM", "mm"),
        ("degree", "deg"),
        ("Hp", "hp"),
        ("kwh", "kWh"),
        ("PSI", "psi"),
        ("khz", "kHz"),
        ("l", "L"),
        ("C", "degC"),
        ("at", "tech_atm"),
        ("nm ", "nm"),
        ("turns", "turn"),
        ("slugs", "slug"),
    ] {
        assert!(nearest(written).contains(&meant), "`{written}`: {:?}", nearest(written));
    }
    assert!(nearest("zzzzzzzz").is_empty());
    assert!(nearest(&"x".repeat(100_000)).is_empty());
}

#[test]
fn a_sheet_brings_its_own_units() {
    let skip = Unit::named("skip_load", 2.4, &read("t")).expect("a unit");
    let user = |name: &str| (name == "skip_load").then(|| skip.clone());
    assert_eq!(parse("skip_load", &user).map(|u| u.to_si(2.0)), Ok(4800.0));
    assert_eq!(parse("skip_load/h", &user).map(|u| u.to_si(1.5)), Ok(1.0));
    assert!(Unit::named("bad", 0.0, &read("t")).is_none());
    assert!(Unit::named("bad", 1.0, &read("degC")).is_none());
}

#[test]
fn every_symbol_reads_as_itself() {
    let mut count = 0;
    for symbol in all_symbols() {
        let unit = read(symbol);
        assert_eq!(unit.text, symbol);
        assert!(unit.factor > 0.0 && unit.factor.is_finite(), "{symbol}");
        count += 1;
    }
    assert!(count > 400, "{count}");
}

#[test]
fn every_unit_has_words_and_a_source() {
    for def in all() {
        assert!(!def.words.is_empty() && !def.source.is_empty(), "{}", def.symbol);
        if let Some(kind) = def.kind {
            assert_eq!(kind.dimension(), def.dim, "{}", def.symbol);
        }
        assert!(def.prefixes == Prefixes::None || def.ice_point.is_none());
    }
}

#[test]
fn no_symbol_of_the_table_is_listed_twice() {
    let mut names: Vec<&str> =
        all().iter().flat_map(|d| std::iter::once(&d.symbol).chain(&d.aliases)).map(|s| s.as_str()).collect();
    let length = names.len();
    names.sort_unstable();
    names.dedup();
    assert_eq!(names.len(), length);
}

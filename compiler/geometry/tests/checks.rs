//! The outside check values for meshes: every file of `tests/checks/stl`.

use pintle_geometry::{MeshFault, MeshProperties, mass_properties, read_stl};
use serde_json::Value;

const CHECKS: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/../../tests/checks");

fn cases() -> Vec<Value> {
    let text = std::fs::read_to_string(format!("{CHECKS}/meshes.jsonl")).expect("the cases");
    text.lines().map(|line| serde_json::from_str(line).expect("a case")).collect()
}

#[track_caller]
fn check_number(id: &str, name: &str, found: f64, expected: &Value) {
    let value = expected["value"].as_f64().expect("a number");
    let relative = expected["rtol"].as_f64().expect("a tolerance") * value.abs();
    let allowed = relative.max(expected["atol"].as_f64().unwrap_or(0.0));
    assert!((found - value).abs() <= allowed, "{id}: {name} is {found}, expected {value} within {allowed}");
}

/// Number under the case's name, in the unit that the case states.
fn number(name: &str, found: &MeshProperties, density: f64) -> Option<f64> {
    let [xx, yy, zz, xy, xz, yz] = found.second;
    // mm^5 kg/m^3 to kg*m^2.
    let moment = density * 1e-15;
    Some(match name {
        "area" => found.area,
        "signed_volume" => found.shells.iter().map(|shell| shell.signed_volume).sum(),
        "shells" => found.shells.len() as f64,
        "mass" => density * found.volume * 1e-9,
        "com_x" => found.centre[0],
        "com_y" => found.centre[1],
        "com_z" => found.centre[2],
        "Ic_xx" => moment * (yy + zz),
        "Ic_yy" => moment * (xx + zz),
        "Ic_zz" => moment * (xx + yy),
        "Ic_xy" => -moment * xy,
        "Ic_xz" => -moment * xz,
        "Ic_yz" => -moment * yz,
        _ => return None,
    })
}

#[test]
fn every_case_agrees() {
    let mut n_numbers = 0;
    for case in cases() {
        let (id, given, expect) = (case["id"].as_str().expect("an id"), &case["given"], &case["expect"]);
        let path = format!("{CHECKS}/{}", given["file"].as_str().expect("a file"));
        let mesh = read_stl(&std::fs::read(path).expect("the file")).expect("an STL file");
        assert_eq!(Some(mesh.triangles.len() as f64), expect["triangles"]["value"].as_f64(), "{id}");
        let found = match mass_properties(&mesh) {
            Ok(found) => found,
            Err(fault) => {
                assert!(expect["reject"].is_object(), "{id} is refused: {fault}");
                continue;
            }
        };
        assert!(expect["reject"].is_null(), "{id} is accepted");
        assert_eq!(expect["watertight"]["value"], Value::Bool(true), "{id}");
        assert_eq!(expect["outward"]["value"], Value::Bool(!found.inverted), "{id}");
        let density = given["density"]["value"].as_f64().expect("a density");
        for (name, expected) in expect.as_object().expect("results") {
            match number(name, &found, density) {
                Some(found) => check_number(id, name, found, expected),
                None => assert!(["triangles", "watertight", "outward"].contains(&name.as_str()), "{id}: {name}?"),
            }
            n_numbers += 1;
        }
    }
    assert!(n_numbers > 100, "only {n_numbers} numbers were looked at");
}

#[test]
fn faults_name_their_kind_and_place() {
    let fault = |file: &str| {
        let bytes = std::fs::read(format!("{CHECKS}/stl/{file}")).expect("the file");
        mass_properties(&read_stl(&bytes).expect("an STL file")).expect_err("no body")
    };
    assert!(matches!(fault("ms-04-open.stl"), MeshFault::Open(3, _)));
    assert!(matches!(fault("ms-09-one-flipped.stl"), MeshFault::Inconsistent(3, _)));
}

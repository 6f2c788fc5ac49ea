//! Bodies made here, with moments known in closed form.

mod common;

use common::{block, mesh, turned};
use pintle_geometry::{MeshFault, MeshProperties, Role, mass_properties};

type Triangle = [[f64; 3]; 3];

#[track_caller]
fn check_body(triangles: Vec<Triangle>) -> MeshProperties {
    mass_properties(&mesh(triangles)).expect("a body")
}

#[track_caller]
fn check_fault(triangles: Vec<Triangle>) -> MeshFault {
    mass_properties(&mesh(triangles)).expect_err("no body")
}

#[track_caller]
fn check_close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} is not {expected}");
}

fn all(parts: impl IntoIterator<Item = Vec<Triangle>>) -> Vec<Triangle> {
    parts.into_iter().flatten().collect()
}

#[test]
fn a_block_has_the_textbook_moments() {
    let found = check_body(block([0.0; 3], [2.0, 3.0, 4.0]));
    check_close(found.volume, 24.0, 1e-14);
    check_close(found.area, 52.0, 1e-14);
    check_close(found.second[0], 24.0 * 4.0 / 12.0, 1e-13);
    check_close(found.second[2], 24.0 * 16.0 / 12.0, 1e-13);
    assert_eq!((found.low, found.high), ([0.0; 3], [2.0, 3.0, 4.0]));
    check_close(found.reach[0], 5.0, 1e-15);
    check_close(found.reach[2], 13.0_f64.sqrt(), 1e-15);
}

#[test]
fn an_offset_from_the_files_origin_costs_few_digits() {
    // numerics of summing about the origin: at 1000 times the size nothing would be left of the moments.
    let found = check_body(block([1000.0, -1000.0, 1000.0], [1001.0, -999.0, 1001.0]));
    check_close(found.second[0], 1.0 / 12.0, 1e-10);
    check_close(found.centre[1], -999.5, 1e-14);
}

#[test]
fn shells_apart_are_bodies() {
    let found = check_body(all([block([0.0; 3], [1.0; 3]), block([5.0; 3], [6.0; 3])]));
    assert_eq!(found.shells.iter().map(|shell| shell.role).collect::<Vec<_>>(), [Role::Body, Role::Body]);
    check_close(found.volume, 2.0, 1e-14);
}

#[test]
fn blocks_that_touch_at_a_corner_are_two_shells() {
    let found = check_body(all([block([0.0; 3], [1.0; 3]), block([1.0; 3], [2.0; 3])]));
    assert_eq!(found.shells.len(), 2);
}

#[test]
fn blocks_that_touch_with_their_faces_are_two_bodies() {
    let found = check_body(all([block([0.0; 3], [1.0, 4.0, 4.0]), block([1.0, 1.0, 1.0], [2.0, 3.0, 3.0])]));
    check_close(found.volume, 20.0, 1e-14);
}

#[test]
fn a_cavity_is_taken_off_and_may_hold_a_body() {
    let hollow = [block([0.0; 3], [10.0; 3]), turned(block([2.0; 3], [8.0; 3])), block([4.0; 3], [6.0; 3])];
    let found = check_body(all(hollow));
    check_close(found.volume, 1000.0 - 216.0 + 8.0, 1e-14);
    assert_eq!(found.shells[1].role, Role::Cavity);
    assert_eq!(found.shells[2].role, Role::Body);
    assert!(!found.inverted);
}

#[test]
fn a_body_inside_out_is_turned_with_its_cavity() {
    let found = check_body(all([turned(block([0.0; 3], [10.0; 3])), block([2.0; 3], [8.0; 3])]));
    assert!(found.inverted);
    check_close(found.volume, 784.0, 1e-14);
    check_close(found.shells[0].signed_volume, -1000.0, 1e-14);
}

#[test]
fn only_the_body_that_is_inside_out_is_turned() {
    let found = check_body(all([block([0.0; 3], [1.0; 3]), turned(block([5.0; 3], [7.0; 3]))]));
    assert_eq!(found.shells.iter().map(|shell| shell.turned).collect::<Vec<_>>(), [false, true]);
    check_close(found.volume, 9.0, 1e-14);
}

#[test]
fn a_shell_inside_another_must_face_inwards() {
    let fault = check_fault(all([block([0.0; 3], [10.0; 3]), block([2.0; 3], [8.0; 3])]));
    assert!(matches!(fault, MeshFault::Nested(_)), "{fault}");
}

#[test]
fn shells_that_overlap_are_refused() {
    let fault = check_fault(all([block([0.0; 3], [10.0; 3]), block([5.0; 3], [15.0, 14.0, 13.0])]));
    assert!(matches!(fault, MeshFault::Crossing(_)), "{fault}");
    // A cross of two bars: no corner of one lies in the other.
    let bars = [block([-9.0, -1.0, -1.0], [9.0, 1.0, 1.0]), block([-0.5, -0.7, -8.0], [0.6, 0.8, 8.0])];
    assert!(matches!(check_fault(all(bars)), MeshFault::Crossing(_)));
}

#[test]
fn the_same_body_twice_is_refused() {
    let fault = check_fault(all([block([0.0; 3], [1.0; 3]), block([0.0; 3], [1.0; 3])]));
    assert!(matches!(fault, MeshFault::Branching(18, _)), "{fault}");
}

#[test]
fn a_folded_sheet_encloses_nothing() {
    let (a, b, c) = ([0.0, 0.0, 0.1], [1.0, 0.0, 0.3], [0.0, 1.0, 0.7]);
    assert_eq!(check_fault(vec![[a, b, c], [a, c, b]]), MeshFault::NoVolume);
}

#[test]
fn minus_zero_is_zero() {
    let mut triangles = block([0.0; 3], [1.0; 3]);
    for corner in &mut triangles[0] {
        *corner = corner.map(|value| if value == 0.0 { -0.0 } else { value });
    }
    check_close(check_body(triangles).volume, 1.0, 1e-14);
}

#[test]
fn coordinates_out_of_range_are_faults() {
    assert_eq!(check_fault(block([0.0; 3], [1e200; 3])), MeshFault::TooLarge);
    assert_eq!(check_fault(block([0.0; 3], [1e-200; 3])), MeshFault::NoVolume);
    assert_eq!(check_fault(Vec::new()), MeshFault::NoVolume);
}

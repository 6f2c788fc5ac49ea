//! STL bytes, whole and broken.

mod common;

use common::{binary, block, text};
use pintle_geometry::{Format, StlFault, mass_properties, read_stl};
use proptest::prelude::*;

#[track_caller]
fn check_text(text: &str, fault: StlFault) {
    assert_eq!(read_stl(text.as_bytes()), Err(fault));
}

fn unit_block() -> Vec<[[f64; 3]; 3]> {
    block([0.0; 3], [1.0; 3])
}

#[track_caller]
fn check_same_block(bytes: &[u8], format: Format) {
    let mesh = read_stl(bytes).expect("an STL file");
    assert_eq!((mesh.triangles, mesh.n_degenerate, mesh.format), (unit_block(), 0, format));
}

#[test]
fn a_binary_file_may_begin_with_solid() {
    check_same_block(&binary(&unit_block()), Format::Binary);
}

#[test]
fn text_is_read_in_any_case_and_layout() {
    let text = text(&unit_block());
    check_same_block(text.as_bytes(), Format::Text);
    check_same_block(text.to_uppercase().as_bytes(), Format::Text);
    check_same_block(text.replace('\n', "\r\n\t ").as_bytes(), Format::Text);
    check_same_block(text.replace('\n', "\r").as_bytes(), Format::Text);
    check_same_block(text.replace('\n', " ").as_bytes(), Format::Text);
    check_same_block(format!("\u{feff}  {text}").as_bytes(), Format::Text);
}

#[test]
fn names_may_hold_anything() {
    let text = text(&unit_block());
    check_same_block(text.replace("solid block", "solid facet µ 12 endsolid").as_bytes(), Format::Text);
    check_same_block(text.replace(" block", "").as_bytes(), Format::Text);
    let bytes = [b"solid \xe4\xff".as_slice(), &text.as_bytes()["solid block".len()..]].concat();
    check_same_block(&bytes, Format::Text);
}

#[test]
fn normals_are_not_read() {
    check_same_block(text(&unit_block()).replace("normal 0 0 0", "normal nan -nan(ind) x").as_bytes(), Format::Text);
}

#[test]
fn a_file_may_hold_several_solids() {
    let both = format!("{}\n{}", text(&unit_block()), text(&block([3.0; 3], [4.0; 3])));
    let mesh = read_stl(both.as_bytes()).expect("an STL file");
    assert_eq!(mass_properties(&mesh).expect("two bodies").shells.len(), 2);
}

#[test]
fn broken_text_says_where_and_what() {
    check_text(
        "solid x\nfacet normal 0 0 1\nouter loop\nvertex 0 0\nvertex",
        StlFault::Text { line: 5, expected: "a coordinate" },
    );
    check_text("solid x\n\nfacet 0 0 1", StlFault::Text { line: 3, expected: "normal" });
    check_text("solid x\nfacets\n", StlFault::Text { line: 2, expected: "endsolid" });
    check_text("solid x\n", StlFault::Text { line: 2, expected: "endsolid" });
    check_text("SOLID x\nENDSOLID x\n", StlFault::Empty);
    check_text("solid x\nendsolid x\nmore", StlFault::Text { line: 3, expected: "solid" });
    check_text("", StlFault::NotStl);
    check_text("# a sheet", StlFault::NotStl);
}

#[test]
fn numbers_must_be_finite() {
    for word in ["nan", "inf", "-infinity", "1e999"] {
        check_text(&text(&unit_block()).replacen("1e0", word, 1), StlFault::NotFinite(1));
    }
    let mut bytes = binary(&unit_block());
    let second_triangle = 84 + 50 + 12;
    bytes[second_triangle..second_triangle + 4].copy_from_slice(&f32::INFINITY.to_le_bytes());
    assert_eq!(read_stl(&bytes), Err(StlFault::NotFinite(2)));
}

#[test]
fn a_count_that_lies_is_refused() {
    let mut bytes = binary(&unit_block());
    bytes[80..84].copy_from_slice(&u32::MAX.to_le_bytes());
    let size = bytes.len();
    assert_eq!(read_stl(&bytes), Err(StlFault::Length { stated: u32::MAX, size }));
}

#[test]
fn triangles_with_two_equal_corners_are_dropped_and_counted() {
    let mut triangles = unit_block();
    let [a, b, _] = triangles[0];
    triangles.push([a, b, a]);
    let mesh = read_stl(&binary(&triangles)).expect("an STL file");
    assert_eq!((mesh.triangles, mesh.n_degenerate), (unit_block(), 1));
}

/// Reads, and integrates what could be read.
fn use_all(bytes: &[u8]) {
    if let Ok(mesh) = read_stl(bytes) {
        let _ = mass_properties(&mesh);
    }
}

proptest! {
    #[test]
    fn random_bytes_never_panic(bytes in prop::collection::vec(any::<u8>(), 0..600)) {
        use_all(&bytes);
    }

    #[test]
    fn random_words_never_panic(words in prop::collection::vec(
        prop::sample::select(vec!["solid", "endsolid", "facet", "normal", "outer", "loop", "vertex", "endloop",
            "endfacet", "0", "1e3", "-2", "nan", "\n", "µ"]), 0..80)) {
        use_all(format!("solid {}", words.join(" ")).as_bytes());
    }

    #[test]
    fn random_triangles_never_panic(numbers in prop::collection::vec(any::<f32>(), 0..120),
                                    small in prop::collection::vec(0..3_u8, 0..180)) {
        let whole = |numbers: &[f64]| -> Vec<[[f64; 3]; 3]> {
            numbers.chunks_exact(9).map(|it| std::array::from_fn(|i| std::array::from_fn(|j| it[3 * i + j]))).collect()
        };
        use_all(&binary(&whole(&numbers.into_iter().map(f64::from).collect::<Vec<_>>())));
        use_all(&binary(&whole(&small.into_iter().map(f64::from).collect::<Vec<_>>())));
    }

    #[test]
    fn a_cut_file_is_refused(share in 0.0..1.0_f64) {
        // All up to the last word is needed.
        let text = text(&unit_block());
        let needed = text.trim_end().len() - " block".len();
        prop_assert!(read_stl(&text.as_bytes()[..(share * needed as f64) as usize]).is_err());
        let bytes = binary(&unit_block());
        prop_assert!(read_stl(&bytes[..(share * bytes.len() as f64) as usize]).is_err());
    }

    #[test]
    fn moments_do_not_depend_on_place_or_order(
        size in prop::array::uniform3(0.1..100.0_f64),
        at in prop::array::uniform3(-1000.0..1000.0_f64),
        first in 0..12_usize,
    ) {
        let high = std::array::from_fn(|axis| at[axis] + size[axis]);
        let mut triangles = block(at, high);
        triangles.rotate_left(first);
        let found = mass_properties(&common::mesh(triangles)).expect("a block");
        let [x, y, z]: [f64; 3] = std::array::from_fn(|axis| high[axis] - at[axis]);
        prop_assert!((found.volume / (x * y * z) - 1.0).abs() < 1e-9);
        prop_assert!((found.second[1] / (x * y * z * y * y / 12.0) - 1.0).abs() < 1e-9);
    }
}

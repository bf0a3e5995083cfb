//! Broken pictures and point lists: every message names the file, what is wrong, and a remedy.

use dotwright::intake::{Inside, MOST_VERTICES, Reading, picture, points};
use proptest::prelude::*;
use std::fmt::Write as _;
use std::path::{Path, PathBuf};

const READING: Reading = Reading {
    pixel: 1.0,
    level: 0.5,
    inside: Inside::Bright,
    smooth: None,
};

fn file(name: &str, bytes: &[u8]) -> (tempfile::TempDir, PathBuf) {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join(name);
    std::fs::write(&path, bytes).expect("a temporary file");
    (folder, path)
}

fn png(
    width: u32,
    height: u32,
    colour: png::ColorType,
    depth: png::BitDepth,
    data: &[u8],
) -> Vec<u8> {
    let mut out = Vec::new();
    let mut encoder = png::Encoder::new(&mut out, width, height);
    encoder.set_color(colour);
    encoder.set_depth(depth);
    if colour == png::ColorType::Indexed {
        encoder.set_palette(vec![0, 0, 0, 255, 255, 255]);
    }
    let mut writer = encoder.write_header().expect("a header");
    writer.write_image_data(data).expect("pixels");
    drop(writer);
    out
}

/// A grey square of 40 pixels in a picture of 60.
fn square() -> Vec<u8> {
    (0..3600)
        .map(|k| {
            if (10..50).contains(&(k % 60)) && (10..50).contains(&(k / 60)) {
                255
            } else {
                0
            }
        })
        .collect()
}

fn grey(data: &[u8]) -> Vec<u8> {
    png(
        60,
        60,
        png::ColorType::Grayscale,
        png::BitDepth::Eight,
        data,
    )
}

fn refused(bytes: &[u8]) -> String {
    let (_folder, path) = file("mask.png", bytes);
    let message = picture(&path, &READING)
        .expect_err("a broken picture")
        .to_string();
    assert!(message.contains("mask.png"), "{message}");
    message
}

#[test]
fn broken_pictures_are_explained() {
    let whole = grey(&square());
    let says = |bytes: &[u8], words: &[&str]| {
        let message = refused(bytes);
        for word in words {
            assert!(message.contains(word), "{word:?} is not in: {message}");
        }
    };
    says(b"", &["no readable PNG", "export"]);
    says(b"not a picture at all", &["no readable PNG"]);
    for share in [10, 30, 60, 90] {
        says(&whole[..whole.len() * share / 100], &["no readable PNG"]);
    }
    let mut flipped = whole.clone();
    let middle = flipped.len() / 2;
    flipped[middle] ^= 0xff;
    says(&flipped, &["no readable PNG"]);
    says(&grey(&[0; 3600]), &["one grey", "clearly different"]);
    says(&grey(&[255; 3600]), &["one grey"]);
    says(&grey(&[100; 3600]), &["one grey"]);
    let speck: Vec<u8> = (0..3600).map(|k| if k == 1830 { 255 } else { 0 }).collect();
    says(&grey(&speck), &["nothing larger", "`level`"]);
    let faint: Vec<u8> = square().iter().map(|v| v / 255 * 8).collect();
    says(&grey(&faint), &["one grey"]);
    // A header that declares 100 000 x 100 000 pixels; nothing of that size may be allocated.
    let mut huge = whole.clone();
    huge[16..20].copy_from_slice(&100_000u32.to_be_bytes());
    huge[20..24].copy_from_slice(&100_000u32.to_be_bytes());
    let checksum = crc(&huge[12..29]);
    huge[29..33].copy_from_slice(&checksum.to_be_bytes());
    says(&huge, &["100000 × 100000", "64 million", "crop"]);
    let noise: Vec<u8> = (0..640_000u32)
        .map(|k| {
            if (k % 800) % 6 < 3 && (k / 800) % 6 < 3 {
                255
            } else {
                0
            }
        })
        .collect();
    says(
        &png(
            800,
            800,
            png::ColorType::Grayscale,
            png::BitDepth::Eight,
            &noise,
        ),
        &["noise", "smooth it"],
    );
}

/// The checksum of a PNG chunk.
fn crc(bytes: &[u8]) -> u32 {
    !bytes.iter().fold(!0u32, |mut c, b| {
        c ^= u32::from(*b);
        for _ in 0..8 {
            c = if c & 1 == 1 {
                0xedb8_8320 ^ (c >> 1)
            } else {
                c >> 1
            };
        }
        c
    })
}

#[test]
fn every_kind_of_png_gives_the_same_square() {
    let bits = square();
    let each = |f: &dyn Fn(u8) -> Vec<u8>| bits.iter().flat_map(|&v| f(v)).collect::<Vec<u8>>();
    use png::{BitDepth, ColorType};
    let packed: Vec<u8> = bits
        .chunks(60)
        .flat_map(|row| {
            row.chunks(8)
                .map(|c| {
                    c.iter()
                        .enumerate()
                        .fold(0, |b, (k, v)| b | (v & 1) << (7 - k))
                })
                .collect::<Vec<u8>>()
        })
        .collect();
    let kinds: Vec<(&str, Vec<u8>)> = vec![
        ("grey 8", grey(&bits)),
        (
            "grey 16",
            png(
                60,
                60,
                ColorType::Grayscale,
                BitDepth::Sixteen,
                &each(&|v| vec![v, v]),
            ),
        ),
        (
            "grey 1",
            png(60, 60, ColorType::Grayscale, BitDepth::One, &packed),
        ),
        (
            "grey alpha",
            png(
                60,
                60,
                ColorType::GrayscaleAlpha,
                BitDepth::Eight,
                &each(&|v| vec![v, 255]),
            ),
        ),
        (
            "rgb",
            png(
                60,
                60,
                ColorType::Rgb,
                BitDepth::Eight,
                &each(&|v| vec![v, 0, 40]),
            ),
        ),
        (
            "rgb 16",
            png(
                60,
                60,
                ColorType::Rgb,
                BitDepth::Sixteen,
                &each(&|v| vec![v, 0, 0, 0, 9, 9]),
            ),
        ),
        (
            "rgba",
            png(
                60,
                60,
                ColorType::Rgba,
                BitDepth::Eight,
                &each(&|v| vec![v, v, v, 255]),
            ),
        ),
        (
            "cut-out",
            png(
                60,
                60,
                ColorType::Rgba,
                BitDepth::Eight,
                &each(&|v| vec![20, 20, 20, v]),
            ),
        ),
        (
            "indexed",
            png(60, 60, ColorType::Indexed, BitDepth::One, &packed),
        ),
        ("dim", grey(&each(&|v| vec![40 + v / 4]))),
    ];
    for (name, bytes) in kinds {
        let (_folder, path) = file("mask.png", &bytes);
        let taken = picture(&path, &READING).unwrap_or_else(|e| panic!("{name}: {e}"));
        let b = taken.outline.bounds();
        let off = [b.lo.x - 10.0, b.lo.y - 10.0, b.hi.x - 50.0, b.hi.y - 50.0];
        // Roundings of the crossing of two lines.
        assert!(off.iter().all(|d| d.abs() < 1e-12), "{name}: {off:?}");
        assert_eq!(taken.outline.corners(1e-9).len(), 4, "{name}");
    }
    // Dark inside, and the size of a pixel.
    let dark: Vec<u8> = bits.iter().map(|v| 255 - v).collect();
    let (_folder, path) = file("mask.png", &grey(&dark));
    let reading = Reading {
        inside: Inside::Dark,
        pixel: 0.5,
        ..READING
    };
    let b = picture(&path, &reading)
        .expect("a dark mask")
        .outline
        .bounds();
    assert!((b.lo.x - 5.0).abs() < 1e-12 && (b.hi.y - 25.0).abs() < 1e-12);
}

fn listed(text: &str) -> Result<dotwright::intake::Taken, String> {
    let (_folder, path) = file("edge.csv", text.as_bytes());
    points(&path, None).map_err(|e| e.to_string())
}

#[test]
fn broken_point_lists_are_explained_with_their_line() {
    for (text, words) in [
        ("", &["no points", "\"x, y\""][..]),
        ("# nothing\n\n", &["no points"]),
        ("x, y\n", &["no points"]),
        (
            "0, 0\n1, 0\n",
            &["edge.csv:1", "2 different", "at least three"],
        ),
        ("0, 0\n1, 0\n0, 0\n", &["edge.csv:1", "2 different"]),
        (
            "0, 0\n1, 0\n1, b\n",
            &["edge.csv:3", "\"b\" is not a number", "1, b"],
        ),
        ("0, 0\n1\n1, 1\n", &["edge.csv:2", "needs two"]),
        ("0, 0\n1, nan\n1, 1\n", &["edge.csv:2", "finite"]),
        ("0, 0\n1, 1e300\n1, 1\n", &["edge.csv:2", "finite"]),
        ("x, y\nu, v\n0, 0\n", &["edge.csv:2", "not a number"]),
        (
            "0, 0\n2, 2\n2, 0\n0, 2\n",
            &[
                "edge.csv",
                "from line 1 to 2",
                "from line 3 to 4",
                "(1.0",
                "blank line",
            ],
        ),
        (
            "0, 0\n4, 0\n0, 4\n\n1, 1\n5, 1\n1, 2\n",
            &["crosses", "blank line"],
        ),
        ("0, 0\n4, 0\n2, 0\n2, 3\n", &["crosses"]),
    ] {
        let message = listed(text).expect_err(text);
        for word in words {
            assert!(
                message.contains(word),
                "{text:?}: {word:?} is not in: {message}"
            );
        }
    }
    let mut million = String::new();
    for k in 0..1_000_000 {
        let _ = writeln!(million, "{k}, {}", k * k);
    }
    let message = listed(&million).expect_err("a million");
    assert!(
        message.contains(&MOST_VERTICES.to_string()) && message.contains("thin"),
        "{message}"
    );
    let missing = points(Path::new("no/such.csv"), None)
        .expect_err("missing")
        .to_string();
    assert!(
        missing.contains("no/such.csv") && missing.contains("no such file"),
        "{missing}"
    );
}

#[test]
fn point_lists_in_all_their_spellings() {
    for text in [
        "0,0\n4,0\n4,4\n0,4\n",
        "x,y\n0;0\n4;0\n4;4\n0;4\n",
        "# a square\nX [nm]\tY [nm]\n0\t0\n4\t0 # to the right\n4\t4\n0\t4\n0\t0\n",
        "\u{feff}0 0 7\r\n4 0 7\r\n4 4 7\r\n0 4 7\r\n\r\n\r\n",
        "0, 4\n4, 4\n4, 0\n0, 0\n",
    ] {
        let taken = listed(text).unwrap_or_else(|e| panic!("{text:?}: {e}"));
        assert_eq!(taken.outline.corners(1e-9).len(), 4);
        assert_eq!(taken.outline.area(), 16.0, "{text:?}");
    }
    let taken = listed("0,0\n9,0\n9,9\n0,9\n\n3,3\n6,3\n6,6\n3,6\n\n4,4\n5,4\n5,5\n4,5\n")
        .expect("an island in a hole");
    assert_eq!(taken.outline.area(), 81.0 - 9.0 + 1.0);
}

#[test]
fn a_noisy_trace_is_smoothed_within_its_tolerance() {
    // A circle of radius 50 with a ripple of 0.2 at random phase, one point per unit.
    let mut seed = 7u64;
    let mut random = move || {
        seed = seed
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (seed >> 11) as f64 / (1u64 << 53) as f64 - 0.5
    };
    let mut text = String::new();
    for k in 0..314 {
        let (s, c) = (f64::from(k) * std::f64::consts::TAU / 314.0).sin_cos();
        let r = 50.0 + 0.4 * random();
        let _ = writeln!(text, "{}, {}", r * c, r * s);
    }
    let (_folder, path) = file("edge.csv", text.as_bytes());
    let rough = points(&path, None).expect("a polygon").outline;
    assert_eq!(rough.pieces().count(), 314);
    let smooth = points(&path, Some(0.5)).expect("a curve").outline;
    assert!(smooth.pieces().count() < 20);
    // Pieces meet without a bend (the rest is rounding).
    assert_eq!(smooth.corners(1e-6).len(), 0);
    let exact = std::f64::consts::PI * 2500.0;
    assert!(
        (smooth.area() / exact - 1.0).abs() < 2e-3,
        "{}",
        smooth.area() / exact
    );
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]

    #[test]
    fn no_bytes_panic(bytes in prop::collection::vec(any::<u8>(), 0..300)) {
        let (_folder, path) = file("x", &bytes);
        let _ = picture(&path, &READING);
        let _ = points(&path, Some(1.0));
    }

    #[test]
    fn no_damage_to_a_picture_panics(at in 8usize..200, value in any::<u8>()) {
        let mut bytes = grey(&square());
        if at < bytes.len() {
            bytes[at] = value;
        }
        let (_folder, path) = file("x.png", &bytes);
        let _ = picture(&path, &READING);
    }

    #[test]
    fn no_point_list_panics(text in "([-0-9., #\n]|nan|x){0,80}", smooth in prop::option::of(0.01f64..10.0)) {
        let (_folder, path) = file("x.csv", text.as_bytes());
        let _ = points(&path, smooth);
    }
}

proptest! {
    // Every case looks for crossings of hundreds of curves, exactly.
    #![proptest_config(ProptestConfig::with_cases(30))]

    #[test]
    fn no_picture_panics(
        pixels in prop::collection::vec(any::<u8>(), 400),
        level in 0.01f64..0.99,
        blocks in 1usize..5,
    ) {
        let data: Vec<u8> = (0..3600).map(|k| pixels[(k % 60 / blocks + 23 * (k / 60 / blocks)) % 400]).collect();
        let (_folder, path) = file("x.png", &grey(&data));
        if let Ok(taken) = picture(&path, &Reading { level, ..READING }) {
            if level != 0.5 {
                // Whatever the noise, what comes out is an outline; on 0.5 pixels may touch.
                prop_assert!(taken.outline.check(0.0).is_ok(), "{:?}", taken.outline.check(0.0));
            }
            for l in &taken.outline.loops {
                for k in 0..l.pieces.len() {
                    let gap = l.pieces[k].end() - l.pieces[(k + 1) % l.pieces.len()].start();
                    prop_assert!(gap.norm() < 1e-9, "a gap of {gap:?}");
                }
            }
        }
    }
}

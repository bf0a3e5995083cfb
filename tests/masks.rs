//! Masks drawn from known shapes, traced and fitted, against those shapes.

use dotwright::geometry::{Outline, Piece, Point};
use dotwright::intake::{Inside, Reading, picture};
use std::path::Path;

/// Side of the pictures, pixels.
const SIDE: usize = 240;

const READING: Reading = Reading {
    pixel: 1.0,
    level: 0.5,
    inside: Inside::Bright,
    smooth: None,
};

/// Writes a grey PNG whose pixels carry the share of their area inside; `samples` squared points
/// a pixel, 1 for black and white only.
fn draw(path: &Path, samples: usize, distance: &dyn Fn(Point) -> f64) {
    let mut grey = Vec::with_capacity(SIDE * SIDE);
    for row in 0..SIDE {
        for column in 0..SIDE {
            let (x, y) = (column as f64, (SIDE - 1 - row) as f64);
            let centre = distance(Point {
                x: x + 0.5,
                y: y + 0.5,
            });
            let share = if centre.abs() > 1.0 {
                f64::from(centre < 0.0)
            } else {
                let n = samples as f64;
                let hits = (0..samples * samples)
                    .filter(|k| {
                        let at = |j: usize| (j as f64 + 0.5) / n;
                        distance(Point {
                            x: x + at(k % samples),
                            y: y + at(k / samples),
                        }) < 0.0
                    })
                    .count();
                hits as f64 / (n * n)
            };
            grey.push((255.0 * share).round() as u8);
        }
    }
    save(path, SIDE, SIDE, &grey);
}

fn save(path: &Path, width: usize, height: usize, grey: &[u8]) {
    let file = std::fs::File::create(path).expect("a temporary file");
    let mut encoder = png::Encoder::new(file, width as u32, height as u32);
    encoder.set_color(png::ColorType::Grayscale);
    encoder.set_depth(png::BitDepth::Eight);
    let mut writer = encoder.write_header().expect("a header");
    writer.write_image_data(grey).expect("the pixels");
}

fn p(x: f64, y: f64) -> Point {
    Point { x, y }
}

/// Signed distance to a polygon run counter-clockwise, negative inside.
fn polygon(vertices: Vec<Point>) -> impl Fn(Point) -> f64 {
    move |q| {
        let n = vertices.len();
        let (mut best, mut inside) = (f64::INFINITY, false);
        for k in 0..n {
            let (a, b) = (vertices[k], vertices[(k + 1) % n]);
            let t = ((q - a).dot(b - a) / (b - a).dot(b - a)).clamp(0.0, 1.0);
            best = best.min((q - a - (b - a) * t).norm());
            if (a.y > q.y) != (b.y > q.y) && q.x < a.x + (b.x - a.x) * (q.y - a.y) / (b.y - a.y) {
                inside = !inside;
            }
        }
        if inside { -best } else { best }
    }
}

fn turned(angle: f64, centre: Point, q: Point) -> Point {
    let (s, c) = angle.to_radians().sin_cos();
    let d = q - centre;
    p(c * d.x + s * d.y, -s * d.x + c * d.y)
}

struct Found {
    corners: usize,
    lines: usize,
    curves: usize,
    worst: f64,
    mean: f64,
}

fn measure(outline: &Outline, distance: &dyn Fn(Point) -> f64) -> Found {
    let (mut worst, mut sum, mut count) = (0.0f64, 0.0, 0.0);
    for piece in outline.pieces() {
        for k in 0..50 {
            let d = distance(piece.at(f64::from(k) / 50.0)).abs();
            worst = worst.max(d);
            sum += d * d;
            count += 1.0;
        }
    }
    let lines = outline
        .pieces()
        .filter(|p| matches!(p, Piece::Line { .. }))
        .count();
    Found {
        corners: outline.corners(1e-6).len(),
        lines,
        curves: outline.pieces().count() - lines,
        worst,
        mean: (sum / count).sqrt(),
    }
}

type Shape = (&'static str, Box<dyn Fn(Point) -> f64>, usize, usize);

/// Name, signed distance, corners, straight edges.
fn shapes() -> Vec<Shape> {
    let c = p(118.3, 121.7);
    let disc = |r: f64| move |q: Point| (q - c).norm() - r;
    let star = |n: usize, r: f64, from: f64| -> Vec<Point> {
        (0..n)
            .map(|k| c + Point::polar((from + 360.0 * k as f64 / n as f64).to_radians()) * r)
            .collect()
    };
    let l = |angle: f64| -> Vec<Point> {
        [
            (0., 0.),
            (90., 0.),
            (90., 40.),
            (40., 40.),
            (40., 90.),
            (0., 90.),
        ]
        .iter()
        .map(|&(x, y)| {
            let (s, k) = angle.to_radians().sin_cos();
            p(
                118.0 + k * (x - 40.) - s * (y - 40.),
                117.0 + s * (x - 40.) + k * (y - 40.),
            )
        })
        .collect()
    };
    let capsule = move |angle: f64, half: f64, r: f64| {
        move |q: Point| {
            let d = turned(angle, c, q);
            p((d.x.abs() - half).max(0.0), d.y).norm() - r
        }
    };
    let rounded = move |angle: f64, half: Point, r: f64| {
        move |q: Point| {
            let d = turned(angle, c, q);
            let o = p(d.x.abs() - half.x + r, d.y.abs() - half.y + r);
            p(o.x.max(0.0), o.y.max(0.0)).norm() + o.x.max(o.y).min(0.0) - r
        }
    };
    let lobes = move |q: Point| {
        ((q - c - p(-28., 5.)).norm() - 45.0).min((q - c - p(35., -9.)).norm() - 34.0)
    };
    vec![
        ("disc 6", Box::new(disc(6.0)), 0, 0),
        ("disc 20", Box::new(disc(20.3)), 0, 0),
        ("disc 60", Box::new(disc(60.0)), 0, 0),
        ("disc 110", Box::new(disc(110.2)), 0, 0),
        (
            "ring",
            Box::new(move |q| ((q - c).norm() - 70.0).abs() - 25.0),
            0,
            0,
        ),
        ("square", Box::new(polygon(star(4, 70.0, 45.0))), 4, 4),
        ("square at 17", Box::new(polygon(star(4, 70.0, 17.0))), 4, 4),
        ("square at 45", Box::new(polygon(star(4, 70.0, 0.0))), 4, 4),
        ("small square", Box::new(polygon(star(4, 10.0, 29.0))), 4, 4),
        ("triangle", Box::new(polygon(star(3, 80.0, 11.0))), 3, 3),
        ("hexagon", Box::new(polygon(star(6, 80.0, 4.0))), 6, 6),
        ("12-gon", Box::new(polygon(star(12, 90.0, 4.0))), 12, 12),
        ("20-gon", Box::new(polygon(star(20, 100.0, 4.0))), 20, 20),
        ("L", Box::new(polygon(l(0.0))), 6, 6),
        ("L at 33", Box::new(polygon(l(33.0))), 6, 6),
        ("stadium", Box::new(capsule(0.0, 40.0, 30.0)), 0, 2),
        ("stadium at 21", Box::new(capsule(21.0, 40.0, 30.0)), 0, 2),
        (
            "rounded 8",
            Box::new(rounded(13.0, p(70.0, 40.0), 8.0)),
            0,
            4,
        ),
        (
            "rounded 20",
            Box::new(rounded(0.0, p(70.0, 40.0), 20.0)),
            0,
            4,
        ),
        ("two lobes", Box::new(lobes), 2, 0),
    ]
}

#[test]
fn grey_masks_come_back_within_a_tenth_of_a_pixel() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let mut report = String::new();
    let mut good = true;
    for (name, distance, corners, lines) in shapes() {
        let file = folder.path().join("mask.png");
        draw(&file, 16, &*distance);
        let taken = picture(&file, &READING).expect("a mask");
        let found = measure(&taken.outline, &*distance);
        let fine = found.corners == corners
            && found.lines == lines
            && found.worst < 0.25
            && found.mean < 0.06;
        good &= fine;
        report += &format!(
            "{} {name:16} corners {}/{corners} lines {}/{lines} curves {} worst {:.3} mean {:.3} {:?}\n",
            if fine { " " } else { "!" },
            found.corners,
            found.lines,
            found.curves,
            found.worst,
            found.mean,
            taken.notes
        );
    }
    println!("{report}");
    assert!(good, "{report}");
}

#[test]
fn black_and_white_masks_come_back_within_half_a_pixel() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let mut report = String::new();
    let mut good = true;
    for (name, distance, corners, lines) in shapes() {
        if ["disc 6", "small square", "20-gon", "rounded 8"].contains(&name) {
            continue; // too small for the steps of such a mask
        }
        let file = folder.path().join("mask.png");
        draw(&file, 1, &*distance);
        let taken = picture(&file, &READING).expect("a mask");
        let found = measure(&taken.outline, &*distance);
        let fine = found.corners == corners
            && found.lines == lines
            && found.worst < 1.0
            && found.mean < 0.35;
        good &= fine;
        report += &format!(
            "{} {name:16} corners {}/{corners} lines {}/{lines} curves {} worst {:.3} mean {:.3}\n",
            if fine { " " } else { "!" },
            found.corners,
            found.lines,
            found.curves,
            found.worst,
            found.mean
        );
    }
    println!("{report}");
    assert!(good, "{report}");
}

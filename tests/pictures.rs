//! Pictures against closed forms: what is covered, where stripes break, which
//! colour a curvature has, what a legend says.
#![allow(
    clippy::unwrap_used,
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    clippy::cast_sign_loss,
    reason = "a panic is how a test fails; places are inside the picture"
)]

use std::f64::consts::PI;
use std::path::Path;

use chordwise::continuity::Survey;
use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::picture::{
    Curvature, Focus, Picture, PictureOptions, Ramp, Scene, Shading, View, borders, seam_curves,
    to_srgb,
};
use chordwise::sampling::Limits;
use chordwise::scalar::Point;

fn options(shading: Shading, view: View) -> PictureOptions {
    PictureOptions {
        size: (480, 360),
        view,
        focus: Focus::All,
        shading,
        mesh_edges: false,
        range: None,
        lights: 48.0,
        upright: false,
        chord: 0.1,
        proved: 0.1,
    }
}

fn meshed(text: &str, chord: f64) -> (PatchSet, Meshed) {
    let set = PatchSet::from_ron(text, "test.ron").unwrap().set;
    let limits = Limits::new(chord, None, None);
    let made = Meshed::with_evidence(&set, &limits, |_| true, |_| ()).unwrap();
    (set, made)
}

fn draw(text: &str, chord: f64, options: &PictureOptions) -> Picture {
    let (set, made) = meshed(text, chord);
    let scene = Scene::new(&set, &made.mesh).unwrap();
    Picture::draw(&scene, options, &[])
}

const BALL: &str = r#"(name: "ball", patches: [(name: "ball", surface: Sphere(radius: 50))])"#;

#[test]
fn a_ball_covers_its_disc_and_no_more() {
    for view in [View::Front, View::FrontQuarter, View::Bottom] {
        let picture = draw(BALL, 0.01, &options(Shading::Plain, view));
        let radius = 50.0 / picture.camera.pixel;
        let area: f64 = picture.cover.iter().map(|c| f64::from(*c)).sum();
        let disc = PI * radius * radius;
        assert!((area / disc - 1.0).abs() < 2e-3, "{area} against {disc}");
        // The silhouette: along rays from the middle cover ends at the radius.
        let middle = picture.camera.project(&Point::origin());
        for k in 0..64 {
            let (sin, cos) = (f64::from(k) * PI / 32.0).sin_cos();
            let cover = |r: f64| {
                let (x, y) = (middle[0] + r * cos, middle[1] + r * sin);
                picture.cover[y as usize * 480 + x as usize]
            };
            assert!(cover(radius - 1.5) > 0.999, "{k}");
            assert!(cover(radius + 1.5) < 0.001, "{k}");
        }
    }
}

/// Two biquadratic sheets z = -0.002 (x^2 + y^2) that meet along x = y, the
/// second one tilted about that line by `tilt` (rise over run), seen from above.
fn sheets(tilt: f64) -> String {
    let mut text = String::from("(patches: [");
    for (name, side) in [("a", -1.0), ("b", 1.0)] {
        let mut net = Vec::new();
        for i in 0..3 {
            let mut row = Vec::new();
            for j in 0..3 {
                // Along the seam and across it; Bezier points of s^2 over [p, q]
                // are p^2, p q, q^2.
                let (i, j) = (f64::from(i), f64::from(j));
                let (s, t) = (-100.0 + 100.0 * i, 60.0 * j * side);
                let squares = [1e4, -1e4, 1e4][i as usize] + [0.0, 0.0, 1.44e4][j as usize];
                let z = -0.002 * squares + if side > 0.0 { tilt * t } else { 0.0 };
                let h = 0.5_f64.sqrt();
                row.push(format!("({}, {}, {z})", (s + t) * h, (s - t) * h));
            }
            net.push(format!("[{}]", row.join(", ")));
        }
        text += &format!(
            "(name: \"{name}\", flip: {}, surface: Bezier(net: [{}])),",
            side > 0.0,
            net.join(", ")
        );
    }
    text + "])"
}

/// How much brightness differs across the seam, on average along it, two pixels
/// to either side.
fn step_across(tilt: f64) -> f64 {
    let picture = draw(
        &sheets(tilt),
        0.05,
        &options(Shading::Reflection, View::Top),
    );
    let steps: Vec<f64> = (-80..=80)
        .map(|k| {
            let s = f64::from(k) * 0.5_f64.sqrt();
            let z = -0.002 * f64::from(k * k);
            let [x, y, _] = picture.camera.project(&Point::new(s, s, z));
            let bright = |dx: f64, dy: f64| {
                let at = (y + dy) as usize * 480 + (x + dx) as usize;
                f64::from(picture.canvas.pixels[at][1])
            };
            // Up on the picture is +y: the seam runs up to the right. Along a
            // stripe that crosses it brightness is the same.
            (bright(-2.0, 0.0) - bright(2.0, 0.0)).abs()
        })
        .collect();
    steps.iter().sum::<f64>() / steps.len() as f64
}

#[test]
fn reflection_lines_run_on_over_a_tangent_seam_and_break_at_others() {
    let tangent = step_across(0.0);
    let broken = step_across(0.05);
    assert!(tangent < 0.12, "{tangent}");
    assert!(
        broken > 0.25 && broken > 3.0 * tangent,
        "{tangent} {broken}"
    );
}

/// The largest difference of two colours as bytes.
fn apart(a: [u8; 3], b: [u8; 3]) -> u8 {
    (0..3).map(|i| a[i].abs_diff(b[i])).max().unwrap()
}

#[test]
fn curvature_of_a_ball_is_exact_in_every_pixel() {
    for (curvature, value) in [
        (Curvature::Gaussian, 1.0 / 2500.0),
        (Curvature::Mean, -1.0 / 50.0),
        (Curvature::Principal, -1.0 / 50.0),
    ] {
        let picture = draw(
            BALL,
            0.5,
            &options(Shading::Curvature(curvature), View::Left),
        );
        let scale = picture.scale.as_ref().unwrap();
        assert!(scale.low <= value && value <= scale.high);
        let wanted = to_srgb(scale.colour(value));
        let mut seen = 0;
        for (pixel, cover) in picture.canvas.pixels.iter().zip(&picture.cover) {
            if *cover > 0.999 {
                seen += 1;
                assert!(apart(to_srgb(*pixel), wanted) <= 1, "{:?}", to_srgb(*pixel));
            }
        }
        assert!(seen > 20_000);
    }
}

/// A torus from above: at distance d from the axis the tube's angle a has
/// cos a = (d - R) / r, and K = cos a / (r d), H = -(1/r + cos a / d) / 2 for the
/// outward normal (any text on differential geometry).
#[test]
fn curvature_of_a_torus_is_that_of_its_formula() {
    let text = r#"(patches: [(name: "ring", surface: Torus(major: 100, minor: 40))])"#;
    for curvature in [Curvature::Gaussian, Curvature::Mean] {
        let mut asked = options(Shading::Curvature(curvature), View::Top);
        asked.range = Some(match curvature {
            Curvature::Gaussian => [-5e-4, 5e-4],
            _ => [-0.025, 0.025],
        });
        let picture = draw(text, 0.05, &asked);
        let scale = picture.scale.as_ref().unwrap();
        let mut seen = 0;
        for y in (0..360).step_by(3) {
            for x in (0..480).step_by(3) {
                let off = [x as f64 + 0.5 - 240.0, y as f64 + 0.5];
                let middle = picture.camera.project(&Point::new(0.0, 0.0, 40.0));
                let d = off[0].hypot(off[1] - middle[1]) * picture.camera.pixel;
                let cos = (d - 100.0) / 40.0;
                if cos.abs() > 0.9 {
                    continue;
                }
                let value = match curvature {
                    Curvature::Gaussian => cos / (40.0 * d),
                    _ => -(1.0 / 40.0 + cos / d) / 2.0,
                };
                let pixel = to_srgb(picture.canvas.pixels[y * 480 + x]);
                let wanted = to_srgb(scale.colour(value));
                // Colours change by a few steps within a pixel.
                assert!(apart(pixel, wanted) <= 4, "{x} {y} {pixel:?} {wanted:?}");
                seen += 1;
            }
        }
        assert!(seen > 1000, "{seen}");
    }
}

#[test]
fn the_legend_shows_the_colours_of_its_figures() {
    let (set, made) = meshed(BALL, 0.5);
    let scene = Scene::new(&set, &made.mesh).unwrap();
    let mut asked = options(Shading::Curvature(Curvature::Mean), View::Left);
    asked.size = (960, 540);
    asked.range = Some([-0.03, 0.01]);
    let mut picture = Picture::draw(&scene, &asked, &[]);
    let scale = picture.scale.clone().unwrap();
    assert_eq!(scale.ramp, Ramp::Signed);
    approx::assert_relative_eq!(scale.low, -0.03);
    approx::assert_relative_eq!(scale.high, 0.01);
    picture.caption(&scene, &asked, &[]);
    // Some row of the picture has the whole scale from left to right.
    let left = (1.8_f64 * 7.5).round();
    let wide = 0.40 * 960.0;
    let found = (400..540).any(|y| {
        (0..=20).all(|k| {
            let t = (f64::from(k) + 0.5) / 21.0;
            let x = (left + wide * t) as usize;
            let wanted = to_srgb(scale.colour(-0.03 + 0.04 * t));
            apart(to_srgb(picture.canvas.pixels[y * 960 + x]), wanted) <= 2
        })
    });
    assert!(found, "no row of the picture is the scale");
}

fn whole(set: &PatchSet, made: &Meshed, asked: &PictureOptions) -> Vec<u8> {
    let scene = Scene::new(set, &made.mesh).unwrap();
    let mut picture = Picture::draw(&scene, asked, &[]);
    let survey = Survey::of(set, &made.topology);
    let seams = seam_curves(set, &made.topology, &survey, asked.chord);
    picture.borders(&borders(set, &made.topology, |_| true, asked.chord));
    picture.seams(&seams);
    picture.caption(&scene, asked, &seams);
    let mut png = Vec::new();
    picture.canvas.write_png(&mut png).unwrap();
    png
}

#[test]
fn pictures_are_the_same_for_any_number_of_threads() {
    let text = std::fs::read_to_string("patches/nearly_closed.ron").unwrap();
    let (set, made) = meshed(&text, 0.05);
    for shading in [Shading::Plain, Shading::Reflection] {
        let of = |threads: usize| {
            let pool = rayon::ThreadPoolBuilder::new().num_threads(threads);
            let asked = options(shading, View::RearQuarter);
            pool.build().unwrap().install(|| whole(&set, &made, &asked))
        };
        let one = of(1);
        for threads in [2, 5] {
            assert_eq!(one, of(threads), "{threads}");
        }
    }
}

/// The box is twelve triangles whatever the mesher does. `CHORDWISE_REWRITE=1`
/// writes the picture anew, and the test still fails.
#[test]
fn a_small_picture_is_as_it_was() {
    let text = std::fs::read_to_string("patches/box.ron").unwrap();
    let (set, made) = meshed(&text, 0.1);
    let mut asked = options(Shading::Panels, View::FrontQuarter);
    asked.mesh_edges = true;
    let png = whole(&set, &made, &asked);
    let golden = Path::new("tests/golden/box.png");
    if std::env::var_os("CHORDWISE_REWRITE").is_some() {
        std::fs::write(golden, &png).unwrap();
        panic!("tests/golden/box.png is rewritten; look at it and run the test again");
    }
    let decode = |bytes: &[u8]| image::load_from_memory(bytes).unwrap().to_rgb8();
    let (new, old) = (decode(&png), decode(&std::fs::read(golden).unwrap()));
    assert_eq!(new.dimensions(), old.dimensions());
    // Sines differ by a bit between machines; more than that is a change.
    let worst = new
        .iter()
        .zip(old.iter())
        .map(|(a, b)| a.abs_diff(*b))
        .max();
    assert!(worst.unwrap() <= 2, "{worst:?}");
}

//! What the painter must keep: coverage, blending, bands, and calm in the face of nonsense.

use super::super::pixel::{over, pack};
use super::*;
use eframe::egui::epaint::ImageDelta;
use eframe::egui::{Color32, ColorImage, Pos2, TextureId, TextureOptions, pos2, vec2};

const ATLAS: TextureId = TextureId::Managed(0);

/// A painter whose texture has a white corner, and a checker of four by four texels behind it.
fn painter(threads: usize) -> CpuPainter {
    let pixels = (0..64)
        .map(|i| if i == 0 { Color32::WHITE } else { Color32::from_white_alpha((i * 4) as u8) })
        .collect();
    let mut delta = TexturesDelta::default();
    delta.push(ATLAS, ImageDelta::full(ColorImage::new([8, 8], pixels), TextureOptions::LINEAR));
    let mut painter = CpuPainter::with_threads(threads);
    painter.apply_textures(&mut delta);
    painter
}

fn primitive(mesh: Mesh) -> ClippedPrimitive {
    ClippedPrimitive { clip_rect: Rect::EVERYTHING, primitive: Primitive::Mesh(mesh) }
}

fn fan(points: &[Pos2], colours: &[Color32]) -> Mesh {
    let mut mesh = Mesh::default();
    for (p, c) in points.iter().zip(colours.iter().cycle()) {
        mesh.colored_vertex(*p, *c);
    }
    for i in 1..points.len() as u32 - 1 {
        mesh.add_triangle(0, i, i + 1);
    }
    mesh
}

fn painted(threads: usize, size: [usize; 2], scale: f32, meshes: Vec<Mesh>) -> Picture {
    let mut picture = Picture::new(size, [0, 0, 0, 255]);
    let primitives: Vec<ClippedPrimitive> = meshes.into_iter().map(primitive).collect();
    painter(threads).paint(&mut picture, scale, &primitives);
    picture
}

/// A small source of repeatable numbers between 0 and 1 (xorshift).
struct Random(u64);

impl Random {
    fn next(&mut self) -> f32 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 40) as f32 / (1u64 << 24) as f32
    }
}

#[test]
fn translucent_triangles_around_a_point_leave_no_seam_and_no_double() {
    let half = Color32::from_rgba_premultiplied(100, 60, 20, 128);
    let once = over(pack(half.to_array()), pack([0, 0, 0, 255]));
    let mut random = Random(7);
    for _ in 0..40 {
        let centre = pos2(10.0 + 40.0 * random.next(), 10.0 + 40.0 * random.next());
        let mut points = vec![centre];
        points.extend((0..=12).map(|i| {
            let angle = std::f32::consts::TAU * (i % 12) as f32 / 12.0;
            centre + 90.0 * vec2(angle.cos(), angle.sin())
        }));
        let picture = painted(1, [60, 60], 1.0, vec![fan(&points, &[half])]);
        assert!(picture.pixels().iter().all(|p| *p == once), "around {centre:?}");
    }
}

#[test]
fn a_rectangle_covers_the_pixels_whose_centres_it_holds() {
    let mut mesh = Mesh::default();
    mesh.add_colored_rect(Rect::from_min_max(pos2(1.5, 1.4), pos2(3.5, 2.6)), Color32::RED);
    let picture = painted(1, [6, 5], 1.0, vec![mesh]);
    let red = |x, y| picture.rgba_at(x, y) == Some([255, 0, 0, 255]);
    let covered: Vec<(usize, usize)> =
        (0..5).flat_map(|y| (0..6).map(move |x| (x, y))).filter(|&(x, y)| red(x, y)).collect();
    assert_eq!(covered, [(1, 1), (2, 1), (1, 2), (2, 2)]);
}

/// Letters take a short way; the long way must give the same pixels.
#[test]
fn rectangles_and_their_two_triangles_agree() {
    let mut random = Random(11);
    for case in 0..200 {
        let shift = if case % 2 == 0 { 0.0 } else { random.next() };
        let at = pos2((20.0 * random.next()).floor() + shift, (20.0 * random.next()).floor() - 4.0);
        let flat = case % 3 == 0;
        let (size, uv) = if flat {
            (vec2(9.0 * random.next(), 9.0 * random.next()), Rect::from_min_max(Pos2::ZERO, Pos2::ZERO))
        } else {
            (vec2(6.0, 5.0), Rect::from_min_size(pos2(0.125, 0.25), vec2(0.75, 0.625)))
        };
        let colour = Color32::from_rgba_premultiplied(90, 120, 60, 200);
        let mut short = Mesh::with_texture(ATLAS);
        short.add_rect_with_uv(Rect::from_min_size(at, size), uv, colour);
        let mut long = short.clone();
        // The same triangles in another order are no letter.
        long.indices = vec![0, 1, 2, 1, 3, 2];
        let (a, b) = (painted(1, [24, 24], 1.0, vec![short]), painted(1, [24, 24], 1.0, vec![long]));
        let far = a.pixels().iter().zip(b.pixels()).map(|(a, b)| {
            pixel::unpack(*a).iter().zip(pixel::unpack(*b)).map(|(a, b)| a.abs_diff(b)).max().unwrap_or(0)
        });
        assert!(far.max().unwrap_or(0) <= 1, "case {case}");
    }
}

#[test]
fn colours_run_evenly_between_corners() {
    let (black, white) = (Color32::BLACK, Color32::WHITE);
    let points = [pos2(0.0, 0.0), pos2(256.0, 0.0), pos2(256.0, 4.0), pos2(0.0, 4.0)];
    let picture = painted(1, [256, 4], 1.0, vec![fan(&points, &[black, white, white, black])]);
    for y in 0..4 {
        for x in 0..256 {
            // The pixel's centre lies at (x + 1/2)/256 of the way.
            let want = ((x as f32 + 0.5) / 256.0 * 255.0).round();
            let got = f32::from(picture.rgba_at(x, y).unwrap()[0]);
            assert!((got - want).abs() <= 1.0, "{x},{y}: {got} for {want}");
        }
    }
}

/// Channels stay between those of the corners, for slivers too: an overrun would wrap around and glare.
#[test]
fn colours_never_leave_the_range_of_their_corners() {
    let mut random = Random(5);
    for _ in 0..3000 {
        let thin = 10f32.powf(-4.0 * random.next());
        let from = pos2(random.next() * 60.0, random.next() * 60.0);
        let to = pos2(random.next() * 4000.0 - 2000.0, random.next() * 60.0);
        let points = [from, to, to + vec2(thin * random.next(), thin), from + vec2(0.0, thin)];
        let colours = [
            Color32::from_gray(250),
            Color32::from_gray(255),
            Color32::from_gray(252),
            Color32::from_gray(250),
        ];
        let picture = painted(1, [64, 64], 1.0, vec![fan(&points, &colours)]);
        let bad = picture.pixels().iter().find(|p| !matches!(**p & 0xff, 0 | 250..=255));
        assert_eq!(bad, None, "{points:?}");
    }
}

#[test]
fn threads_do_not_change_the_picture() {
    let mut random = Random(3);
    let meshes: Vec<Mesh> = (0..60)
        .map(|_| {
            let points: Vec<Pos2> =
                (0..5).map(|_| pos2(random.next() * 400.0 - 50.0, random.next() * 400.0 - 50.0)).collect();
            let colour = |r: &mut Random| {
                Color32::from_rgba_unmultiplied((r.next() * 255.0) as u8, 90, 200, (r.next() * 255.0) as u8)
            };
            let colours = [colour(&mut random), colour(&mut random)];
            fan(&points, &colours)
        })
        .collect();
    let one = painted(1, [301, 257], 1.25, meshes.clone());
    for threads in [2, 3, 7] {
        assert!(painted(threads, [301, 257], 1.25, meshes.clone()) == one, "{threads} threads");
    }
}

#[test]
fn far_corners_are_cut_not_dropped() {
    // A strip across the picture whose ends are a hundred million pixels away.
    let far = 1e8;
    let points = [pos2(-far, 10.0), pos2(far, 10.0), pos2(far, 20.0), pos2(-far, 20.0)];
    let picture = painted(1, [40, 30], 1.0, vec![fan(&points, &[Color32::WHITE])]);
    for y in 0..30 {
        let white = (10..20).contains(&y);
        assert!((0..40).all(|x| (picture.rgba_at(x, y) == Some([255; 4])) == white), "row {y}");
    }
    // A half-plane whose edge runs through the picture at 45 degrees.
    let points = [pos2(-far, -far), pos2(far, far), pos2(-far, far)];
    let picture = painted(1, [40, 40], 1.0, vec![fan(&points, &[Color32::WHITE])]);
    for (x, y) in [(5, 30), (0, 39), (20, 22), (30, 2), (39, 0), (22, 20)] {
        assert_eq!(picture.rgba_at(x, y) == Some([255; 4]), y > x, "{x},{y}");
    }
}

#[test]
fn nonsense_is_survived() {
    let odd = [f32::NAN, f32::INFINITY, f32::NEG_INFINITY, f32::MAX, f32::MIN, 1e20, -1e9, 0.0, 7.0];
    let mut meshes = Vec::new();
    for a in odd {
        for b in odd {
            let mut mesh = fan(&[pos2(a, b), pos2(b, 5.0), pos2(9.0, a)], &[Color32::WHITE, Color32::RED]);
            mesh.vertices[1].uv = pos2(a, b);
            meshes.push(mesh);
        }
    }
    let mut broken = fan(&[pos2(0.0, 0.0), pos2(9.0, 0.0), pos2(9.0, 9.0)], &[Color32::WHITE]);
    broken.indices.extend([0, 1, 99, 4]);
    meshes.push(broken);
    let mut unknown = fan(&[pos2(0.0, 0.0), pos2(9.0, 0.0), pos2(9.0, 9.0)], &[Color32::WHITE]);
    unknown.texture_id = TextureId::User(9);
    meshes.push(unknown);
    meshes.push(Mesh::default());
    for size in [[0, 0], [1, 1], [0, 9], [31, 7]] {
        for scale in [0.0, -1.0, f32::NAN, f32::INFINITY, 1e-9, 0.3, 1.0, 1e9] {
            painted(2, size, scale, meshes.clone());
        }
    }
    // A finite triangle between two that are not is still painted.
    let good = fan(&[pos2(0.0, 0.0), pos2(50.0, 0.0), pos2(0.0, 50.0)], &[Color32::GREEN]);
    let bad = fan(&[pos2(f32::NAN, 0.0), pos2(50.0, 0.0), pos2(0.0, 50.0)], &[Color32::RED]);
    let picture = painted(1, [8, 8], 1.0, vec![bad.clone(), good, bad]);
    assert!(picture.pixels().iter().all(|p| *p == pack(Color32::GREEN.to_array())));
}

#[test]
fn the_clip_rectangle_is_kept() {
    let mesh =
        fan(&[pos2(0.0, 0.0), pos2(100.0, 0.0), pos2(100.0, 100.0), pos2(0.0, 100.0)], &[Color32::WHITE]);
    let clip_rect = Rect::from_min_max(pos2(2.0, 1.0), pos2(4.0, 3.0));
    let mut picture = Picture::new([10, 10], [0, 0, 0, 255]);
    painter(2).paint(&mut picture, 2.0, &[ClippedPrimitive { clip_rect, primitive: Primitive::Mesh(mesh) }]);
    let white: Vec<usize> = (0..100).filter(|i| picture.pixels()[*i] == u32::MAX).collect();
    let want: Vec<usize> = (2..6).flat_map(|y| (4..8).map(move |x| y * 10 + x)).collect();
    assert_eq!(white, want);
}

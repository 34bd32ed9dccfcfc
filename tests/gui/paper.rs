//! Every picture for paper as PNG: of the size asked for, and not blank.

use crate::harness::{open_sample, state};
use parabound::figure::GaugeMeasure;
use parabound::figure::drawing::{Paper, Subject, drawing};
use parabound::fit::window_study::WindowStudySettings;
use parabound::gui::drawing_to_png;
use std::collections::BTreeMap;

#[test]
fn every_picture_is_painted_at_its_size_and_is_not_blank() {
    let window = open_sample();
    let (_, loaded, settings) = state(&window).document.focused().expect("a curve");
    let mut settings = settings.clone();
    settings.fits.window_study = Some(WindowStudySettings::default());
    let findings = parabound::study::study(&loaded.scan, &settings).expect("a study");
    for (name, subject) in Subject::ALL {
        for dark in [false, true] {
            let measures: &[(&str, GaugeMeasure)] =
                if subject == Subject::Gauge { &GaugeMeasure::ALL } else { &GaugeMeasure::ALL[..1] };
            for (measure, gauge) in measures {
                let paper = Paper { dark, gauge: *gauge, ..Paper::default() };
                let drawing = drawing(&findings, subject, &paper).expect("a picture");
                let png = drawing_to_png(&drawing, 100.0).expect("painted");
                let picture = image::load_from_memory(&png).expect("PNG").to_rgb8();
                // 140 mm at 100 dots an inch.
                assert_eq!(picture.width(), 551, "{name}");
                let mut colours: BTreeMap<[u8; 3], u32> = BTreeMap::new();
                picture.pixels().for_each(|p| *colours.entry(p.0).or_default() += 1);
                let ground = colours.values().copied().max().unwrap_or(0);
                let drawn = 1.0 - f64::from(ground) / f64::from(picture.width() * picture.height());
                assert!(drawn > 0.02 && colours.len() > 30, "{name} {measure}: {drawn} {}", colours.len());
            }
        }
    }
}

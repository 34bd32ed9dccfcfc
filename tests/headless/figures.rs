//! `parabound figure`: SVG read back, PDF and refusals.

use super::{run, scan};
use std::fs;

/// The picture of a scan as written.
fn figure(name: &str, ending: &str, options: &[&str]) -> Vec<u8> {
    let folder = tempfile::tempdir().expect("a folder");
    let out = folder.path().join(format!("f.{ending}"));
    let path = scan(name);
    let mut arguments = vec!["figure", path.to_str().expect("UTF-8"), "--out", out.to_str().expect("UTF-8")];
    arguments.extend_from_slice(options);
    let output = run(&arguments);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    fs::read(out).expect("the picture")
}

/// What an SVG picture holds: texts, names of the series with the number of their parts.
struct Read {
    texts: Vec<String>,
    series: Vec<(String, usize)>,
}

fn read(svg: &[u8]) -> Read {
    let text = std::str::from_utf8(svg).expect("UTF-8");
    let document = roxmltree::Document::parse(text).expect("XML");
    let tag = |name: &'static str| document.descendants().filter(move |n| n.has_tag_name(name));
    let series = tag("g").map(|group| {
        let name = group.children().find(|c| c.has_tag_name("title")).and_then(|t| t.text());
        let parts = group.children().filter(|c| c.has_tag_name("path") || c.has_tag_name("circle")).count();
        (name.expect("a series has a name").to_owned(), parts)
    });
    Read {
        texts: tag("text").filter_map(|t| t.text()).map(str::to_owned).collect(),
        series: series.collect(),
    }
}

const LIH: [&str; 2] = ["--atoms", "7Li,1H"];

/// Every series is there and not empty, in the legend too; both axes have a title with a unit.
#[test]
fn pictures_have_every_series_axis_title_and_legend_entry() {
    let cases: [(&str, &[&str], [&str; 2]); 5] = [
        (
            "curve",
            &["points", "scan", "parabola", "Harmonic", "Morse", "Polynomial 6", "reach"],
            ["bond length / Å", "energy above the minimum / cm⁻¹"],
        ),
        (
            "gauge",
            &["deviation from the parabola", "leading order", "tolerance", "reach", "zero-point amplitude"],
            ["bond length / Å", "deviation / %"],
        ),
        ("residuals", &["Harmonic", "Morse", "Polynomial 6"], ["bond length / Å", "residual / cm⁻¹"]),
        (
            "thermal",
            &["harmonic", "Morse fit", "numerical", "tolerance", "reach", "temperatures listed"],
            ["temperature / K", "heat capacity / J/(mol K)"],
        ),
        (
            "window-study",
            &["harmonic", "degree 4", "degree 8", "Morse", "plateau", "proposed window"],
            ["half width of the window / Å", "ωₑxₑ / cm⁻¹"],
        ),
    ];
    for (what, series, titles) in cases {
        let found = read(&figure("lih_X_A.csv", "svg", &[&LIH[..], &["--what", what]].concat()));
        for name in series {
            let parts: usize = found.series.iter().filter(|s| s.0 == *name).map(|s| s.1).sum();
            assert!(parts > 0, "{what}: nothing drawn of {name} in {:?}", found.series);
            assert_eq!(found.texts.iter().filter(|t| t == name).count(), 1, "{what}: legend of {name}");
        }
        for title in titles {
            assert!(found.texts.iter().any(|t| t == title), "{what}: no {title} in {:?}", found.texts);
        }
    }
    // Residuals too small to be seen beside the harmonic fit's have panels of their own.
    let residuals = read(&figure("lih_X_A.csv", "svg", &[&LIH[..], &["--what", "residuals"]].concat()));
    assert!(residuals.texts.iter().filter(|t| *t == "residual / cm⁻¹").count() > 1);
    let count = |name: &str| residuals.series.iter().filter(|s| s.0 == name).count();
    assert!(count("Polynomial 6") > count("Harmonic"), "{:?}", residuals.series);
    // The thermal picture has a panel a quantity, each with its title and unit, and names the levels it counts.
    let thermal = read(&figure("lih_X_A.csv", "svg", &[&LIH[..], &["--what", "thermal"]].concat()));
    for text in [
        "deviation of q / %",
        "deviation of U / % of kT",
        "population / %",
        "mean bond length / Å",
        "mean square x / 10⁻³ Å²",
        "v = 0",
        "v = 1",
    ] {
        assert!(thermal.texts.iter().any(|t| t == text), "{text} in {:?}", thermal.texts);
    }
    // The temperature stands below both columns, once each.
    assert_eq!(thermal.texts.iter().filter(|t| *t == "temperature / K").count(), 2);
    let ladders = read(&figure("lih_X_A.csv", "svg", &[&LIH[..], &["--what", "ladders"]].concat()));
    for name in ["harmonic", "numerical", "Morse", "Polynomial 6"] {
        assert!(ladders.texts.iter().any(|t| t == name), "{name} in {:?}", ladders.texts);
        let parts: usize = ladders.series.iter().filter(|s| s.0 == name).map(|s| s.1).sum();
        assert!(parts > 3, "{name}: {:?}", ladders.series);
    }
    assert!(ladders.texts.iter().any(|t| t == "energy above the minimum / cm⁻¹"));
    assert!(ladders.texts.iter().any(|t| t == "beyond tolerance"));
    // Harmonic minus numerical at v = 1 of LiH, 46 cm⁻¹ by ω_e x_e (v + ½)² with 23 cm⁻¹ [Huber & Herzberg 1979] less
    // what higher terms take; the picture writes it over the rung.
    let off = |t: &String| t.strip_prefix('+').and_then(|n| n.parse::<f64>().ok());
    assert!(ladders.texts.iter().filter_map(off).any(|d| (45.0..60.0).contains(&d)), "{:?}", ladders.texts);
}

/// Every fit has its row with three marks at least and its distance in AICc; the sentence stands below.
#[test]
fn the_comparison_shows_every_fit() {
    let fits = ["--what", "comparison", "--fits", "harmonic,morse,polynomial:6,varshni,extended_morse:3"];
    let found = read(&figure("lih_X_A.csv", "svg", &[&LIH[..], &fits].concat()));
    for name in ["Harmonic", "Morse", "Polynomial 6", "Varshni", "Extended Morse 3"] {
        let parts: usize = found.series.iter().filter(|s| s.0 == name).map(|s| s.1).sum();
        assert!(parts >= 4, "{name}: {:?}", found.series);
        assert!(found.texts.iter().any(|t| t == name), "{name} in {:?}", found.texts);
    }
    for text in ["ΔAICc", "energy missed / cm⁻¹", "rms residual", "rms outside the window"] {
        assert!(found.texts.iter().any(|t| t == text), "{text} in {:?}", found.texts);
    }
    let words = found.texts.join(" ");
    assert!(words.contains("support"), "{words}");
}

/// The gauge measures energy and force, in percent and in wavenumbers, with the turning points of the levels.
#[test]
fn the_gauge_has_four_measures() {
    for (measure, title) in [
        ("energy", "deviation / %"),
        ("energy-cm-1", "deviation / cm⁻¹"),
        ("force", "force deviation / %"),
        ("force-cm-1", "force deviation / cm⁻¹/Å"),
    ] {
        let options = [&LIH[..], &["--what", "gauge", "--gauge", measure]].concat();
        let found = read(&figure("lih_X_A.csv", "svg", &options));
        assert!(found.texts.iter().any(|t| t == title), "{title} in {:?}", found.texts);
        for name in ["deviation from the parabola", "leading order", "reach", "turning points of the levels"]
        {
            let parts: usize = found.series.iter().filter(|s| s.0 == name).map(|s| s.1).sum();
            assert!(parts > 0, "{measure}: nothing drawn of {name} in {:?}", found.series);
        }
    }
}

/// The size is what was asked for; levels carry their number; two runs give the same bytes.
#[test]
fn size_levels_and_bytes() {
    let options = [&LIH[..], &["--width-mm", "84", "--font-pt", "7.5", "--view", "whole-well"]].concat();
    let picture = figure("lih_X_A.csv", "svg", &options);
    assert_eq!(picture, figure("lih_X_A.csv", "svg", &options));
    let text = String::from_utf8(picture.clone()).expect("UTF-8");
    assert!(text.contains("width=\"84mm\"") && text.contains("font-size=\"7.5\""));
    assert!(read(&picture).texts.iter().any(|t| t == "v = 0"));
    let dark = figure("lih_X_A.csv", "svg", &[&LIH[..], &["--theme", "dark"]].concat());
    assert!(String::from_utf8(dark).expect("UTF-8").contains("#12161b"));
}

/// Follows startxref and the table it points at to every object in use; returns how many there are.
fn references_checked(pdf: &[u8]) -> usize {
    let find = |needle: &[u8], from: usize| {
        pdf[from..].windows(needle.len()).position(|w| w == needle).map(|i| from + i)
    };
    let number = |at: usize| -> usize {
        let digits: String = pdf[at..].iter().map(|b| *b as char).take_while(char::is_ascii_digit).collect();
        digits.parse().expect("a number")
    };
    let start = (0..pdf.len()).rev().find(|&i| pdf[i..].starts_with(b"startxref")).expect("startxref");
    let table = number(start + 10);
    assert!(pdf[table..].starts_with(b"xref"), "startxref points at the table");
    let trailer = find(b"trailer", table).expect("trailer");
    let lines = std::str::from_utf8(&pdf[table..trailer]).expect("ASCII");
    let mut objects = 0;
    for (index, line) in
        lines.lines().skip(2).enumerate().skip(1).filter(|(_, l)| l.ends_with(" n ") || l.ends_with(" n"))
    {
        let offset: usize = line[..10].parse().expect("an offset");
        let head = format!("{index} 0 obj");
        assert!(pdf[offset..].starts_with(head.as_bytes()), "object {index} at {offset}");
        assert!(find(b"endobj", offset).is_some());
        objects += 1;
    }
    objects
}

/// Where the viewer is installed the page is painted, at its size and not blank; elsewhere the structure has to do.
fn opens_in_pdftoppm(pdf: &[u8], what: &str) {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("f.pdf");
    fs::write(&path, pdf).expect("written");
    let painted = std::process::Command::new("pdftoppm").args(["-r", "72", "-gray"]).arg(&path).output();
    let Ok(painted) = painted else {
        println!("pdftoppm is not installed; {what} was checked by its structure only");
        return;
    };
    assert!(painted.status.success(), "{what}: {}", String::from_utf8_lossy(&painted.stderr));
    let picture = painted.stdout;
    assert!(picture.starts_with(b"P5"), "{what}");
    let grey: std::collections::BTreeSet<u8> = picture[picture.len() / 4..].iter().copied().collect();
    assert!(grey.len() > 10, "{what} is blank");
}

#[test]
fn a_pdf_is_one_page_with_its_face() {
    let pdf = figure("lih_X_A.csv", "pdf", &LIH);
    assert!(pdf.starts_with(b"%PDF-1.6") && pdf.ends_with(b"%%EOF\n"));
    let has = |needle: &[u8]| pdf.windows(needle.len()).any(|w| w == needle);
    // 140 mm are 396.85 points.
    assert!(has(b"/MediaBox [0 0 396.85") && has(b"/FontFile3") && has(b"/ToUnicode"));
    // Every picture: the cross-reference table points at the objects it names, and every object is closed.
    for what in ["curve", "gauge", "residuals", "ladders", "thermal", "window-study", "comparison"] {
        let pdf = figure("lih_X_A.csv", "pdf", &[&LIH[..], &["--what", what]].concat());
        let objects = references_checked(&pdf);
        assert!(objects > 5, "{what}: {objects} objects");
        opens_in_pdftoppm(&pdf, what);
    }
}

#[test]
fn refusals_of_pictures() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = scan("hcl_clean.csv");
    let path = path.to_str().expect("UTF-8");
    let at = |name: &str| folder.path().join(name).to_str().expect("UTF-8").to_owned();
    let status = |more: &[&str]| run(&[&["figure"], more].concat()).status.code();
    assert_eq!(status(&[path]), Some(2), "nowhere to go");
    assert_eq!(status(&[path, "--out", &at("f.gif")]), Some(2));
    assert_eq!(status(&[path, path, "--out", &at("f.svg")]), Some(2));
    assert_eq!(status(&[path, "--out", &at("f.svg"), "--what", "cake"]), Some(2));
    assert_eq!(status(&["none.csv", "--out", &at("f.svg")]), Some(3));
    assert_eq!(status(&[path, "--out", &at("f.svg"), "--what", "ladders"]), Some(4), "no mass, no levels");
    assert_eq!(status(&[path, "--out", &at("f.svg"), "--width-mm", "40", "--font-pt", "20"]), Some(4));
    let png = if cfg!(feature = "gui") { Some(0) } else { Some(3) };
    assert_eq!(
        status(&[path, "--out", &at("f.png"), "--dpi", "72"]),
        png,
        "painted where there is a painter"
    );
    // Without levels there still is a curve; and nothing is replaced unasked.
    assert_eq!(status(&[path, "--out", &at("f.svg")]), Some(0));
    assert_eq!(status(&[path, "--out", &at("f.svg")]), Some(3));
    assert_eq!(status(&[path, "--out", &at("f.svg"), "--overwrite"]), Some(0));
}

/// With a J the curve is drawn with its effective potential, and the quasi-bound levels apart from the bound ones.
#[test]
fn the_curve_and_the_ladders_are_drawn_for_a_j() {
    let with = |more: [&'static str; 2]| [&LIH[..], &["--show-j", "20"], &more].concat();
    let found = read(&figure("lih_X_A.csv", "svg", &with(["--view", "whole-well"])));
    for name in ["scan", "effective, J = 20", "quasi-bound", "tunnelling"] {
        let parts: usize = found.series.iter().filter(|s| s.0 == name).map(|s| s.1).sum();
        assert!(parts > 0, "nothing drawn of {name} in {:?}", found.series);
    }
    // The highest bound level stands under the barrier with its number.
    assert!(found.texts.iter().any(|t| t == "v = 0"), "{:?}", found.texts);
    let ladders = read(&figure("lih_X_A.csv", "svg", &with(["--what", "ladders"])));
    assert!(ladders.series.iter().any(|s| s.0 == "J = 20" && s.1 > 4), "{:?}", ladders.series);
    // Without a mass there is nothing that rotates, and it is said.
    let folder = tempfile::tempdir().expect("a folder");
    let plain = folder.path().join("plain.csv");
    // Invented: a parabola.
    let rows: Vec<String> = (0..12)
        .map(|i| f64::from(i) * 0.05)
        .map(|x| format!("{:.2},{:.6}", 1.0 + x, (x - 0.25) * (x - 0.25)))
        .collect();
    fs::write(&plain, format!("R_angstrom,E_hartree\n{}\n", rows.join("\n"))).expect("written");
    let out = folder.path().join("f.svg");
    let output = run(&[
        "figure",
        plain.to_str().expect("UTF-8"),
        "--show-j",
        "3",
        "--out",
        out.to_str().expect("UTF-8"),
    ]);
    assert_eq!(output.status.code(), Some(4));
    assert!(String::from_utf8_lossy(&output.stderr).contains("no effective potential"));
}

/// The spacings of the levels with the straight line through them.
#[test]
fn the_spacings_are_drawn_with_their_line() {
    let found = read(&figure("h2_fci.csv", "svg", &["--what", "birge-sponer"]));
    for name in ["straight line", "spacings"] {
        let parts: usize = found.series.iter().filter(|s| s.0 == name).map(|s| s.1).sum();
        assert!(parts > 0, "nothing drawn of {name} in {:?}", found.series);
    }
    for text in ["v + ½", "spacing / cm⁻¹"] {
        assert!(found.texts.iter().any(|t| t == text), "{text} in {:?}", found.texts);
    }
}

//! The report: one self-contained HTML page with picture, sentence, constants, fits, levels, notices and how
//! it was made. It opens in any browser, offline, and prints on paper.

use crate::export::json::findings_to_value;
use crate::export::parameters::{ParameterUnits, rows as parameter_rows};
use crate::figure::drawing::{Paper, Subject, drawing};
use crate::figure::rows::{Row, curve_rows, energy_rows, short_reach_rows};
use crate::figure::typography::typographic;
use crate::figure::{fit_label, number, svg};
use crate::findings::{Findings, FitFindings};
use crate::notice::Severity;
use crate::units::to_per_cm;
use std::fmt::Write as _;

/// Levels listed; a findings file holds all of them.
const MOST_LEVELS: usize = 12;
/// Width of the pictures in mm, and their font size in points.
const WIDTH_MM: f64 = 170.0;
const FONT_PT: f64 = 9.0;

const STYLE: &str = "\
@page{size:A4;margin:16mm}\
body{font:13px/1.45 Inter,'Helvetica Neue',Helvetica,Arial,'Liberation Sans','DejaVu Sans',sans-serif;\
color:#1c232d;background:#fff;max-width:178mm;margin:8mm auto;padding:0 4mm}\
h1{font-size:15px;font-weight:600;margin:0;color:#56616f}\
h2{font-size:12.5px;font-weight:600;color:#56616f;margin:18px 0 4px;border-bottom:1px solid #d8d4ca;padding-bottom:3px}\
p.sentence{font-size:17px;font-weight:600;line-height:1.4;margin:6px 0 10px}\
svg{width:100%;height:auto;display:block}\
table{border-collapse:collapse;font-variant-numeric:tabular-nums;width:100%}\
td,th{padding:2px 10px 2px 0;text-align:right;vertical-align:baseline;white-space:nowrap}\
.words{white-space:normal;text-align:left;padding-left:14px}\
td:first-child,th:first-child{text-align:left}\
th{font-weight:400;color:#56616f;border-bottom:1px solid #e8e4db}\
td.unit{text-align:left;color:#56616f;width:1%;white-space:nowrap}\
.two{display:grid;grid-template-columns:1fr 1fr;gap:0 10mm}\
.dim{color:#56616f}\
ul{padding-left:18px;margin:4px 0}\
pre{white-space:pre-wrap;overflow-wrap:anywhere;font-size:11px;color:#56616f}\
section{break-inside:avoid}\
article+article{break-before:page;margin-top:24mm}";

/// The page, one study after the other.
///
/// Parts that a study does not have are left out; an impossible study has its sentence, its notices and
/// its source.
pub fn report(studies: &[&Findings]) -> String {
    let mut out = String::from("<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n");
    let names: Vec<String> = studies.iter().map(|f| name(f)).collect();
    let title = escaped(&names.join(", "));
    let _ = writeln!(out, "<title>{title}</title>\n<style>{STYLE}</style>\n</head>\n<body>");
    for findings in studies {
        out.push_str("<article>\n");
        article(&mut out, findings);
        out.push_str("</article>\n");
    }
    out.push_str("</body>\n</html>\n");
    out
}

fn name(findings: &Findings) -> String {
    format!("{} · {}", findings.source.file_name, findings.source.curve_label)
}

fn article(out: &mut String, findings: &Findings) {
    let _ = writeln!(out, "<h1>{}{}</h1>", escaped(&name(findings)), molecule(findings));
    let sentence = typographic(&crate::verdict::sentence(findings));
    let _ = writeln!(out, "<p class=\"sentence\">{}</p>", escaped(&sentence));
    pictures(out, findings);
    out.push_str("<div class=\"two\">\n");
    rows_section(out, "Constants", "from derivatives · from levels", &curve_rows(findings));
    out.push_str("<div>\n");
    rows_section(out, "Energies", "", &energy_rows(findings));
    rows_section(out, "Reach of the parabola", "", &short_reach_rows(findings));
    out.push_str("</div>\n</div>\n");
    fits(out, findings);
    levels(out, findings);
    notices(out, findings);
    making(out, findings);
}

fn molecule(findings: &Findings) -> String {
    let Some(masses) = &findings.masses else { return String::new() };
    let atoms = masses.atoms.as_ref().map_or_else(String::new, |atoms| {
        let name = |a: &crate::species::Atom| format!("<sup>{}</sup>{}", a.mass_number, escaped(&a.symbol));
        format!(" · {}", atoms.iter().map(name).collect::<String>())
    });
    format!("{atoms} · reduced mass {} u", crate::digits::rounded(masses.reduced_mass_u.value, 8))
}

fn pictures(out: &mut String, findings: &Findings) {
    let paper = Paper { width_mm: WIDTH_MM, font_pt: FONT_PT, ..Paper::default() };
    for subject in [Subject::Curve, Subject::Gauge] {
        // A study without this picture has its reason among the notices.
        if let Ok(drawing) = drawing(findings, subject, &paper) {
            let text = svg::svg(&drawing);
            let start = text.find("<svg").unwrap_or(0);
            let _ = writeln!(out, "<section>{}</section>", &text[start..]);
        }
    }
}

fn rows_section(out: &mut String, heading: &str, about: &str, rows: &[Row]) {
    if rows.is_empty() {
        return;
    }
    let _ = writeln!(out, "<section><h2>{heading} <span class=\"dim\">{about}</span></h2><table>");
    let two = rows.iter().any(|r| r.second.as_deref().is_some_and(|s| !s.is_empty()));
    for row in rows {
        let second = row.second.as_deref().unwrap_or_default();
        let second = if two { format!("<td class=\"dim\">{}</td>", escaped(second)) } else { String::new() };
        let _ = writeln!(
            out,
            "<tr title=\"{}\"><td>{}</td><td>{}</td>{second}<td class=\"unit\">{}</td></tr>",
            escaped(&row.about),
            escaped(&row.label),
            escaped(&row.value),
            row.unit
        );
    }
    out.push_str("</table></section>\n");
}

fn fits(out: &mut String, findings: &Findings) {
    if findings.fits.is_empty() || findings.curve.is_none() {
        return;
    }
    let mut about = String::new();
    if let Some(window) = findings.window() {
        let w = window.converted(crate::units::LengthUnit::Angstrom);
        about = format!("window {} to {} Å", number::fixed(w.from, 4), number::fixed(w.to, 4));
    }
    let _ = writeln!(
        out,
        "<section><h2>Fits <span class=\"dim\">{about}</span></h2><table>\
         <tr><th>family</th><th>points</th><th>rms / cm⁻¹</th><th>largest / cm⁻¹</th><th class=\"words\">parameters</th></tr>"
    );
    for fit in &findings.fits {
        fit_row(out, fit);
    }
    out.push_str("</table></section>\n");
}

fn fit_row(out: &mut String, fit: &FitFindings) {
    let label = escaped(&fit_label(fit));
    let _ = match &fit.result {
        Err(error) => writeln!(
            out,
            "<tr><td>{label}</td><td class=\"words\" colspan=\"4\">no fit: {}</td></tr>",
            escaped(&typographic(&error.to_string()))
        ),
        Ok(result) => {
            let per_cm = |hartree: f64| number::fixed(to_per_cm(hartree), 3);
            let list: Vec<String> = parameter_rows(result, &ParameterUnits::default())
                .into_iter()
                .map(|(name, value, unit)| {
                    let unit = if unit == "1" { String::new() } else { format!(" {unit}") };
                    typographic(&format!("{name} = {value}{unit}"))
                        .replace("angstrom", "Å")
                        .replace(' ', "\u{a0}")
                })
                .collect();
            writeln!(
                out,
                "<tr><td>{label}</td><td>{}</td><td>{}</td><td>{}</td><td class=\"words\">{}</td></tr>",
                result.points,
                per_cm(result.rms_residual_hartree),
                per_cm(result.largest_residual_hartree),
                escaped(&list.join(", "))
            )
        }
    };
}

fn levels(out: &mut String, findings: &Findings) {
    if findings.levels.is_empty() {
        return;
    }
    let count = findings.levels.len();
    let shown = count.min(MOST_LEVELS);
    let about = if shown < count { format!("the lowest {shown} of {count}") } else { String::new() };
    let _ = writeln!(
        out,
        "<section><h2>Levels <span class=\"dim\">{about}</span></h2><table><tr><th>v</th><th>E − Vₑ / cm⁻¹</th>\
         <th>E − harmonic / cm⁻¹</th><th>E − Morse / cm⁻¹</th><th>Bᵥ / cm⁻¹</th><th>beyond turning points</th>\
         <th>in the reach</th></tr>"
    );
    for level in findings.levels.iter().take(MOST_LEVELS) {
        let none = || number::NONE.to_owned();
        let _ = writeln!(
            out,
            "<tr><td>{}{}</td><td>{}</td><td>{}</td><td>{}</td><td>{}</td><td>{}</td><td>{}</td></tr>",
            level.v,
            if level.leans_on_tail { " ○" } else { "" },
            number::with_error_capped(level.energy_per_cm, level.energy_error_per_cm, 3),
            number::signed(level.minus_harmonic_per_cm, 2),
            level.minus_morse_per_cm.map_or_else(none, |d| number::signed(d, 2)),
            number::fixed(level.b_v_per_cm, 5),
            number::percent(level.forbidden_probability, 1),
            level.inside_reach.map_or_else(none, |p| number::percent(p, 1)),
        );
    }
    out.push_str("</table>");
    if findings.levels.iter().take(MOST_LEVELS).any(|l| l.leans_on_tail) {
        out.push_str("<p class=\"dim\">○ leans on the curve beyond the scan.</p>");
    }
    out.push_str("</section>\n");
}

fn notices(out: &mut String, findings: &Findings) {
    if findings.notices.is_empty() {
        return;
    }
    out.push_str("<section><h2>Notices</h2><ul>\n");
    for notice in &findings.notices {
        let word = match notice.severity {
            Severity::Stop => "<b>Stop:</b> ",
            Severity::Caution => "<b>Caution:</b> ",
            Severity::Info => "",
        };
        let _ = writeln!(out, "<li>{word}{}</li>", escaped(&typographic(&notice.text)));
    }
    out.push_str("</ul></section>\n");
}

/// Source, points set aside, settings, program.
fn making(out: &mut String, findings: &Findings) {
    let source = &findings.source;
    let used = source.points.iter().filter(|p| p.used).count();
    let _ = writeln!(
        out,
        "<section><h2>How it was made</h2><p>{}, energies of {}; {used} of {} points in use. SHA-256 of the \
         file: <span class=\"dim\">{}</span>. Made by parabound {}.</p>",
        escaped(&source.file_name),
        escaped(&source.curve),
        source.points.len(),
        source.sha256,
        env!("CARGO_PKG_VERSION")
    );
    let aside: Vec<String> = source
        .points
        .iter()
        .filter(|p| !p.used)
        .map(|p| {
            let why = p.why_not.as_deref().unwrap_or("not used");
            format!("<li>{} {}: {}</li>", p.r_as_read, source.length_unit.name(), escaped(why))
        })
        .collect();
    if !aside.is_empty() {
        let _ = writeln!(out, "<p>Not used:</p><ul>{}</ul>", aside.concat());
    }
    out.push_str("</section>\n");
    let settings = format!("{:#}", findings_to_value(findings)["settings"]);
    let _ =
        writeln!(out, "<details><summary>All settings</summary><pre>{}</pre></details>", escaped(&settings));
}

/// Text between tags and in quoted attributes.
fn escaped(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scan::read::read_scan;
    use crate::settings::Settings;

    fn page(text: &str) -> (Findings, String) {
        let scan = read_scan("a <b>.csv", text.as_bytes(), &Default::default()).expect("a scan");
        let mut settings = Settings::default();
        settings.masses.atoms = Some(crate::species::parse_atoms("1H,1H").expect("atoms"));
        let findings = crate::study::study(&scan, &settings).expect("a study");
        let page = report(&[&findings]);
        (findings, page)
    }

    /// Invented numbers: a Morse curve.
    fn morse() -> String {
        let row = |i: u32| {
            let r = 0.9 + 0.05 * f64::from(i);
            format!("{r:.2},{:.9}\n", 0.17 * (1.0 - (-1.1 * (r - 1.4)).exp()).powi(2))
        };
        format!("r_bohr,E_hartree\n{}", (0..40).map(row).collect::<String>())
    }

    #[test]
    fn the_page_has_every_part_and_is_well_formed() {
        let (findings, page) = page(&morse());
        assert!(!findings.levels.is_empty());
        // The page but for its document type is XML.
        let xml = page.replace("<!DOCTYPE html>\n", "").replace("<meta charset=\"utf-8\">", "");
        let document = roxmltree::Document::parse(&xml).expect("well formed");
        let headings: Vec<String> = document
            .descendants()
            .filter(|n| n.has_tag_name("h2"))
            .filter_map(|n| n.text().map(|t| t.trim().to_owned()))
            .collect();
        for heading in ["Constants", "Energies", "Reach of the parabola", "Fits", "Levels", "How it was made"]
        {
            assert!(headings.iter().any(|h| h == heading), "{headings:?}");
        }
        let pictures = document.descendants().filter(|n| n.tag_name().name() == "svg").count();
        assert_eq!(pictures, 2);
        assert!(page.contains("a &lt;b&gt;.csv") && page.contains(&findings.source.sha256));
        // Nothing is fetched from anywhere.
        assert!(!page.contains("href") && !page.contains("src="));
    }

    #[test]
    fn an_impossible_study_says_why() {
        let rows: String =
            (0..12).map(|i| format!("{},{}\n", 1.0 + 0.1 * f64::from(i), -0.01 * f64::from(i))).collect();
        let (findings, page) = page(&format!("r_bohr,E_hartree\n{rows}"));
        assert!(findings.impossible());
        assert!(page.contains("<b>Stop:</b>") && !page.contains("<h2>Levels"));
    }
}

//! Options that were given and change nothing here: each gets a word, none stops anything. Those that would change
//! numbers with another option beside them are refused instead.

use super::{Command, FigureArgs};
use crate::figure::drawing::Subject;
use std::collections::BTreeSet;

/// Option, what it needs one of, and whether a settings file may hold that.
type Need = (&'static str, &'static [&'static str], bool);

const OF_STUDY: [Need; 5] = [
    ("lambda", &["rotation", "thermal-rotation", "show-j"], true),
    ("repeat", &["timings"], false),
    ("parameter-energy-unit", &["parameters"], false),
    ("parameter-length-unit", &["parameters"], false),
    ("overwrite", &["out", "out-dir", "table", "report", "parameters", "picture"], false),
];

const OF_WINDOW: [Need; 2] = [("size", &["picture"], false), ("scale", &["picture"], false)];

/// What a dry run does not do.
const WRITTEN: [&str; 6] = ["out", "out-dir", "table", "report", "parameters", "timings"];

/// One sentence for each option given that changes nothing here.
pub(super) fn without_effect(command: &Command, given: &BTreeSet<String>) -> Vec<String> {
    let has = |name: &str| given.contains(name);
    let needs = |list: &[Need]| -> Vec<String> {
        list.iter()
            .filter(|(option, others, in_settings)| {
                has(option) && !others.iter().any(|o| has(o)) && !(*in_settings && has("settings"))
            })
            .map(|(option, others, _)| {
                let others: Vec<String> = others.iter().map(|o| format!("--{o}")).collect();
                format!("--{option} has no effect without {}", others.join(" or "))
            })
            .collect()
    };
    let mut words = needs(&OF_STUDY);
    match command {
        Command::Study(arguments) if arguments.dry_run => {
            let idle = WRITTEN.into_iter().filter(|name| has(name));
            words.extend(
                idle.map(|name| format!("--{name} has no effect with --dry-run: nothing is computed")),
            );
        }
        Command::Window(_) => {
            words.extend(needs(&OF_WINDOW));
            if has("picture") && has("renderer") {
                words.push("--renderer has no effect with --picture: no window opens".to_owned());
            }
        }
        Command::Figure(arguments) => words.extend(of_figure(arguments, given)),
        _ => {}
    }
    words
}

fn of_figure(arguments: &FigureArgs, given: &BTreeSet<String>) -> Vec<String> {
    let what = Subject::ALL.iter().find(|(_, s)| *s == arguments.subject).map_or("", |(name, _)| name);
    let only = |option: &str, subjects: &[Subject]| {
        let idle = given.contains(option) && !subjects.contains(&arguments.subject);
        idle.then(|| format!("--{option} has no effect on --what {what}"))
    };
    let mut words: Vec<String> = [
        only("gauge", &[Subject::Gauge]),
        only("view", &[Subject::Curve, Subject::Ladders, Subject::Gauge]),
        only("show-j", &[Subject::Curve, Subject::Ladders]),
    ]
    .into_iter()
    .flatten()
    .collect();
    let is_png = arguments.out.extension().is_some_and(|e| e.eq_ignore_ascii_case("png"));
    if given.contains("dpi") && !is_png {
        words.push("--dpi has no effect on a picture that is not PNG".to_owned());
    }
    words
}

#[cfg(test)]
mod tests {
    use super::super::parse_with_remarks;

    fn remarks(line: &str) -> Vec<String> {
        parse_with_remarks(line.split(' ').map(Into::into)).expect("fine").1
    }

    #[test]
    fn an_option_without_effect_gets_a_word_and_one_with_effect_none() {
        for (line, option) in [
            ("study a --lambda 1", "--lambda"),
            ("study a --repeat 3", "--repeat"),
            ("study a --parameter-energy-unit eV", "--parameter-energy-unit"),
            ("study a --overwrite", "--overwrite"),
            ("study a --dry-run --out f.json", "--out"),
            ("a --size 400x300", "--size"),
            ("a --picture f.png --renderer cpu", "--renderer"),
            ("figure a --out f.svg --dpi 100", "--dpi"),
            ("figure a --out f.svg --what thermal --show-j 3", "--show-j"),
            ("figure a --out f.svg --gauge force", "--gauge"),
        ] {
            let found = remarks(line);
            assert_eq!(found.len(), 1, "{line}: {found:?}");
            assert!(found[0].starts_with(&format!("{option} has no effect")), "{line}: {found:?}");
        }
        for line in [
            "study a --lambda 1 --rotation 1-3",
            "study a --lambda 1 --settings s.json",
            "study a --repeat 3 --timings",
            "study a --out f.json --overwrite",
            "study a --dry-run",
            "a --picture f.png --size 400x300 --scale 2 --overwrite",
            "figure a --out f.png --dpi 100 --show-j 3 --lambda 1",
            "figure a --out f.svg --what gauge --gauge force --view whole-well",
            "a b",
        ] {
            assert!(remarks(line).is_empty(), "{line}: {:?}", remarks(line));
        }
    }
}

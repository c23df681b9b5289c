//! The explainer against a generator of mistakes that shares no formula with it (generator.rs).
//!
//! What must hold: the right mistake is first, or in the first tie, in at least 95 % of the cases with one mistake and 85 % of
//! those with two; no clean delivery is called wrong; no wrong one is called right. Effects of at least three rounding steps.
//! A small share runs here; everything, and the table of DEVELOPERS.md, by
//! `RUSTFLAGS="--cfg exhaustive" cargo test --release --features files --test check`.
#![cfg(feature = "files")]
#![allow(clippy::disallowed_methods, reason = "made-up signals and textbook formulas need no pinned arithmetic")]

mod generator;
mod mistakes;

use std::collections::BTreeMap;
use std::io::Read;

use generator::{Constants, Dice, Digits, Recording, SCENES, Scene};
use mistakes::{Mistake, of_scene};
use ohmwright::check::{Checked, MISTAKES, Verdict, check};
use ohmwright::recording::{RecordingError, Rows};
use ohmwright::sheet::Sheet;

struct Text<'a>(&'a [u8]);

impl Rows for Text<'_> {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(self.0))
    }

    fn name(&self) -> &str {
        "delivered.csv"
    }

    fn is_file(&self) -> bool {
        true
    }
}

fn checked(scene: Scene, delivered: &str) -> Checked {
    let sheet = Sheet::read("sheet.toml", &scene.sheet()).unwrap_or_else(|e| panic!("{scene:?}\n{e}"));
    let report = check(&sheet, &mut Text(delivered.as_bytes()), &mut |_| unreachable!(), &mut |_| {})
        .unwrap_or_else(|e| panic!("{scene:?}: {e}"));
    report.channels.into_iter().find(|c| c.name == scene.channel()).unwrap()
}

/// Rounding that the scene is delivered with: decimals.
fn decimals(scene: Scene, coarse: bool) -> usize {
    let fine = match scene {
        Scene::RosetteAngle | Scene::Stress | Scene::RosetteStress => 2,
        _ if scene.is_strain() => 1,
        _ => 2,
    };
    if coarse { fine - 1 } else { fine }
}

/// One delivery and what came of it.
#[derive(Default, Clone, Copy)]
struct Score {
    cases: u32,
    right: u32,
    /// First of all, not merely in the first tie.
    first: u32,
    called_right: u32,
    tied: u32,
}

impl Score {
    fn share(&self) -> f64 {
        f64::from(self.right) / f64::from(self.cases.max(1))
    }
}

struct Case {
    recording: Recording,
    decimals: usize,
    seed: u64,
}

impl Case {
    fn new(scene: Scene, seed: u64, rows: usize) -> Self {
        let mut dice = Dice::new(seed.wrapping_mul(0x5851_f42d_4c95_7f2d) ^ scene as u64);
        let noise = if seed.is_multiple_of(2) { 0.0 } else { 0.5 };
        let recording = Recording::new(scene, rows, noise, &mut dice);
        Self { recording, decimals: decimals(scene, seed % 4 >= 2), seed }
    }

    fn step(&self) -> f64 {
        10f64.powi(-(self.decimals as i32))
    }

    /// Values with these mistakes, and the constants.
    fn made(&self, all: &[&Mistake]) -> (Constants, Vec<f64>) {
        let mut c = Constants::right();
        let mut values = self.recording.made(&c);
        for mistake in all {
            // each mistake has dice of its own, so that it is the same alone and in company
            let own = mistake.id.bytes().fold(self.seed, |h, b| h.wrapping_mul(31).wrapping_add(u64::from(b)));
            (mistake.make)(&mut c, &mut Dice::new(own), &self.recording, &values);
            values = self.recording.made(&c);
        }
        (c, values)
    }

    /// Largest difference of what would be printed, in steps.
    fn apart(&self, a: &(Constants, Vec<f64>), b: &(Constants, Vec<f64>)) -> f64 {
        let read = |(c, values): &(Constants, Vec<f64>)| -> Vec<f64> {
            let text = self.recording.delivery(values, c, self.decimals);
            text.lines().skip(1).map(|l| l.rsplit(',').next().unwrap().parse().unwrap_or(f64::NAN)).collect()
        };
        let (a, b) = (read(a), read(b));
        let most = a.iter().zip(&b).map(|(a, b)| (a - b).abs()).filter(|d| d.is_finite()).fold(0.0, f64::max);
        most / self.step()
    }

    /// Runs one delivery; `None` where an effect is too small to count.
    fn run(&self, all: &[&Mistake]) -> Option<(String, Checked)> {
        let made = self.made(all);
        // two that cancel make a delivery that is right: swapped outer grids, and the direction counted from y
        if self.apart(&made, &self.made(&[])) < 3.0 {
            return None;
        }
        // without either of them
        for k in 0..all.len() {
            let others: Vec<&Mistake> = all.iter().enumerate().filter(|(i, _)| *i != k).map(|(_, m)| *m).collect();
            let without = self.made(&others);
            if self.apart(&made, &without) < 3.0 || made.1.iter().filter(|v| v.is_finite()).count() < 40 {
                return None;
            }
        }
        let mut ids: Vec<&str> = all.iter().map(|m| m.id).collect();
        let place = |id: &str| MISTAKES.iter().position(|m| m.id == id).unwrap();
        ids.sort_by_key(|id| place(id));
        let delivered = self.recording.delivery(&made.1, &made.0, self.decimals);
        Some((ids.join("+"), checked(self.recording.scene, &delivered)))
    }
}

/// The same two in any order.
fn same(a: &str, b: &str) -> bool {
    let sorted = |text: &str| {
        let mut ids: Vec<String> = text.split('+').map(str::to_string).collect();
        ids.sort();
        ids
    };
    sorted(a) == sorted(b)
}

fn score(score: &mut Score, id: &str, found: &Checked) -> bool {
    score.cases += 1;
    score.called_right += u32::from(found.verdict == Verdict::Agrees);
    let first = found.explanations.first().filter(|_| found.verdict == Verdict::Explained);
    let hit = first.is_some_and(|e| same(&e.id, id));
    let tied = first.is_some_and(|e| e.tie.iter().any(|t| same(t, id)));
    score.first += u32::from(hit);
    score.right += u32::from(hit || tied);
    score.tied += first.map_or(0, |e| e.tie.len() as u32);
    hit || tied
}

fn seen(found: &Checked) -> String {
    let all: Vec<String> = found
        .explanations
        .iter()
        .take(3)
        .map(|e| format!("{} {:?} tie {:?} left {:.3}", e.id, e.parameters, e.tie, e.residual))
        .collect();
    format!(
        "{} over {} rows, slope {:?} offset {:?}, beyond {}: {}",
        found.verdict.as_str(),
        found.rows,
        found.slope,
        found.offset,
        found.beyond,
        all.join(" | ")
    )
}

/// Single mistakes by id, over so many seeds.
fn singles(seeds: std::ops::Range<u64>, rows: usize, loud: bool) -> BTreeMap<&'static str, Score> {
    let mut table: BTreeMap<&'static str, Score> = BTreeMap::new();
    for scene in SCENES {
        for mistake in of_scene(scene) {
            for seed in seeds.clone() {
                let case = Case::new(scene, seed, rows);
                let Some((id, found)) = case.run(&[&mistake]) else { continue };
                if !score(table.entry(mistake.id).or_default(), &id, &found) && loud {
                    println!("{scene:?} seed {seed} {id}: {}", seen(&found));
                }
            }
        }
    }
    table
}

/// Two mistakes together; every `stride`-th pair.
fn doubles(seeds: std::ops::Range<u64>, rows: usize, stride: usize, loud: bool) -> BTreeMap<Scene2, Score> {
    let mut table: BTreeMap<Scene2, Score> = BTreeMap::new();
    let mut count = 0usize;
    for scene in SCENES {
        let all = of_scene(scene);
        for seed in seeds.clone() {
            for (i, a) in all.iter().enumerate() {
                for b in all.iter().skip(i + 1) {
                    if a.kind == b.kind || a.id == b.id {
                        continue;
                    }
                    count += 1;
                    if !count.is_multiple_of(stride) {
                        continue;
                    }
                    let case = Case::new(scene, seed, rows);
                    let Some((id, found)) = case.run(&[a, b]) else { continue };
                    if !score(table.entry(Scene2(format!("{scene:?}"))).or_default(), &id, &found) && loud {
                        println!("{scene:?} seed {seed} {id}: {}", seen(&found));
                    }
                }
            }
        }
    }
    table
}

#[derive(PartialEq, Eq, PartialOrd, Ord)]
struct Scene2(String);

fn total<'a>(scores: impl Iterator<Item = &'a Score>) -> Score {
    scores.fold(Score::default(), |mut sum, s| {
        sum.cases += s.cases;
        sum.right += s.right;
        sum.first += s.first;
        sum.called_right += s.called_right;
        sum.tied += s.tied;
        sum
    })
}

/// Clean deliveries: how many, and how many were called wrong.
fn clean(seeds: std::ops::Range<u64>, rows: usize) -> (u32, u32) {
    let (mut cases, mut wrong) = (0, 0);
    for scene in SCENES {
        for seed in seeds.clone() {
            let case = Case::new(scene, seed, rows);
            let right = Constants::right();
            let values = case.recording.made(&right);
            let found = checked(scene, &case.recording.delivery(&values, &right, case.decimals));
            cases += 1;
            if found.verdict != Verdict::Agrees {
                wrong += 1;
                println!(
                    "{scene:?} seed {seed} is clean: {} largest {} row {}",
                    seen(&found),
                    found.largest_difference,
                    found.largest_row
                );
            }
        }
    }
    (cases, wrong)
}

#[test]
fn clean_deliveries_agree() {
    let (cases, wrong) = clean(0..4, 200);
    assert!(cases == 64 && wrong == 0, "{wrong} of {cases}");
}

#[test]
fn one_mistake_is_found() {
    let table = singles(0..1, 180, true);
    let all = total(table.values());
    println!("{} of {} right, {} first", all.right, all.cases, all.first);
    assert!(all.cases > 60 && all.share() >= 0.95 && all.called_right == 0);
    for (id, score) in &table {
        assert!(2 * score.right >= score.cases, "{id}: {} of {}", score.right, score.cases);
    }
}

#[test]
fn every_id_is_generated_or_said_why_not() {
    let made: Vec<&str> = SCENES.iter().flat_map(|s| of_scene(*s)).map(|m| m.id).collect();
    // not asked for, and without a generator of their own
    let beside = [
        "another-scale",
        "another-zero",
        "truncated",
        "amplifier-offset",
        "rated-output",
        "self-heating-ignored",
        "parallel-ignored",
        // tests/check_cli.rs
        "rounded-twice",
        "drift-ignored",
        "temperature-delivered",
        "faults-converted",
        "gaps-filled",
    ];
    for mistake in MISTAKES {
        assert!(made.contains(&mistake.id) != beside.contains(&mistake.id), "{}", mistake.id);
    }
    let _ = Digits::Cut;
}

#[test]
fn two_mistakes_are_found() {
    let table = doubles(0..1, 180, if cfg!(debug_assertions) { 97 } else { 7 }, true);
    let all = total(table.values());
    println!("{} of {} right, {} first", all.right, all.cases, all.first);
    assert!(all.cases >= 3 && all.share() >= 0.85 && all.called_right == 0);
}

/// Everything, and the table of DEVELOPERS.md.
#[cfg(exhaustive)]
#[test]
fn everything() {
    use std::fmt::Write;

    // both roundings, with and without noise, three times over; of the pairs every third
    let one = singles(0..12, 1440, true);
    let (first, second) = (total(one.values()), doubles(0..4, 720, 3, true));
    let two = total(second.values());
    let (cases, wrong) = clean(0..63, 480);
    let mut table = String::new();
    let percent = |n: u32, of: u32| 100.0 * f64::from(n) / f64::from(of.max(1));
    let _ = writeln!(table, "| mistake | cases | right | first | others in the tie |\n|---|---|---|---|---|");
    let mut line = |name: &str, s: &Score| {
        let _ = writeln!(
            table,
            "| {name} | {} | {:.0} % | {:.0} % | {:.1} |",
            s.cases,
            percent(s.right, s.cases),
            percent(s.first, s.cases),
            f64::from(s.tied) / f64::from(s.cases.max(1))
        );
    };
    for m in MISTAKES {
        if let Some(s) = one.get(m.id) {
            line(&format!("`{}`", m.id), s);
        }
    }
    line("**one mistake**", &first);
    for (scene, s) in &second {
        line(&format!("two in {}", scene.0), s);
    }
    line("**two mistakes**", &two);
    let _ = writeln!(
        table,
        "\nClean deliveries called wrong: {wrong} of {cases}. Wrong ones called right: {} of {}.",
        first.called_right + two.called_right,
        first.cases + two.cases
    );
    println!("{table}");
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/DEVELOPERS.md");
    let text = std::fs::read_to_string(path).unwrap();
    let (begin, end) = ("<!-- check: begin -->\n", "<!-- check: end -->");
    let (head, rest) = text.split_once(begin).unwrap();
    let (_, tail) = rest.split_once(end).unwrap();
    std::fs::write(path, format!("{head}{begin}{table}{end}{tail}")).unwrap();
    assert!(first.share() >= 0.95, "{} of {}", first.right, first.cases);
    assert!(two.share() >= 0.85, "{} of {}", two.right, two.cases);
    assert!(cases >= 1000 && wrong == 0 && first.called_right + two.called_right == 0);
}

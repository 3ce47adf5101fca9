//! What filling saves and what it costs, measured on complete runs: `cargo bench --bench progressive -- RUN...`
//!
//! Each run must have been made with `abide survey STUDY --every-cell`. The rule is given the answers that the run
//! holds, so that it integrates what a filling survey would; what it fills is compared with what was integrated.
//! Nothing is integrated here and nothing is timed.
//!
//! How good could any rule be that knows a cell by its neighbours? The last three columns say: a reader is given the
//! answers of all eight cells around (what they are, how calm, not where), and for every pattern of them the verdict that
//! this very map has most often there; the cells of the least certain patterns are integrated, 20, 25 and 30 of a hundred. What is
//! then still wrong is less than any rule can reach that knows of the cells around a cell what the reader knows, or less.

use std::collections::BTreeMap;
use std::path::Path;

use abide::coords;
use abide::input;
use abide::survey::{Calm, Policy, Record, Refine, View, plan_of, read_run};
use abide::verdict::Verdict;

fn main() {
    // Cargo adds `--bench`.
    let runs: Vec<String> = std::env::args().skip(1).filter(|word| !word.starts_with("--")).collect();
    println!(
        "| run | cells | neighbours differ | integrated | of the steps | differing | of these lost/not lost \
         | at best 20 % | 25 % | 30 % |"
    );
    println!("| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |");
    for run in runs {
        match row(Path::new(&run)) {
            Ok(row) => println!("{row}"),
            Err(error) => eprintln!("error: {run}: {error}"),
        }
    }
}

fn row(folder: &Path) -> Result<String, Box<dyn std::error::Error>> {
    let stored = read_run(folder)?;
    let system = input::parse_system("system.toml", &stored.system_text)?;
    let file = input::parse_study("study.toml", &stored.study_text, system)?;
    let plan = plan_of(&file.study, &file.system.system, &coords::configure(&file.system.system)?);
    let records = &stored.records;
    let shape = [0, 1].map(|axis| file.study.axes.get(axis).map_or(1, |axis| axis.cells));
    let whole = records.len() == shape[0] * shape[1] && records.iter().all(|r| r.filled.is_none());
    if !whole {
        return Err("not every cell of this run is integrated".into());
    }
    let nominal = abide::figure::nominal_cell(&file.study, &file.system.system);
    let policy = Policy::filling(Calm::under(&plan), nominal.into_iter().collect());
    let rule = settle(shape, policy, records);
    let verdict = |cell: u64| records[cell as usize].assessment.verdict;
    let differs = |fill: &abide::survey::Fill| fill.view.found().map(|(v, _)| v) != Some(verdict(fill.cell));
    let wrong: Vec<_> = rule.fills().filter(differs).collect();
    let lost = |fill: &&abide::survey::Fill| {
        (verdict(fill.cell) == Verdict::Lost) != (fill.view.found().map(|(v, _)| v) == Some(Verdict::Lost))
    };
    let saved: u64 = rule.fills().map(|fill| records[fill.cell as usize].assessment.steps).sum();
    let steps: u64 = records.iter().map(|r| r.assessment.steps).sum();
    let cells = records.len() as f64;
    let percent = |part: f64| format!("{:.1} %", 100.0 * part);
    let patterns = patterns(shape, records, &Calm::under(&plan));
    let best = |share: f64| format!("{:.2} %", 100.0 * least_wrong(&patterns, share * cells) / cells);
    Ok(format!(
        "| {} | {} x {} | {} | {} | {} | {:.2} % | {} of {} | {} | {} | {} |",
        folder.file_name().unwrap_or_default().to_string_lossy(),
        shape[0],
        shape[1],
        percent(roughness(shape, records)),
        percent(1.0 - rule.fills().count() as f64 / cells),
        percent(1.0 - saved as f64 / steps as f64),
        100.0 * wrong.len() as f64 / cells,
        wrong.iter().filter(lost).count(),
        wrong.len(),
        best(0.2),
        best(0.25),
        best(0.3),
    ))
}

fn settle(shape: [usize; 2], policy: Policy, records: &[Record]) -> Refine {
    let mut rule = Refine::new(shape, policy);
    loop {
        let wanted = rule.take(usize::MAX);
        if wanted.is_empty() && !rule.advance() {
            return rule;
        }
        for cell in wanted {
            rule.answer(cell, View::of(&records[cell as usize].assessment));
        }
    }
}

/// Share of the pairs of neighbours along the first axis with different verdicts: how rough the map is.
fn roughness(shape: [usize; 2], records: &[Record]) -> f64 {
    let rows = records.chunks(shape[0]);
    let pairs = rows.flat_map(|row| row.windows(2));
    let (mut differ, mut all) = (0, 0);
    for pair in pairs {
        differ += usize::from(pair[0].assessment.verdict != pair[1].assessment.verdict);
        all += 1;
    }
    differ as f64 / all as f64
}

/// How many kinds of neighbours a pattern tells apart.
const KINDS: usize = 9;

/// Cells with the same eight neighbours, by kind and number: how many of them have each verdict.
fn patterns(shape: [usize; 2], records: &[Record], calm: &Calm) -> Vec<BTreeMap<&'static str, usize>> {
    let kinds: Vec<usize> = records.iter().map(|record| kind(record, calm)).collect();
    let mut found: BTreeMap<[u8; KINDS], BTreeMap<&'static str, usize>> = BTreeMap::new();
    for y in 0..shape[1] {
        for x in 0..shape[0] {
            let mut around = [0; KINDS];
            for near_y in y.saturating_sub(1)..shape[1].min(y + 2) {
                for near_x in x.saturating_sub(1)..shape[0].min(x + 2) {
                    if (near_x, near_y) != (x, y) {
                        around[kinds[near_y * shape[0] + near_x]] += 1;
                    }
                }
            }
            let verdict = records[y * shape[0] + x].assessment.verdict.word();
            *found.entry(around).or_default().entry(verdict).or_default() += 1;
        }
    }
    found.into_values().collect()
}

/// What a neighbour is, in the steps in which the filling rule looks at it.
fn kind(record: &Record, calm: &Calm) -> usize {
    let assessment = &record.assessment;
    let megno = assessment.megno.unwrap_or(f64::NAN) as f32;
    match assessment.verdict {
        Verdict::Regular if (megno - 2.0).abs() < calm.megno_range => 0,
        Verdict::Regular if (megno - 2.0).abs() < calm.megno_from_two => 1,
        Verdict::Regular => 2,
        Verdict::Chaotic if megno >= calm.megno_chaotic => 3,
        Verdict::Chaotic => 4,
        Verdict::Lost if (assessment.end_time_day as f32) < calm.end_day => 5,
        Verdict::Lost => 6,
        Verdict::Undecided => 7,
        Verdict::Untrusted => 8,
    }
}

/// Cells wrong when each takes its pattern's most frequent verdict and those of the worst patterns, `integrated` of them at least, are
/// known.
fn least_wrong(patterns: &[BTreeMap<&'static str, usize>], integrated: f64) -> f64 {
    let all = |pattern: &BTreeMap<_, usize>| pattern.values().sum::<usize>() as f64;
    let wrong =
        |pattern: &BTreeMap<_, usize>| all(pattern) - pattern.values().copied().max().unwrap_or(0) as f64;
    let mut order: Vec<_> = patterns.iter().map(|p| (wrong(p) / all(p), all(p), wrong(p))).collect();
    order.sort_by(|a, b| b.0.total_cmp(&a.0));
    let (mut known, mut left) = (0.0, 0.0);
    for (share, cells, wrong) in order {
        // Of a pattern that does not fit in whole, the rest is wrong as often as the whole.
        let take = f64::min(cells, integrated - known);
        known += take;
        left += if take == cells { 0.0 } else { wrong - share * take };
    }
    left
}

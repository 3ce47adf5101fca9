//! What filling saves and what it costs, measured on complete runs: `cargo bench --bench progressive -- RUN...`
//!
//! Each run must have been made with `abide survey STUDY --every-cell`. The rule is given the answers that the run
//! holds, so that it integrates what a filling survey would; what it fills is compared with what was integrated.
//! Nothing is integrated here and nothing is timed.

use std::path::Path;

use abide::coords;
use abide::input;
use abide::survey::{Calm, Policy, Record, Refine, View, plan_of, read_run};
use abide::verdict::Verdict;

fn main() {
    // Cargo adds `--bench`.
    let runs: Vec<String> = std::env::args().skip(1).filter(|word| !word.starts_with("--")).collect();
    println!(
        "| run | cells | neighbours differ | integrated | of the steps | differing | of these lost/not lost |"
    );
    println!("| --- | --- | --- | --- | --- | --- | --- |");
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
    Ok(format!(
        "| {} | {} x {} | {} | {} | {} | {:.2} % | {} of {} |",
        folder.file_name().unwrap_or_default().to_string_lossy(),
        shape[0],
        shape[1],
        percent(roughness(shape, records)),
        percent(1.0 - rule.fills().count() as f64 / cells),
        percent(1.0 - saved as f64 / steps as f64),
        100.0 * wrong.len() as f64 / cells,
        wrong.iter().filter(lost).count(),
        wrong.len()
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

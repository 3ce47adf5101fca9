//! The whole program: what a survey loses to everything but the kernel, two threads, drawing, memory.
//!
//! The grid is two invented planets far enough apart that every cell stays regular to its end, 1e4 inner orbits, so
//! that the work of the kernel is known: steps made (from the run's own records) × planets × the kernel's nanoseconds
//! per planet-step, measured in the same run between the surveys. Times are processor times, since the
//! machine may be shared; the clock on the wall is given beside them. `batch` is the same cells in one thread of this
//! process without journal, tables and figure. The figure costs nearly the same for any grid; the loss is given with it and without.
//!
//! `cargo bench --bench whole` writes reports/speed/whole.csv; `cargo bench --bench whole -- memory` follows a
//! million cells for a very short span and writes reports/speed/memory.csv.

mod measure;
mod systems;

use abide::assess::{Plan, run_batch};
use abide::coords::configure;
use abide::input::read_study;
use abide::integrate::{Advance, Scheme, advance};
use abide::lanes::Level;
use abide::survey::{Grid, Made, Source, read_run};
use measure::{children_seconds, median, spread, thread_seconds, write_table};
use std::path::Path;
use std::process::Command;
use std::time::{Duration, Instant};

const SYSTEM: &str = r#"
title = "Two invented planets"
epoch = "2460000.5 JD"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
mass = "1e-3 Msun"
semi_major_axis = "1 au"
eccentricity = 0.05
argument_of_pericentre = "0 deg"
mean_anomaly = "0 deg"
[[planet]]
name = "c"
mass = "3e-4 Msun"
semi_major_axis = "1.83 au"
eccentricity = 0.05
argument_of_pericentre = "40 deg"
mean_anomaly = "120 deg"
"#;

fn study(span: &str, cells: [usize; 2]) -> String {
    format!(
        "system = \"pair.toml\"\nspan = \"{span}\"\n\
         [[axis]]\nvary = \"c.semi_major_axis\"\nfrom = \"1.80 au\"\nto = \"1.86 au\"\ncells = {}\n\
         [[axis]]\nvary = \"c.eccentricity\"\nfrom = 0.0\nto = 0.05\ncells = {}\n",
        cells[0], cells[1],
    )
}

/// Seconds of processor and of the wall that the program takes; and the most memory it was seen to hold, MiB.
fn run_program(folder: &Path, arguments: &[&str]) -> (f64, f64, f64) {
    let (before, start) = (children_seconds(), Instant::now());
    let mut child = Command::new(env!("CARGO_BIN_EXE_abide"))
        .args(arguments)
        .current_dir(folder)
        .spawn()
        .expect("the program starts");
    let status_file = format!("/proc/{}/status", child.id());
    let mut peak_mib = 0.0f64;
    let status = loop {
        if let Some(status) = child.try_wait().expect("a child can be waited for") {
            break status;
        }
        // The high-water mark only grows, so the last look before the end has it but for the last moment.
        let text = std::fs::read_to_string(&status_file).unwrap_or_default();
        let line = text.lines().find_map(|l| l.strip_prefix("VmHWM:"));
        let kib = line.and_then(|l| l.trim().trim_end_matches(" kB").parse::<f64>().ok());
        peak_mib = peak_mib.max(kib.unwrap_or(0.0) / 1024.0);
        std::thread::sleep(Duration::from_millis(20));
    };
    assert!(status.success(), "{arguments:?}: {status}");
    (children_seconds() - before, start.elapsed().as_secs_f64(), peak_mib)
}

/// Nanoseconds per planet-step of the kernel, short chunks.
fn kernel_ns() -> f64 {
    const STEPS: usize = 508;
    let lanes = Level::chosen().width() * Level::chosen().groups(2);
    let mut block = systems::block(2, lanes, 20.0);
    let times: Vec<f64> = (0..400)
        .map(|_| {
            let start = Instant::now();
            advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps: STEPS, tangent: true });
            let seconds = start.elapsed().as_secs_f64();
            (0..lanes).for_each(|lane| block.rescale(lane));
            seconds * 1e9 / (STEPS * 2 * lanes) as f64
        })
        .collect();
    median(&times)
}

/// Processor seconds of the same cells in this thread, without journal.
fn batch_seconds(folder: &Path) -> f64 {
    let file = read_study(folder.join("study.toml")).expect("a good study");
    let nominal = configure(&file.system.system).expect("a good system");
    let plan = Plan::for_study(&file.study, &nominal, &[]);
    let grid = Grid::new(file.system.system.clone(), file.study.clone()).expect("a good grid");
    let mut cells = 0..grid.cells();
    let next = || {
        let cell = cells.next()?;
        match grid.make(cell) {
            Made::ToFollow(configuration) => Some((cell, configuration)),
            Made::Settled(_) => unreachable!("every cell of this grid can be followed"),
        }
    };
    let start = thread_seconds();
    run_batch(&plan, next, |_, _| true);
    thread_seconds() - start
}

fn survey() {
    const REPEAT: usize = 3;
    let folder = tempfile::tempdir().expect("a folder");
    std::fs::write(folder.path().join("pair.toml"), SYSTEM).expect("written");
    std::fs::write(folder.path().join("study.toml"), study("1e4 orbits", [100, 100])).expect("written");
    let cells = 100.0 * 100.0;
    let mut columns = vec![Vec::new(); 10];
    for turn in 0..REPEAT {
        let mut kernel = vec![kernel_ns()];
        let into = |threads: usize| format!("run-{turn}-{threads}");
        let (one, wall_one, _) = run_program(
            folder.path(),
            &["survey", "study.toml", "--quiet", "--threads", "1", "--into", &into(1)],
        );
        kernel.push(kernel_ns());
        let batch = batch_seconds(folder.path());
        kernel.push(kernel_ns());
        let (two, wall_two, _) = run_program(
            folder.path(),
            &["survey", "study.toml", "--quiet", "--threads", "2", "--into", &into(2)],
        );
        let wall_pair = two_at_once(folder.path(), turn);
        let (draw, _, _) = run_program(folder.path(), &["draw", &into(1)]);
        let stored = read_run(&folder.path().join(into(1))).expect("a finished run");
        assert_eq!(stored.records.len() as f64, cells);
        let steps: u64 = stored.records.iter().map(|record| record.assessment.steps).sum();
        let in_kernel = steps as f64 * 2.0 * median(&kernel) * 1e-9;
        for (column, value) in columns.iter_mut().zip([
            median(&kernel),
            cells / one,
            cells / batch,
            100.0 * (1.0 - in_kernel / batch),
            100.0 * (1.0 - in_kernel / one),
            100.0 * (1.0 - in_kernel / (one - draw)),
            draw,
            wall_one / wall_two,
            2.0 * wall_one / wall_pair,
            two / one,
        ]) {
            column.push(value);
        }
        println!(
            "turn {turn}: {one:.2} s on one thread (wall {wall_one:.2}), {two:.2} s on two (wall {wall_two:.2})"
        );
    }
    let names = [
        "kernel_ns_per_planet_step",
        "survey_cells_per_processor_second",
        "batch_cells_per_processor_second",
        "batch_lost_percent",
        "survey_lost_percent",
        "survey_lost_percent_but_for_drawing",
        "draw_processor_seconds",
        "wall_one_thread_over_two",
        "wall_two_programs_one_after_the_other_over_at_once",
        "processor_time_two_threads_over_one",
    ];
    let rows: Vec<String> = names
        .iter()
        .zip(&columns)
        .map(|(name, values)| format!("{name},{:.3},{:.1}", median(values), spread(values)))
        .collect();
    rows.iter().for_each(|row| println!("{row}"));
    write_table("whole", "quantity,median,spread_percent", &rows);
}

/// Seconds on the wall of two programs of one thread each at the same time: what the machine's processors allow.
fn two_at_once(folder: &Path, turn: usize) -> f64 {
    let start = Instant::now();
    let mut both: Vec<_> = ["left", "right"]
        .iter()
        .map(|side| {
            Command::new(env!("CARGO_BIN_EXE_abide"))
                .args(["survey", "study.toml", "--quiet", "--threads", "1", "--into"])
                .arg(format!("{side}-{turn}"))
                .current_dir(folder)
                .spawn()
                .expect("the program starts")
        })
        .collect();
    for child in &mut both {
        assert!(child.wait().expect("a child can be waited for").success());
    }
    start.elapsed().as_secs_f64()
}

fn memory() {
    let folder = tempfile::tempdir().expect("a folder");
    std::fs::write(folder.path().join("pair.toml"), SYSTEM).expect("written");
    std::fs::write(folder.path().join("study.toml"), study("2 orbits", [1000, 1000])).expect("written");
    let (processor, wall, peak) =
        run_program(folder.path(), &["survey", "study.toml", "--quiet", "--threads", "2", "--into", "run"]);
    let journal =
        std::fs::metadata(folder.path().join("run/journal.csv")).expect("a journal").len() as f64 / 1e6;
    let row = format!("1000000,{peak:.0},{processor:.0},{wall:.0},{journal:.0}");
    println!("{row}");
    write_table("memory", "cells,peak_mib,processor_seconds,wall_seconds,journal_megabytes", &[row]);
}

fn main() {
    if std::env::args().any(|a| a == "memory") { memory() } else { survey() }
}

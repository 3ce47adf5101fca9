//! A configuration that is killed, stopped, or followed twice at a time.

mod cli_support;

use std::io::Read;
use std::time::Duration;

use cli_support::{Desk, Line, PAIR, wait_until};

/// Long enough to be caught at work, short enough to be done again.
const SPAN: [&str; 6] = ["--span", "3e5 orbits", "--rows", "500", "--checkpoint", "0.02 s"];

fn line(desk: &Desk, into: &str) -> Line {
    desk.abide("follow").args(["pair.toml", "--into", into]).args(SPAN)
}

/// Spread evenly by the golden ratio.
fn share(kill: usize) -> f64 {
    (0.618_033_988_749_895 * (kill + 1) as f64).fract()
}

#[test]
fn killed_at_ten_moments_gives_the_bytes_of_an_undisturbed_run() {
    let desk = Desk::new().file("pair.toml", PAIR);
    let plain = line(&desk, "undisturbed").run().done();
    let checkpoint = desk.path("killed/follow.checkpoint");
    let content = || std::fs::read(&checkpoint).unwrap_or_default();
    let mut went_on = 0;
    for kill in 0..10 {
        let before = content();
        let mut running = line(&desk, "killed").start();
        // Every process gets further than the one before; only the first may be hit before its first checkpoint.
        if kill > 0 {
            wait_until("the checkpoint grows", || content() != before || running.has_ended());
        }
        assert!(!running.has_ended(), "killed at work, not after it");
        std::thread::sleep(Duration::from_micros((share(kill) * 60_000.0) as u64));
        running.kill();
        went_on += usize::from(content() != before);
    }
    assert!(went_on >= 9, "{went_on}");
    let last = line(&desk, "killed").run().done().said("killed: goes on, ");
    assert_eq!(last.stdout, plain.stdout);
    let names =
        ["series.ecsv", "series.png", "frequencies.ecsv", "lines.ecsv", "resonances.ecsv", "verdict.json"];
    for name in names {
        assert!(desk.read(format!("killed/{name}")) == desk.read(format!("undisturbed/{name}")), "{name}");
    }
    let left = std::fs::read_dir(desk.path("killed")).unwrap();
    let names: Vec<String> = left.map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
    assert!(!names.iter().any(|name| name.ends_with(".part")), "{names:?}");
}

#[test]
fn an_interrupted_one_says_how_to_go_on_and_does() {
    let desk = Desk::new().file("pair.toml", PAIR);
    let running = line(&desk, "out").start();
    wait_until("a checkpoint", || desk.path("out/follow.checkpoint").exists());
    running
        .interrupt()
        .code(130)
        .said("stopped; what was followed is kept in out. The same command goes on from there");
    assert!(!desk.path("out/series.ecsv").exists());
    desk.abide("follow")
        .args(["pair.toml", "--into", "out", "--span", "2e5 orbits"])
        .run()
        .refused()
        .said("% done")
        .said("--span: was \"3e5 orbits\", is now \"2e5 orbits\"");
    line(&desk, "out").run().done().said("out: goes on, ").said("wrote out/series.ecsv");
}

#[test]
fn two_processes_do_not_share_a_folder() {
    let desk = Desk::new().file("pair.toml", PAIR);
    let running = line(&desk, "out").start();
    wait_until("a checkpoint", || desk.path("out/follow.checkpoint").exists());
    line(&desk, "out").run().refused().said("is held by another process (process ");
    running.kill();
}

/// A giant and forty massless bodies: their analysis takes longer than their motion.
fn belt() -> String {
    let mut text =
        "title = \"Belt\"\n[star]\nmass = \"1 Msun\"\n[[planet]]\nname = \"b\"\nmass = \"1 Mjup\"\n\
                    semi_major_axis = \"5.2 au\"\neccentricity = 0.05\nargument_of_pericentre = \"0 deg\"\n\
                    mean_anomaly = \"0 deg\"\n"
            .to_owned();
    for body in 0..40 {
        text += &format!(
            "[[planet]]\nname = \"p{body}\"\nmass = \"0 Mearth\"\nsemi_major_axis = \"{} au\"\neccentricity = 0.03\n\
             argument_of_pericentre = \"{} deg\"\nmean_anomaly = \"{} deg\"\ninclination = \"{} deg\"\n",
            2.2 + 0.02 * f64::from(body),
            60 * body,
            100 * body,
            89.0 + 0.03 * f64::from(body),
        );
    }
    text
}

/// Stopped while frequencies and resonances are told: at once, with the way on, which needs no step of the motion again.
#[test]
fn the_analysis_is_left_at_once_and_taken_up() {
    let desk = Desk::new().file("belt.toml", belt());
    let line = || {
        let words =
            ["belt.toml", "--into", "out", "--span", "1500 orbits", "--encounter", "off", "--rows", "20"];
        desk.abide("follow").args(words).args(["--step", "24 per orbit", "--energy-error", "1e-3"])
    };
    let mut running = line().start();
    let checkpoint = desk.path("out/follow.checkpoint");
    let finished = || {
        // The head comes first, and in it the system as read.
        let mut head = Vec::new();
        let read = std::fs::File::open(&checkpoint).and_then(|file| file.take(40_000).read_to_end(&mut head));
        read.is_ok() && head.windows(15).any(|words| words == b"\"finished\":true")
    };
    wait_until("the whole span is followed", || finished() || running.has_ended());
    assert!(!running.has_ended(), "caught at the analysis");
    let asked = std::time::Instant::now();
    running
        .interrupt()
        .code(130)
        .said("the whole span was followed and is kept in out, but its frequencies and resonances were not yet told")
        .said("The same command");
    assert!(asked.elapsed() < Duration::from_secs(5), "{:?}", asked.elapsed());
    assert!(!desk.path("out/series.ecsv").exists() && !desk.path("out/.lock").exists());
    line().run().done().said("out is finished").said("wrote out/resonances.ecsv");
    let resonances = desk.text("out/resonances.ecsv");
    let pairs = resonances.lines().filter(|line| line.contains(",apsides,"));
    assert_eq!(pairs.count(), 40, "each with the giant only");
}

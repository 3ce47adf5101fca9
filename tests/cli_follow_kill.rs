//! A configuration that is killed, stopped, or followed twice at a time.

mod cli_support;

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
    for name in ["series.ecsv", "series.png", "frequencies.ecsv", "lines.ecsv", "resonances.ecsv"] {
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

//! What `abide follow` makes of the file and the folder that it is given.

mod cli_support;

use cli_support::{Desk, PAIR};

#[test]
fn a_study_is_sent_to_survey() {
    let desk = Desk::with_pair();
    desk.abide("follow").arg("map.toml").run().refused().said("this is a study file").said("`abide survey`");
}

#[test]
fn planets_that_cannot_start_are_told_at_their_name() {
    let desk = Desk::new().file("pair.toml", PAIR.replace("\"0.82 Rsun\"", "\"40 Rsun\""));
    let told = desk.abide("follow").args(["pair.toml", "--into", "out"]).run().refused();
    told.said("pair.toml:8:8: the system cannot start like this")
        .said("planet b is inside the star")
        .said("to do:");
    assert!(!desk.path("out").exists());
}

#[test]
fn a_folder_with_other_files_is_left_alone() {
    let desk = Desk::with_pair();
    std::fs::create_dir(desk.path("data")).unwrap();
    desk.write("data/notes.txt", "mine");
    let line = || desk.abide("follow").args(["pair.toml", "--span", "100 orbits", "--into", "data"]);
    line().run().refused().said("data holds other files, as notes.txt").said("--into");
    assert_eq!(std::fs::read_dir(desk.path("data")).unwrap().count(), 1);
    // What was followed before is ours, whatever lies beside it since then.
    std::fs::remove_file(desk.path("data/notes.txt")).unwrap();
    line().run().done();
    assert!(!desk.path("data/.lock").exists());
    desk.write("data/notes.txt", "mine");
    line().run().done().said("is finished");
    line().arg("--anew").run().done();
    assert_eq!(desk.text("data/notes.txt"), "mine");
}

#[test]
fn of_many_differences_five_are_told() {
    let desk = Desk::with_pair();
    let line = || desk.abide("follow").args(["pair.toml", "--span", "100 orbits", "--into", "out"]);
    line().run().done();
    desk.write(
        "pair.toml",
        PAIR.replace("name = \"b\"", "name = \"d\"").replace("name = \"c\"", "name = \"e\""),
    );
    let told = line().run().refused().stderr;
    // Six keys of each planet are gone, and as many are new.
    assert_eq!(told.matches("pair.toml: planet[").count(), 5, "{told}");
    assert!(told.contains(&format!("and {} more", 2 * (6 + 6) - 5)), "{told}");
}

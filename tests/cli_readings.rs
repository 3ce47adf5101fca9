//! `abide inspect --readings` through the binary.

mod cli_support;

use std::time::Duration;

use cli_support::{Desk, PAIR};
use serde_json::Value;

const SHORT: [&str; 3] = ["--readings", "--span", "300 orbits"];
const FITS: usize = 100;

fn view(file: &str, span: &str) -> Value {
    let desk = Desk::new().file("a.toml", file);
    let done = desk.abide("inspect").args(["a.toml", "--readings", "--json", "--span", span]).run().done();
    serde_json::from_str(&done.stdout).unwrap()
}

fn readings(view: &Value) -> &Vec<Value> {
    view["readings"].as_array().unwrap()
}

/// Words of a reading in the order elements, pericentre, mean longitude, transit.
fn words(reading: &Value) -> [&str; 4] {
    ["elements", "pericentre", "mean_longitude", "transit"].map(|key| reading[key].as_str().unwrap())
}

/// HD 45364: tests/truth/hd-45364.toml says its source. The published solution (Jacobi, the planets' own longitudes)
/// librates in 3:2 about 0 with amplitude 68.4 deg in its main line (Correia et al. 2009, their Table 4 as recalled in
/// tests/truth); with mean longitudes of the planet beside the star's arguments the planets stand elsewhere.
#[test]
fn the_published_reading_is_locked_and_a_mixed_one_is_lost() {
    let view = view(include_str!("truth/hd-45364.toml"), "3000 orbits");
    let own = &readings(&view)[0];
    assert_eq!((own["own"].as_bool(), words(own)), (Some(true), ["jacobi", "planet", "planet", "+90 deg"]));
    assert_eq!(own["verdict"], "regular");
    assert_eq!(view["telling_angles"][0], "3λ_c − 2λ_b − ϖ_b");
    let angle = &own["telling"][0];
    assert_eq!(angle["state"], "librates");
    let number = |key: &str| angle[key].as_f64().unwrap();
    let centre = number("centre_deg");
    assert!(centre.min(360.0 - centre) < 5.0, "{centre}");
    // The main line and what comes on top of it: their period is 18.16 yr.
    assert!((68.4..100.0).contains(&number("amplitude_deg")), "{angle}");
    assert!((number("period_yr") / (360.0 / 19.8207) - 1.0).abs() < 0.02, "{angle}");
    let mixed = readings(&view).iter().find(|one| words(one) == ["jacobi", "star", "planet", "+90 deg"]);
    assert_eq!(mixed.unwrap()["verdict"], "lost");
    assert_eq!(mixed.unwrap()["telling"], serde_json::json!([]));
    // In the plane all arguments turned together are the same motion.
    assert_eq!(words(&own["same"][0]), ["jacobi", "star", "star", "+90 deg"]);
    let page = Desk::new().file("a.toml", include_str!("truth/hd-45364.toml"));
    let page =
        page.abide("inspect").args(["a.toml"]).args(["--readings", "--span", "3000 orbits"]).run().done();
    for words in ["  1*  jacobi", "star, λ planet's", "The verdict depends on the reading: regular in 1"] {
        assert!(page.stdout.contains(words), "{words} in\n{}", page.stdout);
    }
}

/// A pair seen in transit: ω of the star with transits at −90 deg is the same motion turned by half a turn, ω of the
/// star with transits at +90 deg is another one.
#[test]
fn two_wrongs_at_a_transit_make_a_right() {
    let mut file = PAIR.replace("mean_anomaly = \"40 deg\"", "transit_time = \"2460315.1 JD\"");
    let all = view(&file, "300 orbits");
    assert_eq!(readings(&all).len(), 6);
    for reading in readings(&all) {
        let same = reading["same"].as_array().unwrap();
        assert_eq!(same.len(), 1);
        assert_eq!((&same[0]["elements"], &same[0]["pericentre"]), (&reading["elements"], &"star".into()));
        assert_ne!(same[0]["transit"], reading["transit"]);
    }
    // Where no phase comes from a transit, the rule is not asked.
    file = PAIR.replace("transit_time = \"2460312.417 ± 0.002 JD\"", "mean_anomaly = \"10 deg\"");
    assert_eq!(readings(&view(&file, "300 orbits")).len(), 3);
}

/// What is told to be one motion is one: the file with the other words gives the same number.
#[test]
fn merged_readings_agree_when_they_are_followed() {
    let file = PAIR.replace("mean_anomaly = \"40 deg\"", "transit_time = \"2460315.1 JD\"");
    let first = view(&file, "300 orbits");
    let own = &readings(&first)[0];
    let convention = "[convention]\npericentre = \"star\"\ntransit = \"-90 deg\"\n[star]";
    let second = view(&file.replace("[star]", convention), "300 orbits");
    let other = &readings(&second)[0];
    assert_eq!(words(other), ["astrocentric", "star", "star", "-90 deg"]);
    assert_eq!(words(&other["same"][0]), ["astrocentric", "planet", "planet", "+90 deg"]);
    let megno = |reading: &Value| reading["megno"].as_f64().unwrap();
    // The same motion in other axes: only the start of the tangent vector and rounding differ.
    assert!((megno(own) - megno(other)).abs() < 0.05, "{} {}", megno(own), megno(other));
    let error = |reading: &Value| reading["energy_error"].as_f64().unwrap();
    assert!((error(own) / error(other) - 1.0).abs() < 1e-3, "{} {}", error(own), error(other));
}

/// Frames of massless bodies change nothing. Half a turn of every pericentre puts every body at −r with −v, however the
/// orbits are tilted and whether or not the star is flat; with one phase from a transit it is another motion.
#[test]
fn what_changes_nothing_is_merged_and_what_does_is_not() {
    let planet = |name: &str, period: f64, mass: &str, e: f64, more: &str| {
        format!(
            "[[planet]]\nname = \"{name}\"\nperiod = \"{period} d\"\nmass = \"{mass} Mearth\"\neccentricity = {e}\n\
             argument_of_pericentre = \"20 deg\"\nmean_anomaly = \"40 deg\"\n{more}"
        )
    };
    let system = |mass: &str, e: f64, more: &str| {
        format!(
            "[star]\nmass = \"1 Msun\"\n{}{}",
            planet("b", 10.0, mass, e, ""),
            planet("c", 26.0, mass, e, more)
        )
    };
    let count = |file: &str| readings(&view(file, "150 orbits")).len();
    let massless = view(&system("0", 0.1, ""), "150 orbits");
    assert_eq!(readings(&massless).len(), 1);
    assert_eq!(readings(&massless)[0]["same"].as_array().unwrap().len(), 5);
    assert_eq!(count(&system("10", 0.1, "")), 3);
    let tilted = system("10", 0.1, "inclination = \"60 deg\"\nascending_node = \"70 deg\"\n");
    assert_eq!(count(&tilted), 3);
    assert_eq!(count(&format!("{tilted}[physics]\noblateness = {{ j2 = 1e-3, radius = \"1 Rsun\" }}\n")), 3);
    let transit = tilted.replacen("mean_anomaly = \"40 deg\"", "transit_time = \"2460001 JD\"", 1);
    assert_eq!(count(&format!("epoch = \"2460000 JD\"\n{transit}")), 6);
    // On circles seen in transit neither the pericentre nor the rule matters.
    let round = tilted.replace("eccentricity = 0.1", "eccentricity = 0");
    let round = round.replace("mean_anomaly = \"40 deg\"", "transit_time = \"2460001 JD\"");
    assert_eq!(count(&format!("epoch = \"2460000 JD\"\n{round}")), 3);
}

/// Beside a second star only frames with a meaning are readings: two outside the planets, one inside them.
#[test]
fn a_second_star_leaves_few_frames() {
    let frames = |file: &str| -> Vec<String> {
        readings(&view(file, "150 orbits")).iter().map(|one| words(one)[0].to_string()).collect()
    };
    assert_eq!(frames(include_str!("../systems/castella.toml")), ["astrocentric", "jacobi"]);
    assert_eq!(frames(include_str!("../systems/gemello.toml")), ["jacobi"]);
}

#[test]
fn a_long_chain_of_long_names_fits_the_page() {
    let mut file = String::from("[star]\nmass = \"0.3 Msun\"\n");
    for index in 0..7 {
        let period = 3.0 * 1.5f64.powi(index);
        file += &format!(
            "[[planet]]\nname = \"a-rather-long-name-of-a-planet-{index}\"\nperiod = \"{period} d\"\n\
             mass = \"1 Mearth\"\neccentricity = 0.01\nargument_of_pericentre = \"{} deg\"\nmean_longitude = \"{} deg\"\n",
            50 * index,
            111 * index
        );
    }
    let desk = Desk::new().file("a.toml", file);
    let page = desk.abide("inspect").arg("a.toml").args(SHORT).run().done();
    for line in page.stdout.lines() {
        assert!(line.chars().count() <= FITS && line.trim_end() == line, "{line:?}");
    }
}

/// Nothing is written, so nothing is left when it is stopped.
#[test]
fn it_goes_away_cleanly_and_refuses_what_makes_no_sense() {
    let desk = Desk::with_pair();
    let running = desk.abide("inspect").args(["pair.toml", "--readings", "--span", "1e8 orbits"]).start();
    std::thread::sleep(Duration::from_millis(1500));
    let stopped = running.interrupt().code(130).said("stopped; readings keep nothing");
    assert!(stopped.stdout.is_empty());
    desk.abide("inspect").args(["pair.toml", "--span", "1e3 orbits"]).run().code(2).said("--readings");
    desk.abide("inspect").args(["pair.toml", "--readings", "--span", "long"]).run().refused().said("span");
    desk.abide("inspect")
        .args(["pair.toml", "--readings", "--span", "1e30 orbits"])
        .run()
        .refused()
        .said("shorten");
    let left: Vec<_> = std::fs::read_dir(desk.path("")).unwrap().collect();
    assert_eq!(left.len(), 2, "no file is left behind");
}

/// Over 3000 orbits the apsides of b and c are seen to librate in one transit rule, and nothing is known of them in the other:
/// that is no difference between the readings. Of the resonant angle both are known.
#[test]
fn what_the_span_does_not_tell_is_not_called_a_difference() {
    let desk = Desk::new().file("a.toml", include_str!("../systems/lanthorn.toml"));
    let done = desk.abide("inspect").args(["a.toml", "--readings", "--span", "3000 orbits"]).run().done();
    assert!(done.stdout.contains("turns         ?"), "{}", done.stdout);
    assert!(done.stdout.contains("A librates in 1, 3, 5 and not in 2, 4, 6."), "{}", done.stdout);
    assert!(!done.stdout.contains("B librates in"), "{}", done.stdout);
}

//! How `abide inspect` says each angle was read, which plane it means, and what it says beside a second star.

mod cli_support;

use cli_support::Desk;
use serde_json::Value;

fn page(file: &str) -> String {
    let desk = Desk::new().file("a.toml", file);
    let page = desk.abide("inspect").arg("a.toml").run().done().stdout;
    for line in page.lines() {
        assert!(line.chars().count() <= 100 && line.trim_end() == line, "{line:?}");
    }
    page
}

fn json(file: &str) -> Value {
    let desk = Desk::new().file("a.toml", file);
    serde_json::from_str(&desk.abide("inspect").args(["a.toml", "--json"]).run().done().stdout).unwrap()
}

/// The words of a page without its line breaks.
fn flowing(page: &str) -> String {
    page.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// Every way to state a pericentre, a node and a phase, on circles where the answer is a sum of angles.
const MANY: &str = r#"
epoch = "2460000 JD"
[star]
mass = "1 Msun"
[convention]
pericentre = "star"
[[planet]]
name = "b"
period = "10 d"
mass = "1 Mearth"
argument_of_pericentre = "75 deg"
transit_time = "2460001 JD"
[[planet]]
name = "c"
period = "20 d"
mass = "1 Mearth"
longitude_of_pericentre = "75 deg"
ascending_node = "30 deg"
mean_longitude = "100 deg"
[[planet]]
name = "d"
period = "50 d"
mass = "1 Mearth"
sqrt_e_cos_w = 0.0
sqrt_e_sin_w = 0.3
pericentre_time = "2459995 JD"
[[planet]]
name = "e"
period = "100 d"
mass = "1 Mearth"
mean_anomaly = "12 deg"
inclination = "80 deg"
"#;

#[test]
fn every_angle_is_echoed_with_what_it_came_from() {
    let view = json(MANY);
    let angles = view["angles"].as_array().unwrap();
    let close = |found: &Value, wanted: f64| {
        assert!((found.as_f64().unwrap() - wanted).abs() < 1e-9, "{found} {wanted}")
    };
    // b: 75 + 180; in front at ν = 90 − 255 = −165 deg, a day or 36 deg after the epoch: M = −201 = 159 deg.
    close(&angles[0]["argument_of_pericentre_deg"], 255.0);
    close(&angles[0]["mean_anomaly_deg"], 159.0);
    assert_eq!(angles[0]["argument_from"], serde_json::json!(["argument_of_pericentre"]));
    assert_eq!((&angles[0]["phase_from"], &angles[0]["node_from"]), (&"transit_time".into(), &Value::Null));
    // c: ω = 75 − 30 + 180; λ counts the stated, the star's argument: M = 100 − 75.
    close(&angles[1]["argument_of_pericentre_deg"], 225.0);
    close(&angles[1]["ascending_node_deg"], 30.0);
    close(&angles[1]["mean_anomaly_deg"], 25.0);
    // d: 90 + 180; five of fifty days since the pericentre.
    close(&angles[2]["argument_of_pericentre_deg"], 270.0);
    close(&angles[2]["mean_anomaly_deg"], 36.0);
    assert_eq!(angles[2]["argument_from"], serde_json::json!(["sqrt_e_cos_w", "sqrt_e_sin_w"]));
    // e: left out is 0, and the star's 0 is the planet's 180.
    close(&angles[3]["argument_of_pericentre_deg"], 180.0);
    close(&angles[3]["inclination_deg"], 80.0);
    assert!(angles.iter().all(|body| body["frame"] == "astrocentric" && body["epoch_jd"] == 2_460_000.0));
    let page = page(MANY);
    for row in [
        "  b      255.000  argument_of_pericentre    0.000  left out     159.000  transit_time",
        "  d      270.000  sqrt_e_cos_w, …sin_w      0.000  left out      36.000  pericentre_time",
        "  e      180.000  left out                  0.000  left out      12.000  mean_anomaly",
    ] {
        assert!(page.contains(row), "{row}\n{page}");
    }
    let words = flowing(&page);
    assert!(words.contains("180 deg from the stated one, the star's"), "{page}");
    assert!(words.contains("of the astrocentric orbits at the epoch, JD 2460000"), "{page}");
}

/// Elements to the ecliptic are not said to be to the sky: nothing in that file is about the sky.
#[test]
fn a_plane_that_is_not_the_sky_is_not_called_so() {
    let file = include_str!("truth/solar-system.toml");
    let words = flowing(&page(file));
    assert!(
        words.contains("reference plane whichever the file's inclinations and nodes refer to"),
        "{words}"
    );
    assert!(!words.contains("the sky:") && !words.contains("line of sight"), "{words}");
    assert_eq!(json(file)["convention"]["needs_sky"], false);
    // An inclination left out is taken as edge-on, a minimum mass is a projection: both need the sky.
    for (one, other) in
        [("inclination = \"7.00501581774702992 deg\"\n", ""), ("\nmass = \"", "\nminimum_mass = \"")]
    {
        assert!(file.contains(one));
        // The first mass is the star's.
        let place = file.rfind(one).unwrap();
        let changed = format!("{}{other}{}", &file[..place], &file[place + one.len()..]);
        let view = json(&changed);
        assert_eq!(view["convention"]["needs_sky"], true, "{one}");
        assert!(flowing(&page(&changed)).contains("reference plane the sky: inclination 90 deg is edge-on"));
    }
}

/// The axis of a Kepler orbit, au, from solar masses and days.
fn axis_au(mass: f64, day: f64) -> f64 {
    let gm = 1.327_124_4e20 * (86_400.0f64.powi(2) / 149_597_870_700.0f64.powi(3));
    (gm * mass * (day / std::f64::consts::TAU).powi(2)).cbrt()
}

/// Both published fits for the demo systems, written out here term by term.
#[test]
fn limits_beside_a_second_star_have_their_margins() {
    let pair = json(include_str!("../systems/gemello.toml"));
    let limits = pair["criteria"]["binary"].as_array().unwrap();
    let number = |value: &Value| value.as_f64().unwrap();
    assert_eq!(limits.len(), 2);
    let (mu, e) = (0.55 / 1.55, 0.14);
    let binary_au = axis_au(0.98 * 1.55, 21.08);
    let fit =
        1.60 + 5.10 * e - 2.22 * e * e + 4.12 * mu - 4.27 * e * mu - 5.09 * mu * mu + 4.61 * e * e * mu * mu;
    let jupiter = 1.266_865_3e17 / 1.327_124_4e20;
    // c circles the pair with b; its own e is 0.03 and its plane that of the stars.
    let own = axis_au(0.98 * 1.55 + 0.56 * jupiter, 251.0);
    let found = &limits[1]["holman_wiegert"];
    assert!((number(&found["critical_axis_au"]) / (fit * binary_au) - 1.0).abs() < 1e-4, "{found}");
    assert!((number(&found["margin"]) / (own / fit / binary_au) - 1.0).abs() < 1e-4, "{found}");
    assert_eq!((&limits[1]["kind"], &found["stable"]), (&"P-type".into(), &true.into()));
    let q = 0.35 * jupiter / (0.98 * 1.55);
    let triple = 2.8 * ((1.0 + q) * 1.03 / 0.97f64.sqrt()).powf(0.4) * binary_au / 0.97;
    let found = number(&limits[1]["mardling_aarseth"]["critical_axis_au"]);
    assert!((found / triple - 1.0).abs() < 1e-3, "{found} {triple}");

    let outside = json(include_str!("../systems/castella.toml"));
    let limits = &outside["criteria"]["binary"][0];
    let (mu, e) = (0.44 / 1.49, 0.41);
    let fit = 0.464 - 0.380 * mu - 0.631 * e + 0.586 * mu * e + 0.150 * e * e - 0.198 * mu * e * e;
    let found = number(&limits["holman_wiegert"]["critical_axis_au"]);
    assert!((found / (fit * 18.5) - 1.0).abs() < 1e-6, "{found}");
    assert!(
        (number(&limits["holman_wiegert"]["margin"]) / (found / number(&limits["semi_major_axis_au"])) - 1.0)
            .abs()
            < 1e-12
    );
    // The angle between two orbits of 64 and 60 deg with nodes 12 deg apart.
    let radian = |deg: f64| deg.to_radians();
    let cos = radian(64.0).cos() * radian(60.0).cos()
        + radian(64.0).sin() * radian(60.0).sin() * radian(12.0).cos();
    let q = 0.44 / (1.05 + 2.114 * jupiter);
    let triple =
        2.8 * ((1.0 + q) * 1.41 / 0.59f64.sqrt()).powf(0.4) * (1.0 - 0.3 * cos.acos().to_degrees() / 180.0);
    let found = number(&limits["mardling_aarseth"]["critical_axis_au"]);
    assert!((found / (18.5 * 0.59 / triple) - 1.0).abs() < 1e-4, "{found}");
    assert!(page(include_str!("../systems/castella.toml")).contains("b       S-type"));
}

#[test]
fn limits_beside_a_second_star_refuse_outside_their_domain() {
    let castella = include_str!("../systems/castella.toml");
    let silent = |file: &str| json(file)["criteria"]["silent"].to_string();
    let light = castella.replace("mass = \"0.44 ± 0.03 Msun\"", "mass = \"0.05 Msun\"");
    assert_ne!(light, castella);
    assert!(silent(&light).contains("b: the S-type limit of Holman & Wiegert (1999) says nothing for mu = "));
    assert!(json(&light)["criteria"]["binary"][0]["holman_wiegert"].is_null());
    assert!(!json(&light)["criteria"]["binary"][0]["mardling_aarseth"].is_null());
    let tilted = castella.replace("ascending_node = \"12 ± 5 deg\"", "ascending_node = \"80 deg\"");
    assert_ne!(tilted, castella);
    assert!(silent(&tilted).contains("says nothing for mutual inclination (deg) = "), "{}", silent(&tilted));
    assert!(json(castella)["criteria"]["silent"].as_array().unwrap().len() == 1);
}

//! Study files: what is measured beside the indicators: the drift of frequencies and a resonant angle.

mod input_support;

use abide::input::Fault;
use abide::system::Measure;
use input_support::{STUDY, changed, check, study};

#[test]
fn the_frequency_drift_is_measured_where_it_is_asked_for() {
    let asked = study(&changed("\"extent\"]", "\"frequency_drift\"]"));
    assert_eq!(asked.measure, [Measure::Megno, Measure::FrequencyDrift]);
    let silent = study(&changed("measure = [\"megno\", \"extent\"]\n", ""));
    assert_eq!(silent.measure, [Measure::Megno, Measure::Lyapunov, Measure::Extent]);
    let wrong = changed("\"extent\"]", "\"frequency_drif\"]");
    check(&wrong, Fault::UnknownWord, 4, 21, &["\"frequency_drift\"", "did you mean"]);
}

/// [`STUDY`] with an angle in its fourth line.
fn with_angle(angle: &str) -> String {
    STUDY.replace("measure", &format!("angle = {angle}\nmeasure"))
}

#[test]
fn an_angle_is_whole_numbers_of_two_keys() {
    assert_eq!(study(STUDY).angle, None);
    // λ of b and c, then ϖ of b and c, by hand.
    let forms: [(&str, [i32; 2], [i32; 2]); 5] = [
        ("3 c.mean_longitude - 2 b.mean_longitude - b.longitude_of_pericentre", [-2, 3], [-1, 0]),
        ("-2 b.mean_longitude +3 c.mean_longitude -b.longitude_of_pericentre", [-2, 3], [-1, 0]),
        ("b.longitude_of_pericentre − c.longitude_of_pericentre", [0, 0], [1, -1]),
        (
            "+ c.mean_longitude + c.mean_longitude - b.mean_longitude - 1 c.longitude_of_pericentre",
            [-1, 2],
            [0, -1],
        ),
        ("  5 c.mean_longitude  -  3 b.mean_longitude - 2 b.longitude_of_pericentre ", [-3, 5], [-2, 0]),
    ];
    for (text, longitudes, pericentres) in forms {
        let angle = study(&with_angle(&format!("\"{text}\""))).angle.unwrap();
        assert_eq!(angle.text, text);
        assert_eq!(
            (&angle.longitudes[..], &angle.pericentres[..]),
            (&longitudes[..], &pericentres[..]),
            "{text}"
        );
    }
}

#[test]
fn wrong_angles() {
    let wrong = |angle: &str, fault, column, words: &[&str]| {
        check(&with_angle(&format!("\"{angle}\"")), fault, 4, column, words);
    };
    let sum = ["sum to 1", "d'Alembert", "- b.longitude_of_pericentre"];
    wrong("3 c.mean_longitude - 2 b.mean_longitude", Fault::BadAngle, 10, &sum);
    wrong("b.mean_longitude - b.mean_longitude", Fault::BadAngle, 10, &["cancel"]);
    wrong("2 e.mean_longitude - 2 b.mean_longitude", Fault::UnknownBody, 12, &["\"e\"", "b, c"]);
    wrong("star.mean_longitude - b.mean_longitude", Fault::UnknownBody, 10, &["\"star\"", "b, c"]);
    wrong("all.mean_longitude - b.mean_longitude", Fault::UnknownBody, 10, &["\"all\"", "b, c"]);
    let near = ["did you mean \"mean_longitude\"?"];
    wrong("c.mean_longitud - b.mean_longitude", Fault::UnknownKey, 12, &near);
    wrong("c.ascending_node - b.ascending_node", Fault::UnknownKey, 12, &["only these two"]);
    wrong("3 2 c.mean_longitude - b.mean_longitude", Fault::BadAngle, 12, &["one number"]);
    wrong("c.mean_longitude b.mean_longitude", Fault::BadAngle, 27, &["+ or -"]);
    wrong("c.mean_longitude - - b.mean_longitude", Fault::BadAngle, 29, &["a sign where"]);
    wrong("c.mean_longitude - b.mean_longitude -", Fault::BadAngle, 46, &["finish"]);
    wrong("2c.mean_longitude - 2 b.mean_longitude", Fault::UnknownBody, 10, &["\"2c\""]);
    wrong("0 c.mean_longitude - b.mean_longitude", Fault::OutOfRange, 10, &["1 to 1000"]);
    wrong("99999999999 c.mean_longitude", Fault::OutOfRange, 10, &["1 to 1000"]);
    wrong("", Fault::BadAngle, 10, &["finish"]);
    wrong("nonsense", Fault::BadAngle, 10, &["body.key"]);
    wrong("1.5 c.mean_longitude - 1.5 b.mean_longitude", Fault::BadAngle, 10, &["whole numbers; multiply"]);
    check(&with_angle("3"), Fault::WrongType, 4, 9, &["in quotes"]);
}

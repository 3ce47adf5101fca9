//! Robustness on real input: forty systems of the Open Exoplanet Catalogue, read, looked at and followed.

mod truth_support;

use std::process::Command;

use abide::verdict::Verdict;
use truth_support::catalogue::{CatalogueSystem, systems};

fn folder_with(system: &CatalogueSystem) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join(system.file_name()), &system.file).unwrap();
    folder
}

/// The program reads each of them and names every planet; nothing it prints is not a number or wider than 100 columns.
#[test]
fn inspect_reads_every_catalogue_system() {
    let systems = systems();
    assert_eq!(systems.len(), 40);
    assert_eq!(systems.iter().map(|s| s.planets).sum::<usize>(), 100);
    for system in &systems {
        let folder = folder_with(system);
        let output = Command::new(env!("CARGO_BIN_EXE_abide"))
            .arg("inspect")
            .arg(system.file_name())
            .current_dir(folder.path())
            .output()
            .unwrap();
        let said = String::from_utf8(output.stdout).unwrap();
        let complaint = String::from_utf8(output.stderr).unwrap();
        assert!(output.status.success(), "{}: {complaint}\n{}", system.name, system.file);
        assert!(said.contains(&system.name), "{}:\n{said}", system.name);
        let lines_for = said.lines().filter(|l| l.split_whitespace().next().is_some_and(|w| w.len() == 1));
        assert!(lines_for.count() >= system.planets, "{}:\n{said}", system.name);
        for line in said.lines() {
            assert!(line.chars().count() <= 100, "{}: {} columns: {line}", system.name, line.chars().count());
        }
        assert!(!said.contains("NaN") && !said.contains("inf "), "{}:\n{said}", system.name);
    }
}

/// Each is followed for 1e3 orbits of its inner planet: a verdict that carries its energy error, and only numbers.
#[test]
fn every_catalogue_system_is_followed_to_a_verdict() {
    for system in systems() {
        let found = system.follow(1e3);
        let label = format!("{}: {found:?}", system.name);
        let error = found.energy_error.unwrap_or_else(|| panic!("no energy error: {label}"));
        assert!(error.is_finite() && error >= 0.0, "{label}");
        assert!(found.end_time_day.is_finite() && found.end_time_day > 0.0, "{label}");
        assert_eq!(found.extent.len(), system.planets, "{label}");
        for extent in &found.extent {
            let ranges = [extent.semi_major_axis_au, extent.eccentricity, extent.inclination];
            assert!(ranges.iter().all(|r| r.min.is_finite() && r.max >= r.min), "{label}");
        }
        let sound = found.megno.is_none_or(f64::is_finite) && found.steps > 0 && found.step_day > 0.0;
        assert!(sound, "{label}");
        assert!(error <= 1e-6 || found.verdict == Verdict::Untrusted, "{label}");
        assert_eq!(found.loss.is_some(), found.verdict == Verdict::Lost, "{label}");
    }
}

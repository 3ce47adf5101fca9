mod radau_support;
use abide::integrate::forces::Forces;
use abide::integrate::radau::Engine;
use radau_support::*;

#[test]
#[ignore]
fn giants() {
    let (_, all) = solar_system("DE406");
    let state = only(&all, &[4, 5, 6, 7]);
    let one: Vec<f64> = std::env::var("TOL")
        .ok()
        .map(|t| vec![t.parse().unwrap()])
        .unwrap_or(vec![1e-17, 1e-19, 1e-20, 1e-21, 1e-23]);
    for tol in one {
        let mut e = Engine::from_state(&state, &[], &Forces::newton(), tol).unwrap();
        let t = std::time::Instant::now();
        let mut worst: f64 = 0.0;
        let yrs = 100_000.0;
        let mut sq = 0.0;
        for k in 1..=100 {
            run(&mut e, yrs * 365.25 * k as f64 / 100.0);
            worst = worst.max(e.energy_error().unwrap().abs());
            sq += e.energy_error().unwrap() / 100.0;
        }
        let w = e.work();
        let orbits = yrs / 11.862;
        println!(
            "{tol:e}: worst {worst:e} mean {sq:e} end {:e} steps/orbit {:.1} ev/step {:.2} sweeps/step {:.2} rej {} us/orbit {:.2}",
            e.energy_error().unwrap(),
            w.steps as f64 / orbits,
            w.evaluations as f64 / w.steps as f64,
            w.sweeps as f64 / w.steps as f64,
            w.rejected,
            t.elapsed().as_secs_f64() * 1e6 / orbits
        );
    }
}

#[test]
#[ignore]
fn pythagoras() {
    let rows = table("three-body-classics.csv");
    for problem in ["pythagorean", "figure-eight-refined", "lagrange-stable", "lagrange-unstable"] {
        for tol in [1e-16, 1e-19, 1e-22] {
            let bodies = start(&rows, problem);
            let mut e = Engine::from_bodies(&bodies, &[], &Forces::newton(), tol).unwrap();
            let mut times: Vec<f64> = rows
                .iter()
                .filter(|r| r["problem"] == problem && r["part"] == "trajectory")
                .map(|r| r["t"].parse().unwrap_or(f64::NAN))
                .filter(|t: &f64| t.is_finite())
                .collect();
            times.dedup();
            let mut s = String::new();
            for t in times {
                run(&mut e, t);
                let b = e.bodies();
                let mut k = 0;
                let mut worst: f64 = 0.0;
                for r in rows.iter().filter(|r| {
                    r["problem"] == problem
                        && r["part"] == "trajectory"
                        && r["t"].parse::<f64>().ok() == Some(t)
                }) {
                    worst = worst.max(distance(&triple(r, AT), &b.pos[k]));
                    k += 1;
                }
                s += &format!(" {t}:{worst:.1e}");
            }
            println!("{problem} {tol:e} dE {:e} {:?}\n   {s}", e.energy_error().unwrap(), e.work());
        }
    }
}
#[test]
#[ignore]
fn long() {
    let (_, all) = solar_system("DE406");
    for tol in [1e-20, 1e-21, 1e-22] {
        let mut s = String::new();
        for shift in 0..3 {
            let mut state = only(&all, &[4, 5, 6, 7]);
            state.pos[0][2] += 1e-3 * shift as f64;
            let mut e = Engine::from_state(&state, &[], &Forces::newton(), tol).unwrap();
            for yr in [1e4, 3e4, 1e5, 3e5] {
                run(&mut e, yr * 365.25);
                s += &format!(" {:.1e}", e.energy_error().unwrap());
            }
            s += "; ";
        }
        println!("{tol:e}: {s}");
    }
}

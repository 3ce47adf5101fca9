use abide::integrate::*;

fn circularish(star: f64, planets: &[(f64, f64, f64, f64)]) -> State {
    // (gm, a, e, phase) coplanar at pericentre angle phase
    let mut pos = vec![];
    let mut vel = vec![];
    let mut gm = vec![];
    for &(m, a, e, ph) in planets {
        let r = a * (1.0 - e);
        let v = ((star + m) / a * (1.0 + e) / (1.0 - e)).sqrt();
        let (s, c) = ph.sin_cos();
        pos.push([r * c, r * s, 0.0]);
        vel.push([-v * s, v * c, 0.0]);
        gm.push(m);
    }
    let total: f64 = star + gm.iter().sum::<f64>();
    let mut drift = [0.0; 3];
    for (m, v) in gm.iter().zip(&vel) {
        for k in 0..3 {
            drift[k] += m * v[k] / total;
        }
    }
    for v in vel.iter_mut() {
        for k in 0..3 {
            v[k] -= drift[k];
        }
    }
    State { star_gm: star, gm, pos, vel }
}

#[test]
fn dbg() {
    let s = circularish(1.0, &[(1e-3, 1.0, 0.05, 0.0), (3e-4, 1.83, 0.05, 2.0)]);
    let t = Tangent { pos: vec![[1.0, 0.3, 0.2]; 2], vel: vec![[0.1, 0.2, 0.3]; 2] };
    let e0 = energy(&s);
    for scheme in Scheme::all() {
        for per in [10.0, 20.0, 40.0] {
            for corr in [false, true] {
                let stages = scheme.stages() as f64;
                let h = 6.283185307179586 / per * stages.sqrt();
                let mut b = Block::new(1, 2);
                b.start(0, &s, &t, h, 1.0);
                if corr {
                    to_map(&mut b, scheme);
                }
                let mut worst = 0.0f64;
                for _ in 0..500 {
                    advance(Advance { block: &mut b, scheme, steps: 4 * 13, tangent: true });
                    let mut c = b.clone();
                    if corr {
                        from_map(&mut c, scheme);
                    }
                    worst = worst.max(((energy(&c.state(0)) - e0) / e0).abs());
                }
                println!("{} per {per} corr {corr} err {worst:e} {:?}", scheme.name, b.growth(0));
            }
        }
    }
    panic!();
}

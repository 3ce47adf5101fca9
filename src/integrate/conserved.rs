//! What the motion conserves, from a state in democratic heliocentric coordinates.

use super::State;

/// Total energy times G, au⁵ day⁻⁴.
///
/// Σ mᵢ(vᵢ²/2 − M/qᵢ) + |Σ mᵢvᵢ|²/2M − Σ mᵢmⱼ/dᵢⱼ with masses as G × mass.
pub fn energy(state: &State) -> f64 {
    let mut momentum = [0.0; 3];
    let mut total = 0.0;
    for ((gm, pos), vel) in state.gm.iter().zip(&state.pos).zip(&state.vel) {
        total += gm * (0.5 * dot(vel, vel) - state.star_gm / dot(pos, pos).sqrt());
        for k in 0..3 {
            momentum[k] += gm * vel[k];
        }
    }
    total += 0.5 * dot(&momentum, &momentum) / state.star_gm;
    for (i, (gm_i, a)) in state.gm.iter().zip(&state.pos).enumerate() {
        for (gm_j, b) in state.gm.iter().zip(&state.pos).skip(i + 1) {
            let d = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
            total -= gm_i * gm_j / dot(&d, &d).sqrt();
        }
    }
    total
}

/// Total angular momentum times G, au⁵ day⁻³: Σ mᵢ qᵢ × vᵢ.
pub fn angular_momentum(state: &State) -> [f64; 3] {
    let mut total = [0.0; 3];
    for ((gm, q), v) in state.gm.iter().zip(&state.pos).zip(&state.vel) {
        total[0] += gm * (q[1] * v[2] - q[2] * v[1]);
        total[1] += gm * (q[2] * v[0] - q[0] * v[2]);
        total[2] += gm * (q[0] * v[1] - q[1] * v[0]);
    }
    total
}

fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

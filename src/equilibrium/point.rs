//! The state at one value of the unknowns: concentrations, and how far each balance is
//! from closing.

use super::coordinates::Coordinates;

/// Above this ln c, all concentrations and totals are divided by the largest
/// concentration, so that a search that starts far off overflows nowhere.
const LN_MOST: f64 = 300.0;
/// Below this ln c is taken as this, so that no row comes to nothing.
const LN_LEAST: f64 = -690.0;
const LEAST: f64 = 2.2e-300;

#[derive(Clone, Debug, Default)]
pub(super) struct Point {
    pub u: Vec<f64>,
    /// `constant + α·u` of each present species: its ln activity but for the share of
    /// phases held by concentration.
    pub ln_activities: Vec<f64>,
    pub concentrations: Vec<f64>,
    /// The positive terms of each row, a negative total among them.
    pub positive: Vec<f64>,
    /// The negative ones, a positive total among them.
    pub negative: Vec<f64>,
    /// ln of what all of the amounts above were divided by; nearly always zero.
    pub ln_scale: f64,
}

impl Point {
    /// Everything else from `u`. `shifts` are what activity coefficients add to each
    /// ln c; none where all are ideal.
    pub fn evaluate(&mut self, at: &Coordinates, shifts: &[f64]) {
        let n = at.species.len();
        self.ln_activities.resize(n, 0.0);
        self.concentrations.resize(n, 0.0);
        let mut most = f64::NEG_INFINITY;
        for i in 0..n {
            let mut ln_activity = at.constants[i];
            for &(j, value) in at.row(i) {
                ln_activity += value * self.u[j as usize];
            }
            self.ln_activities[i] = ln_activity;
            let ln_c = ln_activity + shifts.get(i).copied().unwrap_or(0.0);
            self.concentrations[i] = ln_c;
            most = most.max(ln_c);
        }
        self.ln_scale = if most > LN_MOST { most } else { 0.0 };
        let scale = (-self.ln_scale).exp();
        self.positive.clear();
        self.positive.extend(at.totals.iter().map(|t| (-t).max(0.0) * scale));
        self.negative.clear();
        self.negative.extend(at.totals.iter().map(|t| t.max(0.0) * scale));
        for i in 0..n {
            let ln_c = self.concentrations[i] - self.ln_scale;
            let c = if ln_c > LN_LEAST { ln_c.exp() } else { LEAST };
            self.concentrations[i] = c;
            for &(j, value) in at.row(i) {
                if value > 0.0 {
                    self.positive[j as usize] += value * c;
                } else {
                    self.negative[j as usize] -= value * c;
                }
            }
        }
    }

    /// The worst row: what is left over the sum of its terms.
    pub fn residual(&self) -> f64 {
        let rows = self.positive.iter().zip(&self.negative);
        let open = rows.map(|(p, n)| (p - n).abs() / (p + n));
        // A row that is not a number counts as wholly open.
        open.map(|r| if r.is_nan() { 1.0 } else { r }).fold(0.0, f64::max)
    }

    /// `Σ_j (positive − negative)_j · direction_j`: the slope of the convex function
    /// whose minimum is the answer, divided by the scale.
    pub fn slope(&self, direction: &[f64]) -> f64 {
        let rows = self.positive.iter().zip(&self.negative);
        rows.zip(direction).map(|((p, n), d)| (p - n) * d).sum()
    }
}

//! Load cycles by rainflow counting (ASTM E1049-85, 5.4.4), one sample at a time.
//!
//! Ranges below a dead band are no cycles: the turning points are found with that hysteresis first.
//! What remains open at the end counts as half cycles.

/// Counts cycles of one quantity.
#[derive(Clone, Debug)]
pub struct Rainflow {
    dead_band: f64,
    /// Turning points that are not closed yet.
    stack: Vec<f64>,
    /// The value that may become the next turning point.
    candidate: Option<f64>,
    rising: Option<bool>,
    /// Range and count (1 or 0.5).
    closed: Vec<(f64, f64)>,
}

impl Rainflow {
    /// A counter that passes over ranges at or below `dead_band` (in the quantity's own unit; zero
    /// passes over plateaus only).
    #[must_use]
    pub const fn new(dead_band: f64) -> Self {
        Self { dead_band, stack: Vec::new(), candidate: None, rising: None, closed: Vec::new() }
    }

    /// Takes the next value. What is not finite is passed over.
    pub fn push(&mut self, value: f64) {
        if !value.is_finite() {
            return;
        }
        let Some(candidate) = self.candidate else {
            // The first value is a turning point by definition.
            self.stack.push(value);
            self.candidate = Some(value);
            return;
        };
        match self.rising {
            None if (value - candidate).abs() > self.dead_band => {
                self.rising = Some(value > candidate);
                self.candidate = Some(value);
            }
            Some(true) if value >= candidate => self.candidate = Some(value),
            Some(false) if value <= candidate => self.candidate = Some(value),
            Some(rising) if (value - candidate).abs() > self.dead_band => {
                self.turn(candidate);
                self.rising = Some(!rising);
                self.candidate = Some(value);
            }
            None | Some(_) => {}
        }
    }

    /// A turning point: closes what it closes.
    fn turn(&mut self, point: f64) {
        self.stack.push(point);
        while let [.., a, b, c] = self.stack[..] {
            let (latest, before) = ((c - b).abs(), (b - a).abs());
            if latest < before {
                break;
            }
            if self.stack.len() == 3 {
                // The range contains the first point: half a cycle, and the first point goes.
                self.closed.push((before, 0.5));
                self.stack.remove(0);
            } else {
                self.closed.push((before, 1.0));
                let last = self.stack.len() - 1;
                self.stack.drain(last - 2..last);
            }
        }
    }

    /// All ranges with their counts (1 or 0.5), smallest range first. The counter can go on.
    #[must_use]
    pub fn cycles(&self) -> Vec<(f64, f64)> {
        let mut end = self.clone();
        if let (Some(candidate), Some(_)) = (self.candidate, self.rising) {
            end.turn(candidate);
        }
        for pair in end.stack.windows(2) {
            if let [a, b] = pair {
                end.closed.push(((b - a).abs(), 0.5));
            }
        }
        end.closed.sort_by(|x, y| x.0.total_cmp(&y.0));
        end.closed
    }
}

#[cfg(test)]
mod tests {
    use super::Rainflow;

    fn count(series: &[f64]) -> Vec<(f64, f64)> {
        let mut rainflow = Rainflow::new(0.0);
        for &value in series {
            rainflow.push(value);
        }
        let mut summed: Vec<(f64, f64)> = Vec::new();
        for (range, cycles) in rainflow.cycles() {
            match summed.last_mut() {
                Some(last) if (last.0 - range).abs() < 1e-9 => last.1 += cycles,
                _ => summed.push((range, cycles)),
            }
        }
        summed
    }

    #[test]
    fn the_standards_example() {
        // ASTM E1049-85, 5.4.4, figure 6.
        let series = [-2.0, 1.0, -3.0, 5.0, -1.0, 3.0, -4.0, 4.0, -2.0];
        let expected = [(3.0, 0.5), (4.0, 1.5), (6.0, 0.5), (8.0, 1.0), (9.0, 0.5)];
        assert_eq!(count(&series), expected);
    }

    #[test]
    fn full_cycles_and_shrinking_ones() {
        // Counts by the library rainflow 3.2.0 for the same series.
        assert_eq!(
            count(&[0.0, 8.0, 2.0, 8.0, 0.0, 10.0, 1.0, 9.0, 3.0, 9.0, 0.0]),
            [(6.0, 2.0), (8.0, 2.0), (10.0, 1.0)]
        );
        assert_eq!(count(&[2.0, 9.0, 2.0, 9.0, 2.0]), [(7.0, 2.0)]);
        let halves: Vec<_> = (1..=8).map(|range| (f64::from(range), 0.5)).collect();
        assert_eq!(count(&[8.0, 0.0, 7.0, 1.0, 6.0, 2.0, 5.0, 3.0, 4.0]), halves);
    }

    #[test]
    fn ripple_inside_the_dead_band_is_no_cycle() {
        let mut rainflow = Rainflow::new(0.1);
        for step in 0..1000 {
            rainflow.push(0.5 + if step % 2 == 0 { 0.04 } else { -0.04 });
        }
        assert!(rainflow.cycles().is_empty());
    }
}

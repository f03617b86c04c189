//! The plate of a panel under the core's pressure states, in f64: largest moment and deflection
//! over the checked points, and what stands for it on the device.

mod device;

pub(crate) use device::{Inward, Judged, Plates, judged};

use crate::plate::{
    DEFLECTION_PER_THICKNESS_MAX, Direction, Edge, Edges, Outline, Place, ReactionAt,
    SPAN_PER_THICKNESS_MIN, Table, Weighted, rigidity_n_m, solve,
};
use crate::tank::{Capacity, Elastic, Panel, PanelPlate, Part as Stated, Rating, outline};
use std::collections::VecDeque;
use std::sync::{Arc, Mutex};
use strake_core::liquid::States;
use strake_core::pressure::Pressure;

/// A plate whose influence functions are solved.
#[derive(Clone, Debug)]
pub(crate) struct Bending {
    /// As the file states it.
    pub(crate) plate: PanelPlate,
    /// How stiff it is.
    pub(crate) elastic: Elastic,
    key: Key,
    span_m: f64,
    length_m: f64,
    sine: f64,
    bottom_m: f64,
    solved: Arc<Solved>,
}

/// The influence functions of one plate.
#[derive(Debug)]
struct Solved {
    series_error: f64,
    moments: Vec<(Place, Direction, Weighted)>,
    deflections: Vec<Weighted>,
    reactions: Vec<ReactionAt>,
}

/// What the functions follow from.
type Key = (Outline, Edges, f64);

/// A weighting with the sign that even pressure from the liquid gives its moment.
fn outward(weight: &Table) -> Table {
    if weight.total() < 0.0 {
        Table::new(weight.points().map(|(s_m, w)| (s_m, -w)))
    } else {
        weight.clone()
    }
}

/// The last plates solved: an inverse question compiles one file many times.
static SOLVED: Mutex<VecDeque<(Key, Arc<Solved>)>> = Mutex::new(VecDeque::new());
/// Plates kept, as many as a tank has parts.
const KEPT: usize = crate::tank::MAX_PARTS;

/// The functions of a plate, from those kept or anew.
fn solved(key: Key) -> Option<Arc<Solved>> {
    let kept = SOLVED.lock().ok();
    let found = kept.as_ref().and_then(|kept| kept.iter().find(|(one, _)| *one == key));
    if let Some((_, solved)) = found {
        return Some(Arc::clone(solved));
    }
    drop(kept);
    let (outline, edges, poisson) = key;
    let solution = solve(outline, edges, poisson).ok()?;
    let moments = solution.moments.into_iter();
    let new = Arc::new(Solved {
        series_error: solution.series_error,
        moments: moments
            .map(|one| (one.place, one.direction, outward(&one.weight).split()))
            .collect(),
        deflections: solution.deflections.iter().map(|one| one.weight.split()).collect(),
        reactions: solution.reactions,
    });
    if let Ok(mut kept) = SOLVED.lock() {
        kept.truncate(KEPT - 1);
        kept.push_front((key, Arc::clone(&new)));
    }
    Some(new)
}

/// What bends most.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Bent {
    /// Largest moment, N m/m; positive in the direction that was asked for.
    pub(crate) moment_n: f64,
    /// Where it stands.
    pub(crate) place: Place,
    /// In which direction.
    pub(crate) direction: Direction,
    /// Largest deflection by size, times the rigidity, N m².
    deflection_n_m2: f64,
}

impl Bending {
    /// The plates among the outward capacities of a part.
    pub(crate) fn of_part(stated: &Stated) -> Vec<Self> {
        Self::among(stated, stated.capacity())
    }

    /// The plates among the inward capacities of a part.
    pub(crate) fn inward_of_part(stated: &Stated) -> Vec<Self> {
        Self::among(stated, stated.capacity_inward())
    }

    fn among(stated: &Stated, ratings: &[Rating]) -> Vec<Self> {
        let Stated::Panel(panel) = stated else { return Vec::new() };
        let plates = ratings.iter().filter_map(|rating| match &rating.capacity.value {
            Capacity::Panel(plate) => Self::new(panel, plate, rating),
            _ => None,
        });
        plates.collect()
    }

    /// `None` for a plate that the tank room refuses.
    fn new(panel: &Panel, plate: &PanelPlate, rating: &Rating) -> Option<Self> {
        let outline = outline(panel)?;
        let elastic = plate.elastic(rating);
        let key = (outline, plate.edges.value, elastic.poisson);
        let solved = solved(key)?;
        Some(Self {
            key,
            length_m: outline.length_m(),
            plate: plate.clone(),
            elastic,
            span_m: outline.span_m(),
            sine: panel.plane.sine(),
            bottom_m: panel.plane.heights.bottom_m,
            solved,
        })
    }

    /// Largest difference between two orders of the series, share of the largest moment.
    pub(crate) fn series_error(&self) -> f64 {
        self.solved.series_error
    }

    /// Reaction of largest size at the base, a side and the top under one pressure, N/m, and of a
    /// lower and an upper corner, N; `None` where the series gives none.
    pub(crate) fn reactions<const N: usize>(
        &self,
        pressure: &Pressure<N>,
        lane: usize,
    ) -> Option<[f64; 5]> {
        let edges = [Edge::Base, Edge::Side, Edge::Top, Edge::LowerCorner, Edge::UpperCorner];
        let each = edges.map(|edge| {
            let own = self.solved.reactions.iter().filter(|one| one.edge == edge);
            let loads = own.map(|one| self.load(&one.weight, pressure, lane));
            loads.max_by(|a, b| a.abs().total_cmp(&b.abs())).unwrap_or(0.0)
        });
        (!self.solved.reactions.is_empty()).then_some(each)
    }

    /// Largest outward moment and deflection under one pressure, the given lane of it.
    pub(crate) fn under<const N: usize>(&self, pressure: &Pressure<N>, lane: usize) -> Bent {
        self.most(|weight| [self.load(&weight.whole, pressure, lane); 2], 1.0)
    }

    /// The largest that any pressure between the lower and the upper state gives.
    pub(crate) fn bound<const N: usize>(&self, states: &States<N>, lane: usize) -> Bent {
        self.most(|weight| self.between(weight, states, lane), 1.0)
    }

    /// Largest inward moment under one pressure.
    pub(crate) fn inward<const N: usize>(&self, pressure: &Pressure<N>, lane: usize) -> Bent {
        self.most(|weight| [self.load(&weight.whole, pressure, lane); 2], -1.0)
    }

    /// Likewise of any pressure between the lower and the upper state.
    pub(crate) fn inward_bound<const N: usize>(&self, states: &States<N>, lane: usize) -> Bent {
        self.most(|weight| self.between(weight, states, lane), -1.0)
    }

    /// The largest and the least load that any pressure between the lower and the upper state
    /// gives.
    fn between<const N: usize>(
        &self,
        weight: &Weighted,
        states: &States<N>,
        lane: usize,
    ) -> [f64; 2] {
        let (upper, lower) = (&states.upper, &states.lower);
        let at = |table, pressure| self.load(table, pressure, lane);
        let most = at(&weight.positive, upper) - at(&weight.negative, lower);
        let least = at(&weight.positive, lower) - at(&weight.negative, upper);
        [most, least]
    }

    /// The influence function of a moment: its table up the slope, with both parts.
    pub(crate) fn influence(&self, bent: &Bent) -> Option<&Weighted> {
        let mut moments = self.solved.moments.iter();
        let here = |place: &Place, direction: Direction| {
            *place == bent.place && direction == bent.direction
        };
        moments.find(|(place, direction, _)| here(place, *direction)).map(|(.., weight)| weight)
    }

    /// What bends most, outward or inward by `sign`; the deflection either way.
    fn most(&self, load: impl Fn(&Weighted) -> [f64; 2], sign: f64) -> Bent {
        let signed = |[most, least]: [f64; 2]| if sign < 0.0 { -least } else { most };
        let deflections = self.solved.deflections.iter().map(&load);
        let sized = deflections.map(|[most, least]| most.abs().max(least.abs()));
        let mut bent = Bent {
            moment_n: 0.0,
            place: Place { x_m: 0.0, s_m: 0.0 },
            direction: Direction::Up,
            deflection_n_m2: sized.fold(0.0, f64::max),
        };
        for (place, direction, weight) in &self.solved.moments {
            let moment_n = signed(load(weight));
            if moment_n > bent.moment_n {
                bent = Bent { moment_n, place: *place, direction: *direction, ..bent };
            }
        }
        bent
    }

    /// `integral p w ds` by the one formula: the surfaces as heights up the slope.
    fn load<const N: usize>(&self, table: &Table, pressure: &Pressure<N>, lane: usize) -> f64 {
        let mut load = f64::from(pressure.gas_pa.lane(lane)) * table.total();
        for surface in pressure.surfaces() {
            let step_n_m3 = f64::from(surface.step_n_m3.lane(lane));
            let above_m = f64::from(surface.height_m.lane(lane)) - self.bottom_m;
            load += if self.sine > 0.0 {
                step_n_m3 * self.sine * table.ramp(above_m / self.sine)
            } else {
                step_n_m3 * above_m.max(0.0) * table.total()
            };
        }
        load
    }

    /// Bending stress 6 M / t² in what the corrosion allowance leaves, Pa.
    pub(crate) fn stress_pa(&self, bent: &Bent) -> f64 {
        6.0 * bent.moment_n / self.plate.sound_m().powi(2)
    }

    /// Moment as a share of what the plate may carry.
    pub(crate) fn utilisation(&self, bent: &Bent) -> f64 {
        bent.moment_n / self.plate.moment_n()
    }

    /// Largest deflection, m.
    pub(crate) fn deflection_m(&self, bent: &Bent) -> f64 {
        self.deflection_at(bent, self.plate.sound_m())
    }

    fn deflection_at(&self, bent: &Bent, thickness_m: f64) -> f64 {
        bent.deflection_n_m2
            / rigidity_n_m(self.elastic.modulus_pa, self.elastic.poisson, thickness_m)
    }

    /// Why the theory of thin plates does not hold for this plate at all.
    pub(crate) fn too_thick(&self) -> Option<String> {
        let spans = self.span_m / self.plate.thickness_m.value;
        (spans < SPAN_PER_THICKNESS_MIN).then(|| {
            format!(
                "thin-plate theory not valid: the span is {spans:.1} thicknesses, it takes \
                 {SPAN_PER_THICKNESS_MIN}"
            )
        })
    }

    /// Whether the deflection is that of small-deflection theory.
    pub(crate) fn is_small(&self, bent: &Bent) -> bool {
        self.deflection_m(bent) <= DEFLECTION_PER_THICKNESS_MAX * self.plate.sound_m()
    }

    /// Thickness at which this moment uses the allowable stress, allowance included, m; `None`
    /// where the theory would not hold for a plate of that thickness.
    pub(crate) fn thickness_m(&self, bent: &Bent) -> Option<f64> {
        let sound_m = (6.0 * bent.moment_n / self.plate.allowable_stress_pa.value).sqrt();
        let whole_m = sound_m + self.plate.allowance_m();
        let small = self.deflection_at(bent, sound_m) <= DEFLECTION_PER_THICKNESS_MAX * sound_m;
        let thin = self.span_m >= SPAN_PER_THICKNESS_MIN * whole_m;
        (sound_m > 0.0 && small && thin).then_some(whole_m)
    }
}

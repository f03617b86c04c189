//! A day of a tank that rests for four fifths of it: samples, life of the cell, flash.

use crate::bench::{DAY_MS, Logged, Path, brine_plan, brine_tank, run};
use strake::energy::{consumption, estimate};

const IDLE: &str = "idle_interval = \"60 s\"";

/// Filled by 1.728 m and drawn down again at 0.2 mm/s: two times 2 h 24 min in motion.
fn day(idle: &str) -> Logged {
    let hours = |hours: f64| (hours * 3.6e6) as u64;
    let (low_m, high_m) = (3.0, 4.728);
    let points = vec![
        (0, low_m),
        (hours(6.0), low_m),
        (hours(8.4), high_m),
        (hours(16.0), high_m),
        (hours(18.4), low_m),
        (DAY_MS, low_m),
    ];
    run(&brine_plan(&[(IDLE, idle)]), Box::new(Path(points)), 0.1, &[], DAY_MS)
}

#[test]
fn the_adaptive_interval_makes_the_cell_last() {
    let fixed = day("idle_interval = \"10 s\"");
    println!("idle     samples  flash, B  mAh a day  life, days  times");
    for (idle, least) in [(IDLE, 2.8), ("idle_interval = \"300 s\"", 4.0)] {
        let adaptive = day(idle);
        let file = brine_tank(&[(IDLE, idle)]);
        let power = file.power.as_ref().unwrap();
        let [was, is] =
            [&fixed, &adaptive].map(|logged| consumption(power, logged.samples() as f64));
        let times = is.life_days / was.life_days;
        for (name, logged, of, times) in [("10 s", &fixed, was, 1.0), (idle, &adaptive, is, times)]
        {
            println!(
                "{name:24} {:7}  {:8}  {:9.2}  {:10.0}  {times:5.2}",
                logged.samples(),
                logged.bytes,
                of.charge_per_day_c / 3.6,
                of.life_days
            );
        }
        assert!(times >= least, "{times} with {idle}");
        // What `strake assess` prints without a simulation is not far from it.
        let printed = estimate(&file).unwrap();
        let off = printed.adaptive.samples_per_day / is.samples_per_day - 1.0;
        assert!(off.abs() < 0.03, "{off}");
    }
}

//! How much of the line's rate is journal, acknowledgements and everything else included.

use super::fake::{FakeDevice, shared};
use super::line::Line;
use crate::journal_file::{JournalFile, PartFile};
use crate::link::{Client, collect};
use std::ops::ControlFlow;
use std::time::Duration;

/// Bit error rate, polling delay of the host in ms, least share of the line's rate.
const ROWS: [(f64, u64, f64); 9] = [
    (0.0, 0, 0.95),
    (0.0, 16, 0.95),
    (1e-6, 0, 0.95),
    (1e-6, 16, 0.95),
    (1e-5, 0, 0.90),
    (1e-5, 16, 0.90),
    (1e-4, 0, 0.78),
    (1e-4, 16, 0.78),
    // Beyond use; it must only come to its end with the right content.
    (1e-3, 16, 0.0),
];

#[test]
#[expect(clippy::cast_precision_loss, reason = "counts far below 2^53")]
fn the_share_of_the_line_holds_and_nothing_wrong_is_accepted() {
    println!("bit errors  delay  share  bits flipped  frames damaged  asked again");
    for (seed, (rate, delay_ms, least)) in (1..).zip(ROWS) {
        let mut device = FakeDevice::new(1000, if rate > 5e-4 { 40 } else { 250 });
        device.plans.clear();
        let device = shared(device);
        let directory = tempfile::tempdir().unwrap();
        let target = directory.path().join("line.journal");
        let line = Line::new(&device, rate, Duration::from_millis(delay_ms), seed);
        let mut client = Client::connect(line).unwrap();
        let mut part = PartFile::open(&directory.path().join("line.part")).unwrap();
        let begin = client.port.byte_times();
        let go_on = &mut |_: &_| ControlFlow::Continue(());
        let collected = collect(&mut client, &mut part, None, go_on).unwrap();
        let share = collected.bytes as f64 / (client.port.byte_times() - begin) as f64;
        let at_device = client.status().unwrap().link.bad_frames;
        let damaged = collected.damaged_frames + u64::from(at_device);
        println!(
            "{rate:10.0e}  {delay_ms:5}  {share:5.3}  {:12}  {damaged:14}  {:11}",
            client.port.flipped(),
            collected.lost_frames
        );
        assert!(share >= least, "{share} of the line at {rate}, wanted {least}");
        assert_eq!(rate > 0.0, client.port.flipped() > 0 && damaged > 0);

        part.finish(&collected.head, &target, false).unwrap();
        let mut file = JournalFile::open(&target).unwrap();
        for (sequence, bytes) in &device.borrow().sectors {
            assert_eq!(&file.sector(*sequence).unwrap().unwrap().bytes, bytes);
        }
        assert_eq!(file.sectors().count(), device.borrow().sectors.len());
    }
}

//! The journal beside a general flash queue (`sequential-storage`): the same records on the same
//! flash under the same faults, in one table, which a snapshot holds.
//!
//! The queue stores twelve bytes per record, one item each, durable when the call returns; the
//! journal waits for six samples, which is its default wait of a minute. `permit_clearing` gives
//! the queue the plain chip it is made for. Its caches are empty, as after a restart.

#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    clippy::cast_sign_loss,
    reason = "counts of records are small and positive"
)]

use crate::bench::{App, Remembered};
use embedded_storage_async::nor_flash as flash;
use sequential_storage::cache::page_pointers::HeapPagePointers;
use sequential_storage::cache::page_states::HeapPageStates;
use sequential_storage::cache::{Cache, Uncached};
use sequential_storage::queue::{QueueConfig, QueueStorage};
use std::fmt::Write as _;
use std::pin::pin;
use std::task::{Context, Poll, Waker};
use strake::sim::nor::{Cut, Nor, NorError, SECTOR_BYTES, Tear};
use strake_core::journal::{Entry, Item, Sample, SectorReader};
use strake_core::signal::{Channel, Quality};
use strake_firmware::journal::Journal;

/// Samples between two writes of the journal.
const WAIT: usize = 6;
const FULL_SECTORS: u32 = 2_048;
const DAY_S: f64 = 86_400.0;

/// The flash as the queue wants it.
#[derive(Clone)]
struct Async(Nor<4>);

impl flash::ErrorType for Async {
    type Error = NorError;
}

impl flash::ReadNorFlash for Async {
    const READ_SIZE: usize = 4;
    async fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorError> {
        embedded_storage::nor_flash::ReadNorFlash::read(&mut self.0, offset, bytes)
    }
    fn capacity(&self) -> usize {
        embedded_storage::nor_flash::ReadNorFlash::capacity(&self.0)
    }
}

impl flash::NorFlash for Async {
    const WRITE_SIZE: usize = 4;
    const ERASE_SIZE: usize = SECTOR_BYTES;
    async fn erase(&mut self, from: u32, to: u32) -> Result<(), NorError> {
        embedded_storage::nor_flash::NorFlash::erase(&mut self.0, from, to)
    }
    async fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorError> {
        embedded_storage::nor_flash::NorFlash::write(&mut self.0, offset, bytes)
    }
}

/// Nothing here ever waits.
fn now<T>(future: impl Future<Output = T>) -> T {
    let mut future = pin!(future);
    match future.as_mut().poll(&mut Context::from_waker(Waker::noop())) {
        Poll::Ready(value) => value,
        Poll::Pending => panic!("a flash in memory is always ready"),
    }
}

/// A sample every ten seconds: a level in half millimetres that swings by 0.4 m a day under noise
/// of 1 mm, a temperature in hundredths of a kelvin under noise of two of them.
fn sample(number: u32) -> Sample {
    let noise = |salt: u64| {
        let mut z = (u64::from(number) << 2 | salt).wrapping_mul(0x9E37_79B9_7F4A_7C15);
        (0..4).fold(0.0, |sum, _| {
            z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
            z ^= z >> 27;
            // The sum of four uniform numbers, brought to a deviation of one.
            sum + ((z >> 40) as f64 / f64::from(1 << 24) - 0.5) * 3.0_f64.sqrt()
        })
    };
    let day = f64::from(number) * 10.0 / DAY_S * std::f64::consts::TAU;
    let level = 10_000.0 + 400.0 * day.sin() + 2.0 * noise(0);
    let temperature = 2_000.0 + 300.0 * (day - 1.0).sin() + 2.0 * noise(1);
    let channel =
        |count: f64| Channel { count_16: count.round() as i32 * 16, quality: Quality::Good };
    Sample {
        tick_ms: u64::from(number) * 10_000,
        level: channel(level),
        temperature: channel(temperature),
        battery_mv: 3_600 - u16::try_from(number / 50_000).unwrap() * 10,
    }
}

/// The record of the queue: tick in tenths of a second, level, temperature, battery.
fn record(number: u32) -> [u8; 12] {
    let sample = sample(number);
    let mut bytes = [0; 12];
    bytes[..4].copy_from_slice(&(number * 100).to_le_bytes());
    bytes[4..8].copy_from_slice(&sample.level.count_16.to_le_bytes());
    let temperature = (sample.temperature.count_16 / 16) as u16;
    bytes[8..10].copy_from_slice(&temperature.to_le_bytes());
    bytes[10..].copy_from_slice(&sample.battery_mv.to_le_bytes());
    bytes
}

/// What is measured of either store.
trait Store: Sized {
    /// On a flash, with what a restart finds.
    fn open(flash: Nor<4>) -> Self;
    /// Takes the next sample; gives how many of the last ones are durable now.
    fn push(&mut self, number: u32) -> Result<usize, ()>;
    /// Numbers of everything that can be read, oldest first.
    fn read(flash: &Nor<4>) -> Vec<u32>;
    fn into_flash(self) -> Nor<4>;
    fn flash(&mut self) -> &mut Nor<4>;
}

type Pages = Cache<HeapPageStates, HeapPagePointers, Uncached>;

struct Queue(QueueStorage<Async, Pages>);

impl Store for Queue {
    fn open(mut flash: Nor<4>) -> Self {
        flash.permit_clearing(true);
        let len = flash.image().len();
        let pages = len / SECTOR_BYTES;
        let cache = Cache::new(HeapPageStates::new(pages), HeapPagePointers::new(pages), Uncached);
        let config = QueueConfig::new(0..u32::try_from(len).unwrap());
        Self(QueueStorage::new(Async(flash), config, cache))
    }

    fn push(&mut self, number: u32) -> Result<usize, ()> {
        now(self.0.push(&record(number), true)).map(|()| 1).map_err(drop)
    }

    fn read(flash: &Nor<4>) -> Vec<u32> {
        let mut queue = Self::open(flash.clone());
        let mut numbers = Vec::new();
        let mut buffer = [0; 64];
        let Ok(mut items) = now(queue.0.iter()) else { return numbers };
        while let Ok(Some(item)) = now(items.next(&mut buffer)) {
            if let Some(tick) = item.first_chunk::<4>() {
                let number = u32::from_le_bytes(*tick) / 100;
                // Anything but the very record counts as invented.
                let whole = item[..] == record(number);
                numbers.push(if whole { number } else { u32::MAX });
            }
        }
        numbers
    }

    fn into_flash(self) -> Nor<4> {
        self.0.destroy().0.0
    }

    fn flash(&mut self) -> &mut Nor<4> {
        &mut self.0.flash().0
    }
}

struct Ring {
    journal: Journal<Nor<4>>,
    app: App,
    pushed: usize,
}

impl Store for Ring {
    fn open(flash: Nor<4>) -> Self {
        let (journal, _) = Journal::open(flash, &mut Remembered::default()).unwrap();
        Self { journal, app: App::with_state(60), pushed: 0 }
    }

    fn push(&mut self, number: u32) -> Result<usize, ()> {
        self.journal.push(&sample(number), &mut self.app).map_err(drop)?;
        self.pushed += 1;
        if self.pushed.is_multiple_of(WAIT) {
            self.journal.flush().map(|()| WAIT).map_err(drop)
        } else {
            Ok(0)
        }
    }

    fn read(flash: &Nor<4>) -> Vec<u32> {
        let mut numbers = Vec::new();
        let image = flash.image();
        let mut sectors: Vec<_> = image.chunks(SECTOR_BYTES).flat_map(SectorReader::new).collect();
        sectors.sort_by_key(|sector| sector.header().sequence);
        for item in sectors.into_iter().flatten() {
            if let Item::Entry(Entry::Sample(found)) = item {
                let number = u32::try_from(found.tick_ms / 10_000).unwrap();
                numbers.push(if found == sample(number) { number } else { u32::MAX });
            }
        }
        numbers
    }

    fn into_flash(self) -> Nor<4> {
        self.journal.into_flash()
    }

    fn flash(&mut self) -> &mut Nor<4> {
        self.journal.flash_mut()
    }
}

/// Per record, over the laps of a small ring: bytes, words and calls that program, erases.
struct Density {
    bytes: f64,
    programs: f64,
    programmed: f64,
    erases: f64,
}

fn density<S: Store>() -> Density {
    let mut store = S::open(Nor::new(16));
    let mut number = 0;
    let mut lap = |store: &mut S| {
        let (mut count, erases) = (0_u32, store.flash().counters().erases);
        while store.flash().counters().erases < erases + 32 {
            store.push(number).unwrap();
            (number, count) = (number + 1, count + 1);
        }
        count
    };
    lap(&mut store);
    store.flash().reset_counters();
    let count = f64::from(lap(&mut store));
    let counters = *store.flash().counters();
    Density {
        bytes: 32.0 * SECTOR_BYTES as f64 / count,
        programs: counters.programs as f64 / count,
        programmed: 4.0 * counters.programmed_words as f64 / count,
        erases: counters.erases as f64 / count,
    }
}

/// Durable records that are gone, and records that nobody wrote, over single and double cuts.
#[derive(Default)]
struct Faults {
    runs: u64,
    lost: u64,
    runs_with_loss: u64,
    invented: u64,
}

/// Pushes until the cut; gives the numbers that were durable before it.
fn push_until_cut<S: Store>(store: &mut S, number: &mut u32, most: u32) -> Vec<u32> {
    let (mut durable, mut waiting) = (Vec::new(), Vec::new());
    for _ in 0..most {
        waiting.push(*number);
        *number += 1;
        match store.push(waiting[waiting.len() - 1]) {
            Ok(0) => {}
            Ok(_) => durable.append(&mut waiting),
            Err(()) => break,
        }
    }
    durable
}

/// Pushes before the first erase of a sector that holds records.
fn pushes_to_an_erase<S: Store>() -> u32 {
    let mut store = S::open(Nor::new(4));
    let erases = |store: &mut S| store.flash().counters().erases;
    let mut number = 0;
    // The first lap erases what is blank already.
    while erases(&mut store) < 5 {
        store.push(number).unwrap();
        number += 1;
    }
    number
}

/// Cuts from three beginnings: a blank flash, some records, just before an erase.
fn faults<S: Store>() -> Faults {
    let mut faults = Faults::default();
    for begin in [0, 30, pushes_to_an_erase::<S>() - 24] {
        faults_from::<S>(begin, &mut faults);
    }
    faults
}

fn faults_from<S: Store>(begin: u32, faults: &mut Faults) {
    let mut store = S::open(Nor::new(4));
    let mut start = 0;
    let durable = push_until_cut(&mut store, &mut start, begin);
    let flash = store.into_flash();
    for steps in 0..260_u64 {
        for (tear, second) in
            [(Tear::During, None), (Tear::Before, Some(1)), (Tear::During, Some(2))]
        {
            let (mut flash, mut number) = (flash.clone(), start);
            let mut known = durable.clone();
            for cut in [Some(steps), second.map(|salt| steps * salt % 23)].into_iter().flatten() {
                flash.power_on();
                flash.seed(steps);
                let mut store = S::open(flash);
                store.flash().cut_after(Some(Cut { steps: cut, tear, scattered: false }));
                known.extend(push_until_cut(&mut store, &mut number, 160));
                flash = store.into_flash();
            }
            // Power stays, a clean write, and a cold start.
            flash.power_on();
            let mut store = S::open(flash);
            known.extend(push_until_cut(&mut store, &mut number, 12));
            let flash = store.into_flash();
            let read = S::read(&flash);
            let oldest = read.first().copied().unwrap_or(u32::MAX);
            let lost =
                known.iter().filter(|&&one| one >= oldest.min(start) && !read.contains(&one));
            let lost = lost.count() as u64;
            faults.runs += 1;
            faults.lost += lost;
            faults.runs_with_loss += u64::from(lost > 0);
            faults.invented += read.iter().filter(|&&one| one >= number).count() as u64;
        }
    }
}

/// Reads of a restart and the first write, 8 MiB full and half a lap on.
fn reads_of_the_queue() -> u64 {
    let mut queue = Queue::open(Nor::new(FULL_SECTORS as usize));
    for _ in 0..FULL_SECTORS * 3 / 2 {
        now(queue.0.push(&[7; 4_000], true)).unwrap();
    }
    let mut queue = Queue::open(queue.into_flash());
    queue.flash().reset_counters();
    queue.push(1).unwrap();
    queue.flash().counters().reads
}

fn reads_of_the_ring() -> u64 {
    let mut ring = Ring::open(Nor::new(FULL_SECTORS as usize));
    ring.app = App::with_state(1_500);
    let fault = Entry::ClockFix { tick_ms: 1, utc_s: 1_780_000_000 };
    while ring.journal.newest_sequence() != Some(FULL_SECTORS * 3 / 2) {
        ring.journal.append_event(&fault, &mut ring.app).unwrap();
    }
    let mut flash = ring.into_flash();
    flash.reset_counters();
    Ring::open(flash).flash().counters().reads
}

#[test]
fn beside_a_general_queue() {
    let (ours, theirs) = (density::<Ring>(), density::<Queue>());
    let (our_reads, their_reads) = (reads_of_the_ring(), reads_of_the_queue());
    let (our_faults, their_faults) = (faults::<Ring>(), faults::<Queue>());
    // One sector is being erased in either store.
    let days = |bytes: f64| f64::from(FULL_SECTORS - 1) * 4096.0 / bytes * 10.0 / DAY_S;
    let mut table = String::new();
    let mut row = |what: &str, ours: String, theirs: String| {
        writeln!(table, "| {what:<54} | {ours:>8} | {theirs:>8} |").unwrap();
    };
    row("W = 4, a sample every 10 s, 1 mm noise", "journal".into(), "queue".into());
    row("flash bytes per sample", format!("{:.2}", ours.bytes), format!("{:.2}", theirs.bytes));
    row("bytes programmed", format!("{:.2}", ours.programmed), format!("{:.2}", theirs.programmed));
    row("calls that program", format!("{:.3}", ours.programs), format!("{:.3}", theirs.programs));
    row("erases", format!("{:.5}", ours.erases), format!("{:.5}", theirs.erases));
    row("days in 8 MiB", format!("{:.0}", days(ours.bytes)), format!("{:.0}", days(theirs.bytes)));
    row(
        "reads after a restart, 8 MiB full, with the state",
        our_reads.to_string(),
        their_reads.to_string(),
    );
    row("runs with one cut or two", our_faults.runs.to_string(), their_faults.runs.to_string());
    row(
        "runs that lost a durable sample",
        our_faults.runs_with_loss.to_string(),
        their_faults.runs_with_loss.to_string(),
    );
    row("durable samples lost", our_faults.lost.to_string(), their_faults.lost.to_string());
    row("samples invented", our_faults.invented.to_string(), their_faults.invented.to_string());
    println!("{table}");

    assert_eq!((our_faults.lost, our_faults.invented), (0, 0));
    assert!(ours.bytes < theirs.bytes / 2.0 && ours.programs < theirs.programs);
    assert!(ours.erases < theirs.erases && our_reads < 24 + 64);
    crate::bench::held_as("side_by_side.txt", &table);
}

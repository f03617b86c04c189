//! The plan slots: four plans stay, and a cut anywhere leaves a whole plan in force.

use strake::sim::nor::{Cut, Nor, NorError, Tear};
use strake_core::plan_slot::{SlotHeader, fingerprint};
use strake_firmware::plan_store::{PlanStore, StoreError};

fn plan(number: u8, len: usize) -> Vec<u8> {
    (0..=u8::MAX).cycle().map(|at| at.wrapping_mul(31).wrapping_add(number)).take(len).collect()
}

fn store<const WORD: usize>(
    flash: &mut Nor<WORD>,
    bytes: &[u8],
    serial: u64,
) -> Result<SlotHeader, StoreError<NorError>> {
    let mut plans = PlanStore::open(flash);
    plans.newest();
    plans.begin(u32::try_from(bytes.len()).unwrap(), serial, fingerprint(bytes))?;
    let mut offset = 0;
    for chunk in bytes.chunks(193) {
        plans.write_chunk(offset, chunk)?;
        offset += u32::try_from(chunk.len()).unwrap();
    }
    plans.commit()
}

/// The plan in force and its bytes.
fn in_force<const WORD: usize>(flash: &mut Nor<WORD>) -> Option<(SlotHeader, Vec<u8>)> {
    let mut plans = PlanStore::open(flash);
    let header = plans.newest()?;
    let mut bytes = vec![0; header.length.into()];
    plans.read(header.fingerprint, 0, &mut bytes).unwrap();
    Some((header, bytes))
}

fn serials<const WORD: usize>(flash: &mut Nor<WORD>) -> Vec<u64> {
    let mut serials: Vec<_> =
        PlanStore::open(flash).list().iter().map(|header| header.serial).collect();
    serials.sort_unstable();
    serials
}

#[test]
fn the_last_plans_stay() {
    let mut flash = Nor::<4>::new(5);
    assert_eq!(in_force(&mut flash), None);
    for number in 1..=12_u8 {
        let len = [1, 3, 4, 191, 192, 193, 1000, 3840][usize::from(number % 8)];
        let bytes = plan(number, len);
        let stored = store(&mut flash, &bytes, number.into()).unwrap();
        assert_eq!(in_force(&mut flash), Some((stored, bytes)));
    }
    assert_eq!(serials(&mut flash), [8, 9, 10, 11, 12]);
    // While another one comes in, the last four stay.
    PlanStore::open(&mut flash).begin(100, 13, 0).unwrap();
    assert_eq!(serials(&mut flash), [9, 10, 11, 12]);
}

#[test]
fn a_wrong_fingerprint_is_refused() {
    let mut flash = Nor::<1>::new(5);
    let bytes = plan(1, 500);
    let first = store(&mut flash, &bytes, 1).unwrap();
    let mut plans = PlanStore::open(&mut flash);
    plans.begin(500, 2, fingerprint(&bytes) ^ 1).unwrap();
    plans.write_chunk(0, &bytes).unwrap();
    assert_eq!(plans.commit(), Err(StoreError::Damaged));
    assert_eq!(in_force(&mut flash), Some((first, bytes)));
}

#[test]
fn pieces_come_in_order() {
    let mut flash = Nor::<4>::new(5);
    let mut plans = PlanStore::open(&mut flash);
    assert_eq!(plans.begin(3841, 1, 1), Err(StoreError::TooLong { most: 3840 }));
    assert_eq!(plans.write_chunk(0, &[0; 4]), Err(StoreError::OutOfOrder));
    assert_eq!(plans.commit(), Err(StoreError::OutOfOrder));
    plans.begin(10, 1, 1).unwrap();
    assert_eq!(plans.write_chunk(4, &[0; 4]), Err(StoreError::OutOfOrder));
    plans.write_chunk(0, &[0; 4]).unwrap();
    assert_eq!(plans.write_chunk(4, &[0; 7]), Err(StoreError::OutOfOrder));
    assert_eq!(plans.commit(), Err(StoreError::OutOfOrder));
}

/// Plans that rot after they were committed: the one before wins, and keeps its slot.
#[test]
fn rotten_plans_give_way() {
    let mut flash = Nor::<4>::new(5);
    let old = plan(1, 700);
    store(&mut flash, &old, 1).unwrap();
    for number in 2..=5 {
        // The last one is the old plan once more: its sound copy must be the one that is read.
        let bytes = if number == 5 { old.clone() } else { plan(number, 700) };
        store(&mut flash, &bytes, number.into()).unwrap();
    }
    for slot in 1..5 {
        flash.corrupt(slot * 4096 + 300, 1, |byte| byte ^ 0x10);
    }
    let (header, bytes) = in_force(&mut flash).unwrap();
    assert_eq!((header.serial, bytes), (1, old.clone()));
    let newest = store(&mut flash, &plan(6, 700), 6).unwrap();
    assert_eq!(in_force(&mut flash), Some((newest, plan(6, 700))));
    assert_eq!(
        PlanStore::open(&mut flash).find(fingerprint(&old)).map(|old| old.length),
        Some(700)
    );
    assert!(serials(&mut flash).contains(&1));
}

fn every_cut<const WORD: usize>() -> u64 {
    let mut before = Nor::<WORD>::new(5);
    for number in 1..=7 {
        store(&mut before, &plan(number, 400), number.into()).unwrap();
    }
    let (old, new) = (plan(7, 400), plan(8, 402));
    let (mut cuts, mut completed) = (0, 0);
    for tear in [Tear::Before, Tear::During] {
        for steps in 0.. {
            let mut flash = before.clone();
            flash.seed(steps);
            flash.cut_after(Some(Cut { steps, tear, scattered: steps % 2 == 0 }));
            if store(&mut flash, &new, 8).is_ok() {
                break;
            }
            cuts += 1;
            flash.power_on();
            let (header, bytes) = in_force(&mut flash).unwrap();
            // A cut before a byte of 0xFF at the very end leaves nothing undone.
            let taken = header.serial == 8;
            assert!(bytes == if taken { &new[..] } else { &old[..] }, "{steps} {tear:?}");
            assert!(taken || header.serial == 7, "{steps} {tear:?}: {header:?}");
            assert!(serials(&mut flash).windows(4).any(|kept| kept == [4, 5, 6, 7]));
            completed += u64::from(taken);
            store(&mut flash, &new, 8).unwrap();
            assert_eq!(in_force(&mut flash).unwrap().0.serial, 8);
        }
    }
    assert!(completed < 100, "{completed} of {cuts} cuts came too late");
    cuts
}

#[test]
fn a_cut_anywhere_leaves_a_whole_plan() {
    let cuts = (every_cut::<4>(), every_cut::<1>());
    println!("plan slots: {} cuts with words of four, {} with words of one", cuts.0, cuts.1);
    assert!(cuts.0 > 200 && cuts.1 > 800, "{cuts:?}");
}

#[test]
fn any_content_opens() {
    for seed in 0..50_u32 {
        let mut flash = Nor::<4>::new(5);
        let mut value = seed;
        flash.corrupt(0, 5 * 4096, |_| {
            value = value.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
            value.to_le_bytes()[3]
        });
        assert_eq!(in_force(&mut flash), None);
        store(&mut flash, &plan(1, 50), 1).unwrap();
        assert!(in_force(&mut flash).is_some());
    }
}

//! The plan slots: four plans stay, and a cut anywhere leaves the plan before in force.

use strake::sim::nor::{Cut, Nor, NorError, Tear};
use strake_core::plan_slot::fingerprint;
use strake_firmware::plan_store::{PlanStore, PlanStoreError, StoredPlan};

fn plan(number: u8, len: usize) -> Vec<u8> {
    (0..=u8::MAX).cycle().map(|at| at.wrapping_mul(31).wrapping_add(number)).take(len).collect()
}

fn store<const WORD: usize>(
    store: &mut PlanStore<Nor<WORD>>,
    bytes: &[u8],
    serial: u64,
) -> Result<StoredPlan, PlanStoreError<NorError>> {
    store.begin(u16::try_from(bytes.len()).unwrap(), serial, fingerprint(bytes))?;
    for (index, chunk) in bytes.chunks(192).enumerate() {
        store.write_chunk(u16::try_from(index * 192).unwrap(), chunk)?;
    }
    store.commit()
}

fn content<const WORD: usize>(plans: &mut PlanStore<Nor<WORD>>, plan: &StoredPlan) -> Vec<u8> {
    let mut bytes = vec![0; usize::from(plan.len).next_multiple_of(4)];
    plans.read(plan, 0, &mut bytes).unwrap();
    bytes.truncate(plan.len.into());
    bytes
}

#[test]
fn the_last_plans_stay() {
    let mut plans = PlanStore::open(Nor::<4>::new(5)).unwrap();
    assert_eq!(plans.newest_valid().unwrap(), None);
    for number in 1..=12_u8 {
        let len = [1, 3, 4, 191, 192, 193, 1000, 3840][usize::from(number % 8)];
        let bytes = plan(number, len);
        let stored = store(&mut plans, &bytes, u64::from(number)).unwrap();
        assert_eq!(plans.newest_valid().unwrap(), Some(stored));
        assert_eq!(content(&mut plans, &stored), bytes);
    }
    let serials: Vec<u64> = plans.list().unwrap().iter().map(|plan| plan.serial).collect();
    assert_eq!(serials, [12, 11, 10, 9, 8]);
    // While a sixth comes in, the last four stay.
    plans.begin(100, 13, 0).unwrap();
    let serials: Vec<u64> = plans.list().unwrap().iter().map(|plan| plan.serial).collect();
    assert_eq!(serials, [12, 11, 10, 9]);
}

#[test]
fn a_wrong_fingerprint_is_refused() {
    let mut plans = PlanStore::open(Nor::<1>::new(5)).unwrap();
    let bytes = plan(1, 500);
    let first = store(&mut plans, &bytes, 1).unwrap();
    plans.begin(500, 2, fingerprint(&bytes) ^ 1).unwrap();
    plans.write_chunk(0, &bytes).unwrap();
    let found = fingerprint(&bytes);
    assert_eq!(plans.commit(), Err(PlanStoreError::Fingerprint { found }));
    assert_eq!(plans.newest_valid().unwrap(), Some(first));
}

#[test]
fn pieces_come_in_order() {
    let mut plans = PlanStore::open(Nor::<4>::new(5)).unwrap();
    assert_eq!(plans.begin(0, 1, 1), Err(PlanStoreError::Length { len: 0 }));
    assert_eq!(plans.begin(3841, 1, 1), Err(PlanStoreError::Length { len: 3841 }));
    assert_eq!(plans.write_chunk(0, &[0; 4]), Err(PlanStoreError::NotBegun));
    assert_eq!(plans.commit(), Err(PlanStoreError::NotBegun));
    plans.begin(10, 1, 1).unwrap();
    assert_eq!(plans.write_chunk(4, &[0; 4]), Err(PlanStoreError::OutOfOrder { due: 0 }));
    assert_eq!(plans.write_chunk(0, &[0; 6]), Err(PlanStoreError::Unaligned));
    plans.write_chunk(0, &[0; 4]).unwrap();
    assert_eq!(plans.write_chunk(4, &[0; 7]), Err(PlanStoreError::OutOfOrder { due: 4 }));
    assert_eq!(plans.commit(), Err(PlanStoreError::OutOfOrder { due: 4 }));
    assert!(matches!(PlanStore::open(Nor::<4>::new(4)), Err(PlanStoreError::TooSmall)));
}

/// A plan that rots after it was committed: the one before wins, and keeps its slot.
#[test]
fn a_rotten_plan_gives_way() {
    let mut plans = PlanStore::open(Nor::<4>::new(5)).unwrap();
    let old = store(&mut plans, &plan(1, 700), 1).unwrap();
    for number in 2..=5 {
        let stored = store(&mut plans, &plan(number, 700), number.into()).unwrap();
        plans.flash_mut().corrupt(u32::from(stored.slot) * 4096 + 300, 1, |byte| byte ^ 0x10);
    }
    assert_eq!(plans.newest_valid().unwrap(), Some(old));
    let newest = store(&mut plans, &plan(6, 700), 6).unwrap();
    assert_ne!(newest.slot, old.slot);
    assert_eq!(plans.newest_valid().unwrap(), Some(newest));
}

fn every_cut<const WORD: usize>() -> u64 {
    let mut before = PlanStore::open(Nor::<WORD>::new(5)).unwrap();
    for number in 1..=7 {
        store(&mut before, &plan(number, 400), number.into()).unwrap();
    }
    let (old, new) = (plan(7, 400), plan(8, 402));
    let mut cuts = 0;
    for tear in [Tear::Before, Tear::During] {
        for steps in 0.. {
            let mut plans = before.clone();
            plans.flash_mut().seed(steps);
            plans.flash_mut().cut_after(Some(Cut { steps, tear, scattered: steps % 2 == 0 }));
            let outcome = store(&mut plans, &new, 8);
            if outcome.is_ok() {
                break;
            }
            cuts += 1;
            let mut flash = plans.flash().clone();
            flash.power_on();
            let mut plans = PlanStore::open(flash).unwrap();
            let in_force = plans.newest_valid().unwrap().unwrap();
            let bytes = content(&mut plans, &in_force);
            assert!(in_force.serial == 7 && bytes == old, "{steps} {tear:?}: {in_force:?}");
            assert!(plans.list().unwrap().len() >= 4);
            store(&mut plans, &new, 8).unwrap();
            assert_eq!(plans.newest_valid().unwrap().unwrap().serial, 8);
        }
    }
    cuts
}

#[test]
fn a_cut_anywhere_leaves_the_plan_before() {
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
        let mut plans = PlanStore::open(flash).unwrap();
        assert_eq!(plans.newest_valid().unwrap(), None);
        store(&mut plans, &plan(1, 50), 1).unwrap();
        assert!(plans.newest_valid().unwrap().is_some());
    }
}

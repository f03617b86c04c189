use super::{Cut, Nor, NorError, SECTOR_BYTES, Tear};
use embedded_storage::nor_flash::{NorFlash, ReadNorFlash};

fn read<const WORD: usize>(flash: &mut Nor<WORD>, at: u32, len: usize) -> Vec<u8> {
    let mut bytes = vec![0; len];
    flash.read(at, &mut bytes).unwrap();
    bytes
}

#[test]
fn refuses_what_a_chip_refuses() {
    let mut flash = Nor::<4>::new(2);
    assert_eq!(flash.write(2, &[0; 4]), Err(NorError::Unaligned { address: 2, len: 4 }));
    assert_eq!(flash.write(0, &[0; 3]), Err(NorError::Unaligned { address: 0, len: 3 }));
    assert_eq!(flash.write(8192, &[0; 4]), Err(NorError::OutOfRange { address: 8192, len: 4 }));
    assert_eq!(flash.read(8192, &mut [0; 4]), Err(NorError::OutOfRange { address: 8192, len: 4 }));
    assert_eq!(flash.erase(4, 4100), Err(NorError::Unaligned { address: 4, len: SECTOR_BYTES }));
    flash.write(0, &[1, 2, 3, 4]).unwrap();
    assert_eq!(flash.write(0, &[1, 2, 3, 4]), Err(NorError::Reprogrammed { address: 0 }));
    flash.wear_out(1);
    assert_eq!(flash.erase(4096, 8192), Err(NorError::Worn { address: 4096 }));
}

#[test]
fn programs_erases_and_counts() {
    let mut flash = Nor::<1>::new(2048);
    flash.write(5000, &[0x12, 0x34]).unwrap();
    assert_eq!(read(&mut flash, 4999, 4), [0xFF, 0x12, 0x34, 0xFF]);
    flash.erase(4096, 8192).unwrap();
    assert_eq!(read(&mut flash, 5000, 2), [0xFF, 0xFF]);
    flash.write(5000, &[0]).unwrap();
    let counters = *flash.counters();
    assert_eq!((counters.programs, counters.programmed_words, counters.erases), (2, 3, 1));
    assert_eq!((counters.reads, counters.read_bytes), (2, 6));
}

#[test]
fn clearing_only_clears() {
    let mut flash = Nor::<1>::new(1);
    flash.permit_clearing(true);
    flash.write(0, &[0xF0]).unwrap();
    flash.write(0, &[0x3C]).unwrap();
    assert_eq!(read(&mut flash, 0, 1), [0x30]);
}

#[test]
fn a_cut_tears_one_word_and_nothing_goes_on() {
    let mut torn = 0;
    for seed in 0..20 {
        let mut flash = Nor::<4>::new(1);
        flash.seed(seed);
        flash.cut_after(Some(Cut { steps: 1, tear: Tear::During, scattered: false }));
        assert_eq!(flash.write(0, &[0; 12]), Err(NorError::PowerOff));
        assert_eq!(flash.write(64, &[0; 4]), Err(NorError::PowerOff));
        flash.power_on();
        let image = read(&mut flash, 0, 12);
        assert_eq!(image[..4], [0; 4]);
        assert_eq!(image[8..], [0xFF; 4]);
        assert_eq!(flash.write(4, &[0; 4]), Err(NorError::Reprogrammed { address: 4 }));
        torn += flash.counters().torn_words;
    }
    assert_eq!(torn, 20);
}

#[test]
fn a_scattered_cut_leaves_holes() {
    let holes = (0..20).filter(|&seed| {
        let mut flash = Nor::<1>::new(1);
        flash.seed(seed);
        flash.cut_after(Some(Cut { steps: 4, tear: Tear::Before, scattered: true }));
        flash.write(0, &[0; 8]).unwrap_err();
        flash.power_on();
        let image = read(&mut flash, 0, 8);
        assert_eq!(image.iter().map(|byte| byte.count_zeros()).sum::<u32>(), 4 * 8);
        image[..4] != [0; 4]
    });
    assert!(holes.count() > 10);
}

#[test]
fn a_half_erased_sector_is_refused_until_it_is_erased() {
    let mut flash = Nor::<4>::new(1);
    flash.write(0, &[0; 4096]).unwrap();
    flash.seed(7);
    flash.cut_after(Some(Cut { steps: 0, tear: Tear::During, scattered: false }));
    assert_eq!(flash.erase(0, 4096), Err(NorError::PowerOff));
    flash.power_on();
    let ones: u32 = read(&mut flash, 0, 4096).iter().map(|byte| byte.count_ones()).sum();
    assert!(ones > 0 && ones < 8 * 4096, "{ones}");
    assert_eq!(flash.counters().half_erased, 1);
    assert!(flash.write(0, &[0; 4]).is_err());
    flash.erase(0, 4096).unwrap();
    flash.write(0, &[0; 4]).unwrap();
}

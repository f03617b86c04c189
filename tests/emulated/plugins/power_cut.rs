//! Emulator plugin: ends the emulator right after the n-th store into a range of addresses, as a
//! loss of power would, and counts the stores.
//!
//! Arguments: `base`, `bytes` (the range), `after` (the store to end at; none: never), `out` (file
//! that the count is written to at an orderly exit), `flash` and `record` (the file behind the
//! range; eight bytes a store go into `record`: offset and the word that stands there then, both
//! little endian). Exit status of a cut: 77.
//!
//! The plugin interface is version 1 of QEMU's `qemu-plugin.h`.

use std::ffi::{CStr, c_char, c_int, c_uint, c_void};
use std::fs::File;
use std::io::Write as _;
use std::os::unix::fs::FileExt as _;
use std::sync::OnceLock;
use std::sync::atomic::{AtomicU64, Ordering::Relaxed};

const CUT: c_int = 77;

type Id = u64;

#[repr(C)]
pub struct Block([u8; 0]);

#[repr(C)]
pub struct Instruction([u8; 0]);

unsafe extern "C" {
    fn qemu_plugin_register_vcpu_tb_trans_cb(id: Id, f: extern "C" fn(Id, *mut Block));
    fn qemu_plugin_register_atexit_cb(id: Id, f: extern "C" fn(Id, *mut c_void), data: *mut c_void);
    fn qemu_plugin_tb_n_insns(block: *const Block) -> usize;
    fn qemu_plugin_tb_get_insn(block: *const Block, index: usize) -> *mut Instruction;
    fn qemu_plugin_register_vcpu_mem_cb(
        instruction: *mut Instruction,
        f: extern "C" fn(c_uint, u32, u64, *mut c_void),
        flags: c_int,
        access: c_int,
        data: *mut c_void,
    );
    fn qemu_plugin_mem_is_store(access: u32) -> bool;
    fn _exit(status: c_int) -> !;
}

#[unsafe(no_mangle)]
pub static qemu_plugin_version: c_int = 1;

static BASE: AtomicU64 = AtomicU64::new(0);
static BYTES: AtomicU64 = AtomicU64::new(0);
static AFTER: AtomicU64 = AtomicU64::new(u64::MAX);
static STORES: AtomicU64 = AtomicU64::new(0);
static OUT: OnceLock<String> = OnceLock::new();
static FLASH: OnceLock<File> = OnceLock::new();
static RECORD: OnceLock<File> = OnceLock::new();

extern "C" fn on_access(_cpu: c_uint, access: u32, address: u64, _data: *mut c_void) {
    // SAFETY: `access` is what the emulator passed. Asked here, since the filter of the
    // registration lets loads through.
    if !unsafe { qemu_plugin_mem_is_store(access) } {
        return;
    }
    let offset = address.wrapping_sub(BASE.load(Relaxed));
    if offset >= BYTES.load(Relaxed) {
        return;
    }
    record(offset);
    let count = STORES.fetch_add(1, Relaxed) + 1;
    if count >= AFTER.load(Relaxed) {
        // SAFETY: ends the process, without anything that would still write.
        unsafe { _exit(CUT) }
    }
}

/// The callback comes behind the store, so the file holds the word already.
fn record(offset: u64) {
    let (Some(flash), Some(mut record)) = (FLASH.get(), RECORD.get()) else { return };
    let mut line = [0; 8];
    line[..4].copy_from_slice(&offset.to_le_bytes()[..4]);
    let done = flash.read_exact_at(&mut line[4..], offset).and_then(|()| record.write_all(&line));
    if done.is_err() {
        eprintln!("power_cut: a store could not be recorded");
        // SAFETY: ends the process; a record with a hole is worth nothing.
        unsafe { _exit(1) }
    }
}

extern "C" fn on_translation(_id: Id, block: *mut Block) {
    const NO_REGISTERS: c_int = 0;
    const WRITES: c_int = 2;
    // SAFETY: block and instructions are the emulator's, valid during this call.
    unsafe {
        for index in 0..qemu_plugin_tb_n_insns(block) {
            let instruction = qemu_plugin_tb_get_insn(block, index);
            let none = std::ptr::null_mut();
            qemu_plugin_register_vcpu_mem_cb(instruction, on_access, NO_REGISTERS, WRITES, none);
        }
    }
}

extern "C" fn at_exit(_id: Id, _data: *mut c_void) {
    if let Some(path) = OUT.get() {
        let _ = std::fs::write(path, format!("{}\n", STORES.load(Relaxed)));
    }
}

fn number(text: &str) -> Option<u64> {
    match text.strip_prefix("0x") {
        Some(digits) => u64::from_str_radix(digits, 16).ok(),
        None => text.parse().ok(),
    }
}

fn set(argument: &str) -> Option<()> {
    let (key, value) = argument.split_once('=')?;
    match key {
        "base" => BASE.store(number(value)?, Relaxed),
        "bytes" => BYTES.store(number(value)?, Relaxed),
        "after" => AFTER.store(number(value)?, Relaxed),
        "out" => OUT.set(value.to_owned()).ok()?,
        "flash" => FLASH.set(File::open(value).ok()?).ok()?,
        "record" => RECORD.set(File::create(value).ok()?).ok()?,
        _ => return None,
    }
    Some(())
}

#[unsafe(no_mangle)]
pub extern "C" fn qemu_plugin_install(
    id: Id,
    _info: *const c_void,
    count: c_int,
    arguments: *const *const c_char,
) -> c_int {
    for index in 0..usize::try_from(count).unwrap_or(0) {
        // SAFETY: the emulator passes `count` strings.
        let argument = unsafe { CStr::from_ptr(*arguments.add(index)) }.to_string_lossy();
        if set(&argument).is_none() {
            eprintln!("power_cut: argument {argument} not understood");
            return 1;
        }
    }
    // SAFETY: `id` is ours, the functions stay loaded.
    unsafe {
        qemu_plugin_register_vcpu_tb_trans_cb(id, on_translation);
        qemu_plugin_register_atexit_cb(id, at_exit, std::ptr::null_mut());
    }
    0
}

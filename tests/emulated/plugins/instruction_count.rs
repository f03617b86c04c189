//! Emulator plugin: counts the instructions of each run through a span of the program.
//!
//! Arguments: `span=NAME:START` counts from the execution of address START, the entry of a
//! function, to the instruction behind its call, all callees and interrupts included;
//! `span=NAME:START:STOP` counts from START to STOP, which is not counted itself. `out` is the file
//! that one line a run, `NAME COUNT`, is written to at an orderly exit, with a last line
//! `total COUNT` for the whole program. A function must be reached by a call, not by a jump at the
//! end of another one; within a run further entries (recursion) are not counted apart. Where the
//! call names the function, an interrupt between the two does no harm.
//!
//! The plugin interface is version 1 of QEMU's `qemu-plugin.h`.

use std::ffi::{CStr, c_char, c_int, c_uint, c_void};
use std::fmt::Write as _;
use std::sync::Mutex;

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
    fn qemu_plugin_insn_vaddr(instruction: *const Instruction) -> u64;
    fn qemu_plugin_insn_size(instruction: *const Instruction) -> usize;
    fn qemu_plugin_insn_data(instruction: *const Instruction) -> *const [u16; 2];
    fn qemu_plugin_register_vcpu_insn_exec_cb(
        instruction: *mut Instruction,
        f: extern "C" fn(c_uint, *mut c_void),
        flags: c_int,
        data: *mut c_void,
    );
}

#[unsafe(no_mangle)]
pub static qemu_plugin_version: c_int = 1;

struct Span {
    name: String,
    start: u64,
    /// Fixed end; none: where the call returns to.
    stop: Option<u64>,
    /// Address behind the last call of the function by its name.
    called: Option<u64>,
    /// End and count at the start of the run that is going on.
    running: Option<(u64, u64)>,
    counts: Vec<u64>,
}

struct State {
    spans: Vec<Span>,
    total: u64,
    /// Address behind the instruction before this one.
    behind: u64,
    out: Option<String>,
}

static STATE: Mutex<State> =
    Mutex::new(State { spans: Vec::new(), total: 0, behind: 0, out: None });

/// Address and size of an instruction in one word: code lies below 2^32, sizes are 2 or 4.
extern "C" fn on_execution(_cpu: c_uint, packed: *mut c_void) {
    let packed = packed.addr() as u64;
    let (address, size) = (packed >> 8, packed & 0xFF);
    let mut state = STATE.lock().unwrap_or_else(|broken| broken.into_inner());
    let (total, behind) = (state.total, state.behind);
    for span in &mut state.spans {
        if let Some((end, from)) = span.running
            && address == end
        {
            span.counts.push(total - from);
            span.running = None;
        }
        if address == span.start && span.running.is_none() {
            span.running = Some((span.stop.or(span.called.take()).unwrap_or(behind), total));
        }
    }
    state.total = total + 1;
    state.behind = address + size;
}

/// The instruction at the address before this one calls the function of a span.
extern "C" fn on_call(_cpu: c_uint, packed: *mut c_void) {
    let packed = packed.addr() as u64;
    let mut state = STATE.lock().unwrap_or_else(|broken| broken.into_inner());
    if let Some(span) = state.spans.get_mut((packed & 0xFF) as usize) {
        span.called = Some(packed >> 8);
    }
}

/// What an instruction at `address` calls, if it is BL with a target in it (Armv7-M, A7.7.18).
fn called_by(address: u64, [high, low]: [u16; 2]) -> Option<u64> {
    if high & 0xF800 != 0xF000 || low & 0xD000 != 0xD000 {
        return None;
    }
    let (high, low) = (u32::from(high), u32::from(low));
    let sign = high >> 10 & 1;
    let (upper, lower) = (!(low >> 13 ^ sign) & 1, !(low >> 11 ^ sign) & 1);
    let words = sign << 23 | upper << 22 | lower << 21 | (high & 0x3FF) << 11 | low & 0x7FF;
    // 24 bits with a sign, in half words, from the address 4 behind.
    let distance = i64::from((words << 8).cast_signed() >> 7);
    Some(address.wrapping_add(4).wrapping_add_signed(distance))
}

extern "C" fn on_translation(_id: Id, block: *mut Block) {
    const NO_REGISTERS: c_int = 0;
    // SAFETY: block and instructions are the emulator's, valid during this call.
    unsafe {
        for index in 0..qemu_plugin_tb_n_insns(block) {
            let instruction = qemu_plugin_tb_get_insn(block, index);
            let size = qemu_plugin_insn_size(instruction) as u64;
            let address = qemu_plugin_insn_vaddr(instruction);
            let register = |f, packed: u64| {
                let data = std::ptr::without_provenance_mut(packed as usize);
                qemu_plugin_register_vcpu_insn_exec_cb(instruction, f, NO_REGISTERS, data);
            };
            register(on_execution, address << 8 | size);
            if size == 4
                && let Some(callee) =
                    called_by(address, qemu_plugin_insn_data(instruction).read_unaligned())
                && let Some(span) = spans().iter().position(|start| *start == callee)
            {
                register(on_call, (address + size) << 8 | span as u64);
            }
        }
    }
}

extern "C" fn at_exit(_id: Id, _data: *mut c_void) {
    let state = STATE.lock().unwrap_or_else(|broken| broken.into_inner());
    let mut text = String::new();
    for span in &state.spans {
        for count in &span.counts {
            let _ = writeln!(text, "{} {count}", span.name);
        }
    }
    let _ = writeln!(text, "total {}", state.total);
    if let Some(path) = &state.out {
        let _ = std::fs::write(path, text);
    }
}

/// First addresses of the spans.
fn spans() -> Vec<u64> {
    let state = STATE.lock().unwrap_or_else(|broken| broken.into_inner());
    state.spans.iter().map(|span| span.start).collect()
}

fn address(text: &str) -> Option<u64> {
    u64::from_str_radix(text.strip_prefix("0x")?, 16).ok()
}

fn set(state: &mut State, argument: &str) -> Option<()> {
    let (key, value) = argument.split_once('=')?;
    match key {
        "span" => {
            let mut fields = value.split(':');
            let name = fields.next()?.to_owned();
            let start = address(fields.next()?)?;
            let stop = fields.next().map(address);
            if stop == Some(None) {
                return None;
            }
            let stop = stop.flatten();
            let counts = Vec::new();
            state.spans.push(Span { name, start, stop, called: None, running: None, counts });
        }
        "out" => state.out = Some(value.to_owned()),
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
    let mut state = STATE.lock().unwrap_or_else(|broken| broken.into_inner());
    for index in 0..usize::try_from(count).unwrap_or(0) {
        // SAFETY: the emulator passes `count` strings.
        let argument = unsafe { CStr::from_ptr(*arguments.add(index)) }.to_string_lossy();
        if set(&mut state, &argument).is_none() {
            eprintln!("instruction_count: argument {argument} not understood");
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

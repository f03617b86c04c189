//! Copying, filling and comparing memory, under the names that compiled code calls (C11, 7.24;
//! Run-time ABI for the Arm Architecture, 4.3.4): a tenth of the 3.7 KB that the compiler's own
//! take, which are written for speed.
//!
//! Volatile accesses keep the loops from being turned into calls of what they implement.

#![expect(unsafe_code, reason = "raw memory, under names that the compiler knows")]
#![expect(clippy::cast_ptr_alignment, reason = "words are taken where the addresses are whole")]

use core::ptr;

const WORD: usize = size_of::<u32>();

/// # Safety
/// As `memcpy`.
#[unsafe(no_mangle)]
unsafe extern "C" fn __aeabi_memcpy(to: *mut u8, from: *const u8, bytes: usize) {
    let mut at = 0;
    // SAFETY: below `bytes`, which the caller promises to be readable and writable.
    unsafe {
        if (to.addr() | from.addr()).is_multiple_of(WORD) {
            // Two at a time: half of the steps.
            while at < bytes & !(2 * WORD - 1) {
                let word = ptr::read_volatile(from.wrapping_add(at).cast::<u32>());
                let next = ptr::read_volatile(from.wrapping_add(at + WORD).cast::<u32>());
                ptr::write_volatile(to.wrapping_add(at).cast::<u32>(), word);
                ptr::write_volatile(to.wrapping_add(at + WORD).cast::<u32>(), next);
                at += 2 * WORD;
            }
            while at < bytes & !(WORD - 1) {
                let word = ptr::read_volatile(from.wrapping_add(at).cast::<u32>());
                ptr::write_volatile(to.wrapping_add(at).cast::<u32>(), word);
                at += WORD;
            }
        }
        while at < bytes {
            ptr::write_volatile(to.wrapping_add(at), ptr::read_volatile(from.wrapping_add(at)));
            at += 1;
        }
    }
}

/// # Safety
/// `from` readable and `to` writable for `bytes` bytes that do not overlap.
#[unsafe(no_mangle)]
unsafe extern "C" fn memcpy(to: *mut u8, from: *const u8, bytes: usize) -> *mut u8 {
    // SAFETY: the same promise.
    unsafe { __aeabi_memcpy(to, from, bytes) };
    to
}

/// # Safety
/// `from` readable and `to` writable for `bytes` bytes.
#[unsafe(no_mangle)]
unsafe extern "C" fn __aeabi_memmove(to: *mut u8, from: *const u8, bytes: usize) {
    if to.addr() <= from.addr() {
        // SAFETY: forwards every byte is read before it is written over.
        return unsafe { __aeabi_memcpy(to, from, bytes) };
    }
    for at in (0..bytes).rev() {
        // SAFETY: below `bytes`; backwards every byte is read before it is written over.
        unsafe {
            ptr::write_volatile(to.wrapping_add(at), ptr::read_volatile(from.wrapping_add(at)));
        }
    }
}

/// # Safety
/// As `__aeabi_memmove`.
#[unsafe(no_mangle)]
unsafe extern "C" fn memmove(to: *mut u8, from: *const u8, bytes: usize) -> *mut u8 {
    // SAFETY: the same promise.
    unsafe { __aeabi_memmove(to, from, bytes) };
    to
}

/// # Safety
/// `to` writable for `bytes` bytes.
#[unsafe(no_mangle)]
unsafe extern "C" fn __aeabi_memset(to: *mut u8, bytes: usize, byte: u32) {
    let [byte, ..] = byte.to_le_bytes();
    let word = u32::from_le_bytes([byte; WORD]);
    let mut at = 0;
    // SAFETY: below `bytes`, which the caller promises to be writable.
    unsafe {
        if to.addr().is_multiple_of(WORD) {
            while at < bytes & !(8 * WORD - 1) {
                let words = to.wrapping_add(at).cast::<u32>();
                ptr::write_volatile(words, word);
                ptr::write_volatile(words.wrapping_add(1), word);
                ptr::write_volatile(words.wrapping_add(2), word);
                ptr::write_volatile(words.wrapping_add(3), word);
                ptr::write_volatile(words.wrapping_add(4), word);
                ptr::write_volatile(words.wrapping_add(5), word);
                ptr::write_volatile(words.wrapping_add(6), word);
                ptr::write_volatile(words.wrapping_add(7), word);
                at += 8 * WORD;
            }
            while at < bytes & !(WORD - 1) {
                ptr::write_volatile(to.wrapping_add(at).cast::<u32>(), word);
                at += WORD;
            }
        }
        while at < bytes {
            ptr::write_volatile(to.wrapping_add(at), byte);
            at += 1;
        }
    }
}

/// # Safety
/// As `__aeabi_memset`.
#[unsafe(no_mangle)]
unsafe extern "C" fn memset(to: *mut u8, byte: u32, bytes: usize) -> *mut u8 {
    // SAFETY: the same promise.
    unsafe { __aeabi_memset(to, bytes, byte) };
    to
}

/// # Safety
/// As `__aeabi_memset`.
#[unsafe(no_mangle)]
unsafe extern "C" fn __aeabi_memclr(to: *mut u8, bytes: usize) {
    // SAFETY: the same promise.
    unsafe { __aeabi_memset(to, bytes, 0) }
}

/// # Safety
/// Both readable for `bytes` bytes.
#[unsafe(no_mangle)]
unsafe extern "C" fn memcmp(one: *const u8, other: *const u8, bytes: usize) -> i32 {
    for at in 0..bytes {
        // SAFETY: below `bytes`.
        let (a, b) = unsafe {
            let (one, other) = (one.wrapping_add(at), other.wrapping_add(at));
            (ptr::read_volatile(one), ptr::read_volatile(other))
        };
        if a != b {
            return i32::from(a) - i32::from(b);
        }
    }
    0
}

/// The names for memory that lies on words or double words: the same functions.
macro_rules! aligned {
    ($($name:ident($($argument:ident: $kind:ty),*) = $function:ident;)*) => {$(
        /// # Safety
        /// As the function that it calls.
        #[unsafe(no_mangle)]
        unsafe extern "C" fn $name($($argument: $kind),*) {
            // SAFETY: the same promise.
            unsafe { $function($($argument),*) }
        }
    )*};
}

aligned! {
    __aeabi_memcpy4(to: *mut u8, from: *const u8, bytes: usize) = __aeabi_memcpy;
    __aeabi_memcpy8(to: *mut u8, from: *const u8, bytes: usize) = __aeabi_memcpy;
    __aeabi_memmove4(to: *mut u8, from: *const u8, bytes: usize) = __aeabi_memmove;
    __aeabi_memmove8(to: *mut u8, from: *const u8, bytes: usize) = __aeabi_memmove;
    __aeabi_memset4(to: *mut u8, bytes: usize, byte: u32) = __aeabi_memset;
    __aeabi_memset8(to: *mut u8, bytes: usize, byte: u32) = __aeabi_memset;
    __aeabi_memclr4(to: *mut u8, bytes: usize) = __aeabi_memclr;
    __aeabi_memclr8(to: *mut u8, bytes: usize) = __aeabi_memclr;
}

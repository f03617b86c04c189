//! Core of Strake.
#![cfg_attr(not(test), no_std)]
#![forbid(unsafe_code)]

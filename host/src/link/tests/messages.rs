//! Every error in words.

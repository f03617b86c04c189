//! Rooms: where the big members of the application live.
//!
//! Together they are some ten kilobytes: as members of the application they would pass over the
//! stack whenever it is made or moved. So the board owns them ([`Board::Room`]) and hands them over
//! once: a device as `&'static mut` into a static [`Space`], a host in a `Box`.

use crate::board::Board;
use crate::device::Memory;
use crate::journal::Waiting;
use crate::serve::Server;
use core::fmt;
use core::ops::{Deref, DerefMut};

/// The big members side by side, for a board's static. Every bit is zero at first, so that the
/// static is cleared by the start-up code and takes no room in the image.
#[derive(Debug)]
pub struct Space {
    /// What the device remembers and computes with.
    pub memory: Memory,
    /// The link's buffers.
    pub server: Server,
    /// The samples that wait.
    pub waiting: Waiting,
}

impl Space {
    /// Everything as before the first start.
    #[must_use]
    pub const fn new() -> Self {
        Self { memory: Memory::new(), server: Server::new(), waiting: Waiting::new() }
    }
}

impl Default for Space {
    fn default() -> Self {
        Self::new()
    }
}

/// The rooms of one start, each with the content that [`Space::new`] gives it.
pub struct Rooms<B: Board> {
    /// What the device remembers and computes with.
    pub memory: B::Room<Memory>,
    /// The link's buffers.
    pub server: B::Room<Server>,
    /// The samples that wait.
    pub waiting: B::Room<Waiting>,
}

impl<B: Board> fmt::Debug for Rooms<B> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Rooms").finish_non_exhaustive()
    }
}

/// A room that is the value itself, where moving it does not matter.
#[derive(Clone, Debug, Default)]
pub struct Within<T>(pub T);

impl<T> Deref for Within<T> {
    type Target = T;

    fn deref(&self) -> &T {
        &self.0
    }
}

impl<T> DerefMut for Within<T> {
    fn deref_mut(&mut self) -> &mut T {
        &mut self.0
    }
}

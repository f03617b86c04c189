//! What the application offers to the link.

use strake_core::wire::{
    ErrorCode, FaultStatus, FillingStatus, Head, Identity, JournalBounds, PartStatus, PlanBegin,
    PlanList, Status,
};

/// Why a request is not done, with a number whose meaning stands at the code.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Refusal {
    /// The reason.
    pub code: ErrorCode,
    /// The number.
    pub detail: u32,
}

impl From<ErrorCode> for Refusal {
    fn from(code: ErrorCode) -> Self {
        Self { code, detail: 0 }
    }
}

/// The application as the link sees it. Calls come one at a time, between cycles; each must end
/// within the time a cycle can spare. What needs longer answers [`ErrorCode::Busy`]: the host asks
/// again.
pub trait Served {
    /// Who the device is, and which plan is in force.
    fn identity(&mut self) -> Identity;

    /// The device at one glance; the server fills `link`.
    fn status(&mut self) -> Status;

    /// One part; `None` when the plan in force has no such part.
    fn part_status(&mut self, part: u8) -> Option<PartStatus>;

    /// Every fault cause.
    fn fault_status(&mut self) -> FaultStatus;

    /// How fast the tank fills.
    fn filling(&mut self) -> FillingStatus;

    /// Sets the clock; called once for each order, however often its frame came.
    ///
    /// # Errors
    /// [`ErrorCode::ClockImpossible`], [`ErrorCode::StorageFailed`].
    fn set_clock(&mut self, utc_s: u64) -> Result<(), Refusal>;

    /// Acknowledges; called once for each order, however often its frame came.
    ///
    /// # Errors
    /// [`ErrorCode::PressButton`], [`ErrorCode::NothingToDo`].
    fn acknowledge(&mut self) -> Result<(), Refusal>;

    /// Makes room for a plan; one that was being loaded is dropped.
    ///
    /// # Errors
    /// The `Plan..` codes that show from the announcement alone.
    fn plan_begin(&mut self, begin: &PlanBegin) -> Result<(), Refusal>;

    /// Stores bytes of the plan. The server calls it in order, without holes and repetitions, and
    /// never beyond the announced length.
    ///
    /// # Errors
    /// [`ErrorCode::StorageFailed`].
    fn plan_chunk(&mut self, offset: u32, bytes: &[u8]) -> Result<(), Refusal>;

    /// Checks the plan, which is whole now, and puts it into force. Once this has answered `Ok`,
    /// [`Self::identity`] shows the plan's fingerprint.
    ///
    /// # Errors
    /// The `Plan..` codes; [`ErrorCode::Busy`] while the check runs: the call comes again.
    fn plan_commit(&mut self, fingerprint: u64) -> Result<(), Refusal>;

    /// The plans kept, the one in force first.
    fn plans(&mut self) -> PlanList;

    /// Fills all of `out` from `offset` of a stored plan. The server stays within the length that
    /// [`Self::plans`] names.
    ///
    /// # Errors
    /// [`ErrorCode::PlanUnknown`], [`ErrorCode::StorageFailed`].
    fn read_plan(&mut self, fingerprint: u64, offset: u32, out: &mut [u8]) -> Result<(), Refusal>;

    /// Which sectors there are.
    fn journal_bounds(&mut self) -> JournalBounds;

    /// Where the journal ends; what waits in RAM is written first.
    ///
    /// # Errors
    /// [`ErrorCode::StorageFailed`], [`ErrorCode::Busy`].
    fn head(&mut self) -> Result<Head, Refusal>;

    /// Bytes in use in a sector; `None` when it is not (or no longer) stored.
    fn sector_used(&mut self, sequence: u32) -> Option<u16>;

    /// Fills all of `out` from `offset` of a sector. The server stays within
    /// [`Self::sector_used`].
    ///
    /// # Errors
    /// [`ErrorCode::SectorGone`], [`ErrorCode::StorageFailed`].
    fn read_sector(&mut self, sequence: u32, offset: u16, out: &mut [u8]) -> Result<(), Refusal>;
}

//! Loading a plan: order of its bytes, repeated frames.

use super::served::{Refusal, Served};
use strake_core::wire::{ErrorCode, PlanBegin, PlanChunk, PlanCommit, PlanReply};

/// The plan that is coming, if any.
#[derive(Debug, Default)]
pub(super) struct PlanLoad {
    under_way: Option<UnderWay>,
}

#[derive(Clone, Copy, Debug)]
struct UnderWay {
    length: u32,
    fingerprint: u64,
    received: u32,
}

impl UnderWay {
    fn reply(&self) -> PlanReply {
        PlanReply { fingerprint: self.fingerprint, received: self.received, in_force: false }
    }

    fn out_of_order(&self) -> Refusal {
        Refusal { code: ErrorCode::OutOfOrder, detail: self.received }
    }
}

impl PlanLoad {
    pub(super) const fn new() -> Self {
        Self { under_way: None }
    }

    pub(super) fn begin<S: Served>(
        &mut self,
        begin: &PlanBegin,
        served: &mut S,
    ) -> Result<PlanReply, Refusal> {
        self.under_way = None;
        served.plan_begin(begin)?;
        let load = UnderWay { length: begin.length, fingerprint: begin.fingerprint, received: 0 };
        self.under_way = Some(load);
        Ok(load.reply())
    }

    pub(super) fn chunk<S: Served>(
        &mut self,
        chunk: &PlanChunk<'_>,
        served: &mut S,
    ) -> Result<PlanReply, Refusal> {
        let load = self.under_way.as_mut().ok_or(Refusal::from(ErrorCode::OutOfOrder))?;
        let known = load.received.checked_sub(chunk.offset).ok_or(load.out_of_order())?;
        let fresh = usize::try_from(known).ok().and_then(|known| chunk.bytes.get(known..));
        let Some(fresh @ [_, ..]) = fresh else { return Ok(load.reply()) };
        let end = u32::try_from(fresh.len()).ok().and_then(|n| load.received.checked_add(n));
        let end = end.filter(|end| *end <= load.length).ok_or(load.out_of_order())?;
        served.plan_chunk(load.received, fresh)?;
        load.received = end;
        Ok(load.reply())
    }

    pub(super) fn commit<S: Served>(
        &mut self,
        commit: PlanCommit,
        served: &mut S,
    ) -> Result<PlanReply, Refusal> {
        let fingerprint = commit.fingerprint;
        let Some(load) = self.under_way.filter(|load| load.fingerprint == fingerprint) else {
            // The reply to a commit that succeeded may have been lost.
            return if served.identity().plan_fingerprint == fingerprint {
                Ok(PlanReply { fingerprint, received: 0, in_force: true })
            } else {
                Err(ErrorCode::OutOfOrder.into())
            };
        };
        if load.received != load.length {
            return Err(load.out_of_order());
        }
        let result = served.plan_commit(fingerprint);
        if !matches!(result, Err(Refusal { code: ErrorCode::Busy, .. })) {
            self.under_way = None;
        }
        result.map(|()| PlanReply { fingerprint, received: load.length, in_force: true })
    }
}

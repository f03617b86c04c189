//! One request in, one reply out.

use super::outbox::Outbox;
use super::plan_load::PlanLoad;
use super::served::{Refusal, Served};
use strake_core::wire::{
    Acknowledge, ClockSet, Done, ErrorCode, Field, Frame, Hello, Kind, LinkCounters, Malformed,
    Message, PLAN_DATA_BYTES, PartStatusRequest, PlanBegin, PlanChunk, PlanCommit, PlanRead,
};

/// What must be remembered between requests.
#[derive(Debug)]
pub(super) struct Memory {
    plan: PlanLoad,
    /// Number of the kind and token of the order done last: the same again is answered, not done
    /// again.
    order: Option<(u8, u32)>,
}

impl From<Malformed> for Refusal {
    fn from(_: Malformed) -> Self {
        ErrorCode::Malformed.into()
    }
}

impl Memory {
    pub(super) const fn new() -> Self {
        Self { plan: PlanLoad::new(), order: None }
    }

    /// Puts the reply to `frame` into the outbox.
    pub(super) fn answer<S: Served>(
        &mut self,
        frame: Frame<'_>,
        link: LinkCounters,
        served: &mut S,
        outbox: &mut Outbox,
    ) {
        let result = match Kind::from_number(frame.kind) {
            Some(kind) => self.dispatch(kind, frame.body, link, served, outbox),
            None => Err(ErrorCode::UnknownKind.into()),
        };
        if let Err(refusal) = result {
            let detail = match refusal.code {
                ErrorCode::UnknownKind | ErrorCode::Malformed => u32::from(frame.kind),
                _ => refusal.detail,
            };
            outbox.put(&refusal.code.reply(frame.kind, detail));
        }
    }

    fn dispatch<S: Served>(
        &mut self,
        kind: Kind,
        body: &[u8],
        link: LinkCounters,
        served: &mut S,
        outbox: &mut Outbox,
    ) -> Result<(), Refusal> {
        match kind {
            Kind::Hello => {
                Hello::decode(body)?;
                // A new connection numbers its orders anew.
                self.order = None;
                outbox.put(&served.identity());
            }
            Kind::StatusRequest => {
                let mut status = served.status();
                status.link = link;
                outbox.put(&status);
            }
            Kind::PartStatusRequest => {
                let part = PartStatusRequest::decode(body)?.part;
                let status = served.part_status(part).ok_or(ErrorCode::NoSuchPart)?;
                outbox.put(&status);
            }
            Kind::FaultStatusRequest => outbox.put(&served.fault_status()),
            Kind::FillingRequest => outbox.put(&served.filling()),
            Kind::PlanBegin => outbox.put(&self.plan.begin(&PlanBegin::decode(body)?, served)?),
            Kind::PlanChunk => outbox.put(&self.plan.chunk(&PlanChunk::decode(body)?, served)?),
            Kind::PlanCommit => outbox.put(&self.plan.commit(PlanCommit::decode(body)?, served)?),
            Kind::PlanListRequest => outbox.put(&served.plans()),
            Kind::PlanRead => read_plan(&PlanRead::decode(body)?, served, outbox)?,
            Kind::ClockSet => {
                let order = ClockSet::decode(body)?;
                let done = self.once(kind, order.token, || served.set_clock(order.utc_s))?;
                outbox.put(&done);
            }
            Kind::Acknowledge => {
                let order = Acknowledge::decode(body)?;
                let done = self.once(kind, order.token, || served.acknowledge())?;
                outbox.put(&done);
            }
            Kind::JournalBoundsRequest => outbox.put(&served.journal_bounds()),
            Kind::HeadRequest => outbox.put(&served.head()?),
            // A sound sector request went into the queue instead.
            Kind::SectorRequest => return Err(ErrorCode::Malformed.into()),
            // Replies do not come to a device.
            _ => return Err(ErrorCode::UnknownKind.into()),
        }
        Ok(())
    }

    fn once(
        &mut self,
        kind: Kind,
        token: u32,
        order: impl FnOnce() -> Result<(), Refusal>,
    ) -> Result<Done, Refusal> {
        if self.order != Some((kind.number(), token)) {
            order()?;
            self.order = Some((kind.number(), token));
        }
        Ok(Done { token })
    }
}

/// The same bytes as [`strake_core::wire::PlanData`], read straight into the frame.
fn read_plan<S: Served>(
    read: &PlanRead,
    served: &mut S,
    outbox: &mut Outbox,
) -> Result<(), Refusal> {
    let plans = served.plans().plans;
    let entry =
        plans.iter().find(|entry| entry.length > 0 && entry.fingerprint == read.fingerprint);
    let length = entry.ok_or(ErrorCode::PlanUnknown)?.length;
    let left = usize::try_from(length.saturating_sub(read.offset)).unwrap_or(usize::MAX);
    let bytes = left.min(usize::from(read.length.min(PLAN_DATA_BYTES)));
    let mut result = Ok(());
    outbox.build(Kind::PlanData.number(), &mut |body| {
        read.fingerprint.put(body);
        read.offset.put(body);
        body.length(bytes);
        if bytes > 0 {
            result = served.read_plan(read.fingerprint, read.offset, body.reserve(bytes));
        }
    });
    if result.is_err() {
        outbox.clear();
    }
    result
}

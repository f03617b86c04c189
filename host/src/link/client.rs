//! Asking the device, one exchange at a time.

use super::error::doing;
use super::{LinkError, Port, VersionMismatch, Versioned};
use std::time::Duration;
use strake_core::wire::{
    Acknowledge, ClockSet, Done, ErrorCode, ErrorReply, FaultStatus, FaultStatusRequest,
    FillingRequest, FillingStatus, Frame, Head, HeadRequest, Hello, Identity, JournalBounds,
    JournalBoundsRequest, Kind, Message, PLAN_CHUNK_BYTES, PLAN_DATA_BYTES, PROTOCOL_VERSION,
    PartStatus, PartStatusRequest, PlanBegin, PlanChunk, PlanCommit, PlanData, PlanEntry, PlanList,
    PlanListRequest, PlanRead, PlanReply, REPLY_FRAME_BYTES, Receiver, Status, StatusRequest, Text,
};

/// How long one attempt waits for its reply.
const ATTEMPT: Duration = Duration::from_millis(300);
/// How long an attempt waits that makes the device check a plan.
const CHECK_ATTEMPT: Duration = Duration::from_secs(3);
/// Attempts where no frame has ever come: together above the second in which an emulator notices
/// that its port was opened.
const SILENT_ATTEMPTS: u32 = 8;
/// Attempts while a device that has been heard is silent.
const LOST_ATTEMPTS: u32 = 24;
/// Attempts while bytes come: enough for a bit error rate of 1e-3.
const NOISY_ATTEMPTS: u32 = 60;
/// Pause before a busy device is asked again, and how often it is.
const BUSY_PAUSE: Duration = Duration::from_millis(100);
const BUSY_MAX: u32 = 300;
/// Bytes of a plan in one frame once a frame was lost.
const SMALL_BYTES: u16 = 48;

/// A connection to one device, its identity known and its protocol ours.
#[derive(Debug)]
pub struct Client<P> {
    pub(super) port: P,
    receiver: Receiver<REPLY_FRAME_BYTES>,
    identity: Identity,
    token: u32,
    pub(super) heard: Heard,
}

/// What has come over the line so far.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) struct Heard {
    /// Bytes of any kind.
    pub(super) bytes: u64,
    /// Sound frames.
    pub(super) frames: u64,
    /// Stretches between zeros that were no frame.
    pub(super) bad: u64,
}

impl<P: Port> Client<P> {
    /// Greets whoever is on the port.
    ///
    /// # Errors
    /// [`LinkError::Silent`], [`LinkError::NotStrake`], [`LinkError::Version`], or the port's.
    pub fn connect(port: P) -> Result<Self, LinkError> {
        let mut client = Self {
            port,
            receiver: Receiver::new(),
            identity: Identity::default(),
            token: 0,
            heard: Heard::default(),
        };
        client.hello()?;
        Ok(client)
    }

    /// Greets again: the identity as it is now.
    ///
    /// # Errors
    /// As [`Self::connect`].
    pub fn hello(&mut self) -> Result<&Identity, LinkError> {
        let is_sound =
            |identity: &Identity| identity.firmware.is_text() && identity.device_id.is_text();
        self.identity = self.ask(&Hello { protocol: PROTOCOL_VERSION }, is_sound)?;
        self.same(Versioned::Protocol, PROTOCOL_VERSION, self.identity.protocol)?;
        Ok(&self.identity)
    }

    /// Checks that the device writes the journal that this program reads.
    ///
    /// # Errors
    /// [`LinkError::Version`].
    pub fn require_journal_format(&self, ours: u8) -> Result<(), LinkError> {
        self.same(Versioned::Journal, ours.into(), self.identity.journal_format.into())
    }

    /// Checks that the device takes the plans that this program makes.
    ///
    /// # Errors
    /// [`LinkError::Version`].
    pub fn require_plan_format(&self, ours: u8) -> Result<(), LinkError> {
        self.same(Versioned::Plan, ours.into(), self.identity.plan_format.into())
    }

    fn same(&self, of: Versioned, ours: u16, theirs: u16) -> Result<(), LinkError> {
        let device = self.identity;
        let mismatch = LinkError::Version(VersionMismatch { of, ours, device });
        if ours == theirs { Ok(()) } else { Err(mismatch) }
    }

    /// What the device said at the last greeting.
    #[must_use]
    pub const fn identity(&self) -> &Identity {
        &self.identity
    }

    /// The port's name.
    #[must_use]
    pub fn port_name(&self) -> &str {
        self.port.name()
    }

    /// The device at one glance.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn status(&mut self) -> Result<Status, LinkError> {
        self.ask(&StatusRequest {}, |_| true)
    }

    /// One part.
    ///
    /// # Errors
    /// [`LinkError::Refused`] with [`ErrorCode::NoSuchPart`], or another [`LinkError`].
    pub fn part_status(&mut self, part: u8) -> Result<PartStatus, LinkError> {
        self.ask(&PartStatusRequest { part }, |status: &PartStatus| status.part == part)
    }

    /// Every fault cause.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn fault_status(&mut self) -> Result<FaultStatus, LinkError> {
        self.ask(&FaultStatusRequest {}, |_| true)
    }

    /// How fast the tank fills; `None` from a device too old to say.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn filling(&mut self) -> Result<Option<FillingStatus>, LinkError> {
        match self.ask(&FillingRequest {}, |_: &FillingStatus| true) {
            Err(LinkError::Refused { code: ErrorCode::UnknownKind, .. }) => Ok(None),
            answer => answer.map(Some),
        }
    }

    /// Which sectors there are.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn journal_bounds(&mut self) -> Result<JournalBounds, LinkError> {
        self.ask(&JournalBoundsRequest {}, |_| true)
    }

    /// Where the journal ends.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn head(&mut self) -> Result<Head, LinkError> {
        self.ask(&HeadRequest {}, |_| true)
    }

    /// Sets the clock.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn set_clock(&mut self, utc_s: u64) -> Result<(), LinkError> {
        let token = self.next_token();
        self.ask(&ClockSet { token, utc_s }, |done: &Done| done.token == token).map(drop)
    }

    /// Acknowledges what sounds.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn acknowledge(&mut self) -> Result<(), LinkError> {
        let token = self.next_token();
        self.ask(&Acknowledge { token }, |done: &Done| done.token == token).map(drop)
    }

    /// Loads a plan and puts it into force. `device_id` is the device it is sealed for; empty: any.
    ///
    /// # Errors
    /// [`LinkError::Refused`] with a `Plan..` code, or another [`LinkError`].
    pub fn load_plan(
        &mut self,
        bytes: &[u8],
        serial: u64,
        fingerprint: u64,
        device_id: Text,
    ) -> Result<(), LinkError> {
        let length = u32::try_from(bytes.len()).unwrap_or(u32::MAX);
        let begin = PlanBegin { length, serial, fingerprint, device_id };
        self.ask(&begin, |reply: &PlanReply| reply.fingerprint == fingerprint)?;
        let (mut held, mut most) = (0, PLAN_CHUNK_BYTES);
        while let Some(rest @ [_, ..]) = bytes.get(held..) {
            let offset = u32::try_from(held).unwrap_or(u32::MAX);
            let mut chunk = |attempt| {
                if attempt > 0 {
                    most = usize::from(SMALL_BYTES);
                }
                PlanChunk { offset, bytes: &rest[..rest.len().min(most)] }
            };
            let reply: PlanReply = self.exchange(&mut chunk, &mut |frame| {
                let reply = reply::<PlanReply>(frame)?.ok()?;
                (reply.fingerprint == fingerprint && reply.received > offset).then_some(reply)
            })?;
            held = usize::try_from(reply.received).unwrap_or(usize::MAX);
        }
        self.ask(&PlanCommit { fingerprint }, |reply: &PlanReply| {
            reply.fingerprint == fingerprint && reply.in_force
        })?;
        self.hello().map(drop)
    }

    /// The plans the device keeps, the one in force first.
    ///
    /// # Errors
    /// [`LinkError`].
    pub fn plans(&mut self) -> Result<Vec<PlanEntry>, LinkError> {
        let list: PlanList = self.ask(&PlanListRequest {}, |_| true)?;
        Ok(list.plans.into_iter().filter(|plan| plan.length > 0).collect())
    }

    /// The bytes of a stored plan.
    ///
    /// # Errors
    /// [`LinkError::Refused`] with [`ErrorCode::PlanUnknown`], or another [`LinkError`].
    pub fn read_plan(&mut self, fingerprint: u64) -> Result<Vec<u8>, LinkError> {
        let (mut plan, mut length) = (Vec::new(), PLAN_DATA_BYTES);
        loop {
            let before = plan.len();
            let offset = u32::try_from(before).unwrap_or(u32::MAX);
            let mut request = |attempt| {
                if attempt > 0 {
                    length = SMALL_BYTES;
                }
                PlanRead { fingerprint, offset, length }
            };
            self.exchange(&mut request, &mut |frame| {
                let data = reply::<PlanData<'_>>(frame)?.ok()?;
                let asked_for = data.fingerprint == fingerprint && data.offset == offset;
                asked_for.then(|| plan.extend(data.bytes))
            })?;
            if plan.len() == before {
                return Ok(plan);
            }
            if plan.len() > crate::journal_file::PLAN_BYTES_MAX {
                let what = "the plan is longer than any plan";
                return Err(LinkError::Nonsense { doing: doing(Kind::PlanRead), what });
            }
        }
    }

    fn next_token(&mut self) -> u32 {
        self.token = self.token.wrapping_add(1);
        self.token
    }

    /// One request and the reply that belongs to it.
    fn ask<'m, Q, A>(&mut self, request: &Q, belongs: impl Fn(&A) -> bool) -> Result<A, LinkError>
    where
        Q: Message<'m> + Copy,
        A: for<'a> Message<'a>,
    {
        let answer = self.exchange(&mut |_| *request, &mut |frame| match reply::<A>(frame)? {
            Ok(answer) => belongs(&answer).then_some(Ok(answer)),
            Err(malformed) => Some(Err(malformed)),
        })?;
        let what = "its length or a value in it";
        answer.map_err(|_| LinkError::Nonsense { doing: doing(Q::KIND), what })
    }

    /// Sends a request, made anew for each attempt from zero on, until `take` takes a frame.
    fn exchange<'m, Q: Message<'m>, T>(
        &mut self,
        request: &mut dyn FnMut(u32) -> Q,
        take: &mut dyn FnMut(&Frame<'_>) -> Option<T>,
    ) -> Result<T, LinkError> {
        let started = self.port.now();
        let before = self.heard;
        let wait = if Q::KIND == Kind::PlanCommit { CHECK_ATTEMPT } else { ATTEMPT };
        let (mut attempts, mut busy) = (0, 0);
        loop {
            let most = match (self.heard.bytes > before.bytes, self.heard.frames > 0) {
                (true, _) => NOISY_ATTEMPTS,
                (false, true) => LOST_ATTEMPTS,
                (false, false) => SILENT_ATTEMPTS,
            };
            if attempts >= most {
                return Err(self.no_answer(doing(Q::KIND), before, started));
            }
            self.send(&request(attempts))?;
            attempts += 1;
            match self.wait_for(Q::KIND, wait, take)? {
                None => {}
                Some(Ok(taken)) => return Ok(taken),
                Some(Err(reply)) => match ErrorCode::from_number(reply.code) {
                    Some(ErrorCode::Busy) if busy < BUSY_MAX => {
                        (attempts, busy) = (0, busy + 1);
                        self.pause(BUSY_PAUSE)?;
                    }
                    code => return Err(refusal(doing(Q::KIND), code, reply)),
                },
            }
        }
    }

    /// Sends one request; a zero before it ends whatever garbage the device has heard.
    pub(super) fn send<'m, Q: Message<'m>>(&mut self, request: &Q) -> Result<(), LinkError> {
        let mut frame = [0; REPLY_FRAME_BYTES];
        let Some(length) = request.encode(&mut frame[1..]) else {
            let what = "the request does not fit a frame";
            return Err(LinkError::Nonsense { doing: doing(Q::KIND), what });
        };
        Ok(self.port.write(&frame[..=length])?)
    }

    /// Frames until `take` takes one, the device refuses this kind, or the time is over.
    fn wait_for<T>(
        &mut self,
        kind: Kind,
        wait: Duration,
        take: &mut dyn FnMut(&Frame<'_>) -> Option<T>,
    ) -> Result<Option<Result<T, ErrorReply>>, LinkError> {
        let until = self.port.now() + wait;
        let mut result = None;
        while result.is_none() {
            let left = until.saturating_sub(self.port.now());
            if left.is_zero() {
                break;
            }
            self.listen(left, &mut |frame| {
                if result.is_none() {
                    result = match reply::<ErrorReply>(frame) {
                        Some(Ok(reply)) if reply.to == kind.number() => Some(Err(reply)),
                        _ => take(frame).map(Ok),
                    };
                }
            })?;
        }
        Ok(result)
    }

    /// Reads once and shows every sound frame. Returns how many bytes came.
    pub(super) fn listen(
        &mut self,
        wait: Duration,
        show: &mut dyn FnMut(&Frame<'_>),
    ) -> Result<usize, LinkError> {
        let mut bytes = [0; 512];
        let count = self.port.read(&mut bytes, wait)?;
        for byte in &bytes[..count] {
            self.heard.bytes += 1;
            match self.receiver.accept(*byte) {
                None => {}
                Some(Ok(frame)) => {
                    self.heard.frames += 1;
                    show(&frame);
                }
                Some(Err(_)) => self.heard.bad += 1,
            }
        }
        Ok(count)
    }

    fn pause(&mut self, pause: Duration) -> Result<(), LinkError> {
        let until = self.port.now() + pause;
        loop {
            let left = until.saturating_sub(self.port.now());
            if left.is_zero() {
                return Ok(());
            }
            self.listen(left, &mut |_| {})?;
        }
    }

    /// Why there is no answer, judged by what was heard since `before`.
    pub(super) fn no_answer(
        &self,
        doing: &'static str,
        before: Heard,
        started: Duration,
    ) -> LinkError {
        let port = self.port.name().to_owned();
        let bytes = self.heard.bytes - before.bytes;
        let (bad, frames) = (self.heard.bad - before.bad, self.heard.frames - before.frames);
        if bytes == 0 {
            LinkError::Silent { port, waited: self.port.now().saturating_sub(started) }
        } else if self.heard.frames == 0 {
            LinkError::NotStrake { port, bytes }
        } else {
            LinkError::Noisy { port, doing, bad, frames: bad + frames }
        }
    }
}

/// The message in a frame of its kind; `None` for another kind.
pub(super) fn reply<'a, A: Message<'a>>(
    frame: &Frame<'a>,
) -> Option<Result<A, strake_core::wire::Malformed>> {
    (frame.kind == A::KIND.number()).then(|| A::decode(frame.body))
}

fn refusal(doing: &'static str, code: Option<ErrorCode>, reply: ErrorReply) -> LinkError {
    match code {
        Some(code) => LinkError::Refused { doing, code, detail: reply.detail },
        None => LinkError::UnknownCode { doing, code: reply.code, detail: reply.detail },
    }
}

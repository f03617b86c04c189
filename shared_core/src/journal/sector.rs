//! Reading: the items of a page, and of a whole sector. Total on any bytes.

use super::block::{Blocks, Form, Place};
use super::bytes::Source;
use super::checkpoint::Collector;
use super::entry::Entry;
use super::header::{HEADER_BYTES, HeaderError, SectorHeader};
use super::samples::{Chain, Packed, PlainChain};
use super::{PAGE_BYTES, SECTOR_BYTES, events};

/// What a reader meets.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Item<'a> {
    /// An entry.
    Entry(Entry),
    /// A part of the checkpoint, for a [`Collector`].
    State {
        /// Number of the part, from 0.
        part: u8,
        /// Its bytes, with the padding behind them.
        payload: &'a [u8],
    },
    /// A place that cannot be read.
    Damage(Damage),
}

/// A place that cannot be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct Damage {
    /// Offset of the block in the sector.
    pub offset: u16,
    /// What is wrong.
    pub kind: DamageKind,
}

/// What is wrong with a block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum DamageKind {
    /// No block with a right check; the rest of the page is passed over.
    Torn,
    /// A right check, but a form this version does not know, or samples that chain to such a block;
    /// passed over.
    UnknownForm,
    /// A right check, but an entry this version does not know; the rest of the block is passed
    /// over.
    UnknownEntry,
}

/// Walks over the items of one page. Pages stand for themselves, so a device reads them one by one.
#[derive(Clone, Debug)]
pub struct PageReader<'a> {
    blocks: Blocks<'a>,
    chain: Chain,
    plain: PlainChain,
    /// A block of samples was passed over, so later ones of this page have nothing to chain to.
    chain_broken: bool,
    open: Option<Open<'a>>,
}

/// A block that is being read.
#[derive(Clone, Copy, Debug)]
struct Open<'a> {
    content: Content<'a>,
    left: u8,
    offset: u16,
}

/// The entries of a block, from the next one on.
#[derive(Clone, Copy, Debug)]
enum Content<'a> {
    Events(Source<'a>),
    Plain(Source<'a>),
    Packed(Packed<'a>),
}

impl<'a> PageReader<'a> {
    /// The items of `page`, the one with this index in the sector of `header`. The first page holds
    /// the header, which is passed over.
    #[must_use]
    pub fn new(page: &'a [u8], index: u8, header: &SectorHeader) -> Self {
        let offset = u16::from(index) * 256;
        let place = Place { sequence: header.sequence, offset, word: header.word };
        Self::at(page, if index == 0 { HEADER_BYTES } else { 0 }, place)
    }

    /// The items of a page outside any sector: its blocks begin behind `skip` bytes and their
    /// checks are seeded as for `place`.
    #[must_use]
    pub fn at(page: &'a [u8], skip: usize, place: Place) -> Self {
        Self {
            blocks: Blocks::new(page, skip, place),
            chain: Chain::default(),
            plain: PlainChain::default(),
            chain_broken: false,
            open: None,
        }
    }

    #[inline]
    fn next_entry(&mut self) -> Option<Item<'a>> {
        let open = self.open.as_mut().filter(|open| open.left > 0)?;
        open.left -= 1;
        let sample = match &mut open.content {
            Content::Events(source) => match events::read(source) {
                Some(entry) => return Some(Item::Entry(entry)),
                None => None,
            },
            Content::Plain(source) => self.plain.read(source),
            Content::Packed(packed) => packed.next(&mut self.chain),
        };
        if let Some(sample) = sample {
            return Some(Item::Entry(Entry::Sample(sample)));
        }
        open.left = 0;
        self.chain_broken |= !matches!(open.content, Content::Events(_));
        let kind = DamageKind::UnknownEntry;
        Some(Item::Damage(Damage { offset: open.offset, kind }))
    }
}

impl<'a> Iterator for PageReader<'a> {
    type Item = Item<'a>;

    fn next(&mut self) -> Option<Item<'a>> {
        loop {
            if let Some(item) = self.next_entry() {
                return Some(item);
            }
            let block = match self.blocks.next()? {
                Ok(block) => block,
                Err(torn) => {
                    let kind = DamageKind::Torn;
                    return Some(Item::Damage(Damage { offset: torn.offset, kind }));
                }
            };
            let source = Source::new(block.payload);
            let content = match block.form {
                Form::State => {
                    let (part, payload) = (block.count - 1, block.payload);
                    return Some(Item::State { part, payload });
                }
                Form::Events => Some(Content::Events(source)),
                Form::Samples if !self.chain_broken => Some(Content::Plain(source)),
                Form::Packed if !self.chain_broken => {
                    Packed::open(block.payload, &mut self.chain).map(Content::Packed)
                }
                Form::Samples | Form::Packed | Form::Unknown(_) => None,
            };
            let Some(content) = content else {
                self.chain_broken = true;
                let kind = DamageKind::UnknownForm;
                return Some(Item::Damage(Damage { offset: block.offset, kind }));
            };
            self.open = Some(Open { content, left: block.count, offset: block.offset });
        }
    }
}

/// Walks over the items of a sector that lies in memory, whole or cut short behind its last block.
#[derive(Clone, Debug)]
pub struct SectorReader<'a> {
    header: SectorHeader,
    sector: &'a [u8],
    next_page: u8,
    page: PageReader<'a>,
}

impl<'a> SectorReader<'a> {
    /// A reader of the sector at the beginning of `bytes`.
    ///
    /// # Errors
    /// When there is no readable header.
    pub fn new(bytes: &'a [u8]) -> Result<Self, HeaderError> {
        let header = SectorHeader::decode(bytes)?;
        let sector = bytes.get(..SECTOR_BYTES).unwrap_or(bytes);
        let page = PageReader::new(page_of(sector, 0), 0, &header);
        Ok(Self { header, sector, next_page: 1, page })
    }

    /// The sector's header.
    #[must_use]
    pub const fn header(&self) -> &SectorHeader {
        &self.header
    }

    /// Puts the checkpoint together in `state`; `None` when it is torn or longer than that.
    #[must_use]
    pub fn checkpoint<'s>(&self, state: &'s mut [u8]) -> Option<&'s [u8]> {
        let mut collector = Collector::new(state);
        for index in 0..16 {
            for item in PageReader::new(page_of(self.sector, index), index, &self.header) {
                match item {
                    Item::State { part, payload } => collector.take(part, payload),
                    // No entry stands before the whole checkpoint does.
                    Item::Entry(_) => return collector.into_finished(),
                    Item::Damage(_) => {}
                }
            }
        }
        collector.into_finished()
    }
}

fn page_of(sector: &[u8], index: u8) -> &[u8] {
    sector.chunks(PAGE_BYTES).nth(usize::from(index)).unwrap_or(&[])
}

impl<'a> Iterator for SectorReader<'a> {
    type Item = Item<'a>;

    fn next(&mut self) -> Option<Item<'a>> {
        loop {
            if let Some(item) = self.page.next() {
                return Some(item);
            }
            if self.next_page >= 16 {
                return None;
            }
            let index = self.next_page;
            self.next_page += 1;
            self.page = PageReader::new(page_of(self.sector, index), index, &self.header);
        }
    }
}

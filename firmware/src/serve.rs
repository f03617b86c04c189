//! The device's side of the link: answers requests, streams sectors, holds no decision.
//!
//! [`Server`] turns bytes into calls of [`Served`], which the application implements, and results
//! into frames. It never waits: each [`Server::poll`] takes a bounded number of bytes from the link
//! and puts out what the link takes at once. It remembers only what is under way.

mod answer;
mod outbox;
mod plan_load;
mod sectors;
mod served;
mod server;
#[cfg(test)]
mod tests;

pub use served::{Refusal, Served};
pub use server::Server;

//! Integration tests, in one crate.

#![allow(clippy::unwrap_used, reason = "tests may unwrap")]

mod faults;
mod formula;
mod joint_read;
mod quantity;
mod yaml;

//! Seamnote turns welded-joint definitions (YAML) into stress notes that a checker can follow alone.
//!
//! The rooms below stand in floor order: a room uses only those above it in this list.

#![cfg_attr(test, allow(clippy::unwrap_used, reason = "tests may unwrap"))]

pub mod source;

pub mod quantity;

pub mod formula;

pub mod joint;

pub mod weld;

pub mod load;

pub mod solve;

pub mod criteria;

pub mod note;

pub mod figure;

pub mod render;

pub mod project;

pub mod cli;

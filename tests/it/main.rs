//! Integration tests, in one crate so that the typesetter is linked once.

#![allow(clippy::unwrap_used, reason = "tests may unwrap")]

mod command;
mod criteria;
mod faults;
mod figure;
mod formula;
mod groups;
mod joint_read;
mod keys;
mod laying;
mod mechanics;
mod notes;
mod quantity;
mod readme;
mod render;
mod replay;
mod schema;
mod settle;
mod starting;
mod tidy;
mod weld_faults;
mod weldkit;
mod whole;
mod yaml;

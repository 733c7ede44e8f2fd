//! Integration tests, in one crate so that the typesetter is linked once.

#![allow(clippy::unwrap_used, reason = "tests may unwrap")]

mod criteria;
mod faults;
mod figure;
mod formula;
mod groups;
mod joint_read;
mod laying;
mod mechanics;
mod quantity;
mod render;
mod weldkit;
mod yaml;

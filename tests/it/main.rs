//! Integration tests, in one crate so that the typesetter is linked once.

#![allow(clippy::unwrap_used, reason = "tests may unwrap")]

mod command;
mod criteria;
mod disk;
mod faults;
mod figure;
mod formula;
mod fuzz;
mod groups;
mod joint_read;
mod keys;
mod laying;
mod maths;

mod mechanics;
mod notes;
mod own_templates;
mod project_file;
mod quantity;
mod readme;
mod render;
mod replay;
mod schema;
mod settle;
mod starting;
mod tables;
mod tidy;
mod weld_faults;
mod weldkit;
mod whole;
mod yaml;

//! Clause sheets: read, assessed and worked.

mod codes;
mod faults;
mod kit;
mod own;
mod search;
mod worked;

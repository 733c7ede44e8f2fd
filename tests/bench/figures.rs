//! Speed of the whole way, of many joints, and of the batch kernel, printed as ratios.
//!
//! Run by `cargo bench`, or a part of it by its name, as in `cargo bench --bench figures -- reading`. It takes the dependencies as `cargo test --release` built them. Nothing
//! here is asserted: times depend on the machine, and DEVELOPERS.md holds the ratios measured.

#![allow(clippy::unwrap_used, reason = "a bench may unwrap")]
#![expect(clippy::print_stdout, reason = "a bench prints its figures")]

mod joints;
mod kernel;

/// The same allocator as the program's.
#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

fn main() {
    let parts: [(&str, String, fn()); 5] = [
        ("cold", "one joint, cold process".into(), joints::cold),
        (
            "stages",
            "one joint in this process, by stages".into(),
            joints::stages,
        ),
        (
            "reading",
            "joint files read, one core".into(),
            joints::reading,
        ),
        (
            "many",
            format!("{} joints in one process", joints::MANY),
            joints::many,
        ),
        ("kernel", "batch kernel, one core".into(), kernel::largest),
    ];
    let wanted: Vec<String> = std::env::args()
        .skip(1)
        .filter(|word| !word.starts_with('-'))
        .collect();
    for (name, title, part) in parts {
        if wanted.is_empty() || wanted.iter().any(|word| word == name) {
            println!("\n{title}");
            part();
        }
    }
}

/// The least of some times (s): what else the machine does only adds to them.
fn least(times: Vec<f64>) -> f64 {
    times.into_iter().fold(f64::INFINITY, f64::min)
}

/// Seconds that `work` takes.
fn seconds<T>(work: impl FnOnce() -> T) -> f64 {
    let start = std::time::Instant::now();
    std::hint::black_box(work());
    start.elapsed().as_secs_f64()
}

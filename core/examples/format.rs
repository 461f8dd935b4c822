//! Prints the reference of the scenario format: `cargo run -p fallaround-core --example format > scenarios/FORMAT.md`

#[expect(clippy::print_stdout, reason = "printing is what it is for")]
fn main() {
    print!("{}", fallaround_core::scenario::format_page());
}

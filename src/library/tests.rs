//! The published data load.

#[test]
fn the_data_load() {
    if let Err(problems) = super::load() {
        panic!("{}", problems.join("\n"));
    }
}

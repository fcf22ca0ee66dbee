//! Hands the command line over.

fn main() {}

//! Builds again when a migration is added: the macro that embeds the folder does not notice a new file by itself.

fn main() {
    println!("cargo:rerun-if-changed=migrations");
}

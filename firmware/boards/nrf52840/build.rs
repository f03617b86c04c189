//! Adds this board's limits to the linker scripts.

fn main() {
    if let Ok(folder) = std::env::var("CARGO_MANIFEST_DIR") {
        println!("cargo:rustc-link-search={folder}");
    }
    // A host's linker has none of the symbols that the limits are about.
    if std::env::var("CARGO_CFG_TARGET_OS").is_ok_and(|system| system == "none") {
        println!("cargo:rustc-link-arg-bins=-Tlimits.x");
    }
    println!("cargo:rerun-if-changed=limits.x");
}

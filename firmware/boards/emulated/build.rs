//! Puts the linker scripts of this board on the linker's search path.

fn main() {
    if let Ok(folder) = std::env::var("CARGO_MANIFEST_DIR") {
        println!("cargo:rustc-link-search={folder}");
    }
    println!("cargo:rerun-if-changed=memory.x");
    println!("cargo:rerun-if-changed=device.x");
}

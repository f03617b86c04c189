//! A level sensor for the emulated device, played by hand.
//!
//! Listens on the address given (127.0.0.1:5020 unless said otherwise) for the device's sensor bus
//! and answers as Modbus RTU unit 1. Each line typed sets register 0: a count from 0 to 65535, or
//! `silent` and `well`.

#[path = "../sensor.rs"]
#[expect(dead_code, reason = "shared with the tests, which use more of it")]
mod sensor;

use std::io::{self, BufRead as _};
use std::net::TcpListener;
use std::thread;

use sensor::{Mood, Sensor};

fn main() -> io::Result<()> {
    let address = std::env::args().nth(1).unwrap_or_else(|| "127.0.0.1:5020".to_owned());
    let listener = TcpListener::bind(&address)?;
    let sensor = Sensor::default();
    sensor.set_register(0, 0);
    println!("sensor on {address}: type a count, `silent` or `well`");
    let serving = sensor.clone();
    thread::spawn(move || {
        for line in listener.incoming().flatten() {
            // A line without it works too, each answer 40 ms later.
            let _ = line.set_nodelay(true);
            serving.serve(line);
        }
    });
    for line in io::stdin().lock().lines() {
        match line?.trim() {
            "silent" => sensor.set_mood(Mood::Silent),
            "well" => sensor.set_mood(Mood::Well),
            text => match text.parse() {
                Ok(count) => sensor.set_register(0, count),
                Err(_) => eprintln!("a count from 0 to 65535, `silent` or `well` expected"),
            },
        }
    }
    Ok(())
}

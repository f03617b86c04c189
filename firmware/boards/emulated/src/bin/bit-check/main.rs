//! Bit check: evaluates the plans and inputs of a vector file and writes every result back.
//!
//! The file stands where the journal does; its format is that of `vectors.rs`. At the end one line
//! goes out over the host link: `done` with the number of words, or `no` with the reason.
#![cfg_attr(target_os = "none", no_std)]
#![cfg_attr(target_os = "none", no_main)]
#![deny(unsafe_code)]

#[cfg(target_os = "none")]
mod file;
#[cfg(target_os = "none")]
mod vectors;

#[cfg(target_os = "none")]
mod device {
    use core::fmt::Write as _;

    use embedded_io::Write as _;
    use heapless::String;
    use strake_board_emulated::uart::SerialPort;
    use strake_board_emulated::{Parts, restart};
    use strake_core::evaluate::State;
    use strake_core::plan::Plan;
    use strake_core::plan::codec::decode_into;

    use crate::file::File;
    use crate::vectors::{self, FILE_MAGIC, Input};

    #[cortex_m_rt::entry]
    fn main() -> ! {
        static mut PLAN: Plan = Plan::empty();
        let Some(parts) = Parts::take() else { restart() };
        let mut file = File::new(parts.journal);
        let mut line = String::<64>::new();
        // Both fit the line.
        let _ = match evaluate(&mut file, PLAN, parts.processor_id) {
            Ok(words) => writeln!(line, "done {words}"),
            Err(why) => writeln!(line, "no {why}"),
        };
        say(parts.link, &line);
        loop {
            cortex_m::asm::wfi();
        }
    }

    fn say(mut link: SerialPort, line: &str) {
        // The line cannot fail, its error type has no value.
        let _ = link.write_all(line.as_bytes());
        let _ = link.flush();
    }

    /// Evaluates the whole file; gives the number of words written.
    fn evaluate(file: &mut File, plan: &mut Plan, processor_id: u32) -> Result<u32, &'static str> {
        let [magic, plans, results] = file.words().ok_or("the file ends in its head")?;
        if magic != FILE_MAGIC {
            return Err("the file is no vector file");
        }
        file.write_from(results);
        for _ in 0..plans {
            let [plan_bytes, inputs] = file.words().ok_or("the file ends before a plan")?;
            let end = file.position().saturating_add(plan_bytes);
            // Filled up to whole words: what fills is no section of the plan.
            file.end_at(end);
            decode_into(file, plan).map_err(|_| "a plan is refused")?;
            file.read_from(end.next_multiple_of(4));
            let mut state = State::default();
            for _ in 0..inputs {
                let words = file.words().ok_or("the file ends before an input")?;
                let input = Input::decode(words).ok_or("an input is not known")?;
                vectors::take(plan, &mut state, &input, &mut |word| file.put(word));
            }
            vectors::put_state(&state, &mut |word| file.put(word));
        }
        file.finish(processor_id).ok_or("the results do not fit")
    }
}

#[cfg(not(target_os = "none"))]
fn main() {
    eprintln!("this program is for the emulated board and needs a vector file in its flash");
}

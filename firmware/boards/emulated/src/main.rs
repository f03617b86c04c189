//! The device on the emulated board: the application with this board's parts, nothing else.
#![cfg_attr(target_os = "none", no_std)]
#![cfg_attr(target_os = "none", no_main)]
#![deny(unsafe_code)]

#[cfg(target_os = "none")]
mod device {
    use core::mem::MaybeUninit;

    use strake_board_emulated::flash::NorRegion;
    use strake_board_emulated::pins::{Button, Output};
    use strake_board_emulated::retained::Retained;
    use strake_board_emulated::timer::{MonotonicClock, sleep_until};
    use strake_board_emulated::uart::SerialPort;
    use strake_board_emulated::{Parts, restart, watchdog};
    use strake_core::lane::careless;
    use strake_core::wire::Text;
    use strake_firmware::app::App;
    use strake_firmware::board::{Board, Hardware, NoSource};
    use strake_firmware::rooms::{Rooms, Space};
    use strake_firmware::sensor::modbus::{Form, Function, ModbusSource, Place, Waits};

    /// Where the level stands unless the plan says otherwise.
    const LEVEL: Place = Place { unit: 1, function: Function::Input, register: 0, form: Form::U16 };
    /// Long enough for an answer while the emulator skips sleep.
    const WAITS: Waits = Waits { answer_ms: 2000, silence_ms: 4 };
    /// Many times what the slowest cycle takes, which waits for a silent sensor.
    const WATCHDOG_MS: u32 = 60_000;

    // The negative controls of bit-check are never shipped.
    const _: () = assert!(!careless::MAX && !careless::ROOT);

    struct Emulated;

    impl Board for Emulated {
        type Room<T: 'static> = &'static mut T;
        type Clock = MonotonicClock;
        type Level = ModbusSource<SerialPort, MonotonicClock>;
        type Temperature = NoSource;
        type Journal = NorRegion;
        type Plans = NorRegion;
        type Link = SerialPort;
        type Contact = Output;
        type Button = Button;
        type Retained = Retained;
        type Watchdog = watchdog::Running;
    }

    /// Apart from `main`, so that what the start needs of the stack is given back.
    #[inline(never)]
    fn start(
        parts: Parts,
        space: &'static mut Space,
        place: &'static mut MaybeUninit<App<Emulated>>,
    ) -> &'static mut App<Emulated> {
        let Space { memory, server, waiting } = space;
        let hardware = Hardware {
            clock: parts.clock,
            level: ModbusSource::new(parts.sensor_bus, parts.clock, LEVEL, WAITS),
            temperature: NoSource,
            journal: parts.journal,
            plans: parts.plans,
            link: parts.link,
            contact: parts.contact,
            button: parts.button,
            retained: parts.retained,
            watchdog: parts.watchdog.start(WATCHDOG_MS),
            device_id: Text::new("EMULATED").unwrap_or_default(),
            reset_cause: parts.reset_cause,
        };
        place.write(App::start(hardware, Rooms { memory, server, waiting }))
    }

    /// The ways to panic of the negative controls; nothing in what is shipped.
    #[inline(always)]
    fn control() {
        #[cfg(any(feature = "_index", feature = "_unwrap"))]
        use core::hint::black_box;
        #[cfg(feature = "_index")]
        black_box(black_box([1_u8, 2])[black_box(1_usize)]);
        #[cfg(feature = "_unwrap")]
        black_box(black_box(Some(1_u8)).unwrap());
    }

    #[cortex_m_rt::entry]
    fn main() -> ! {
        static mut SPACE: Space = Space::new();
        static mut APP: MaybeUninit<App<Emulated>> = MaybeUninit::uninit();
        let Some(parts) = Parts::take() else { restart() };
        let clock = parts.clock;
        // Static too, so that its size counts as what it is.
        let app = start(parts, SPACE, APP);
        loop {
            control();
            sleep_until(clock, app.poll());
        }
    }
}

#[cfg(not(target_os = "none"))]
fn main() {
    eprintln!("this program is for the emulated board: .ci/emulated-device");
}

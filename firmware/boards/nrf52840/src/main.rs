//! The device on the board with the nRF52840: the application with its parts, nothing else.
#![cfg_attr(target_os = "none", no_std)]
#![cfg_attr(target_os = "none", no_main)]
#![deny(unsafe_code)]

#[cfg(target_os = "none")]
mod device {
    use core::mem::MaybeUninit;

    use strake_board_common::retained::Retained;
    use strake_board_nrf52840::nvmc::PlanFlash;
    use strake_board_nrf52840::pins::{Button, Contact};
    use strake_board_nrf52840::sensor::Switched;
    use strake_board_nrf52840::timer::{MonotonicClock, sleep_until};
    use strake_board_nrf52840::uart::SerialPort;
    use strake_board_nrf52840::{Flash, Parts, restart, watchdog};
    use strake_firmware::app::App;
    use strake_firmware::board::{Board, Hardware, NoSource};
    use strake_firmware::rooms::{Rooms, Space};
    use strake_firmware::sensor::modbus::{Form, Function, ModbusSource, Place, Waits};

    /// Where the level stands unless the plan says otherwise.
    const LEVEL: Place = Place { unit: 1, function: Function::Input, register: 0, form: Form::U16 };
    /// 3.5 characters of silence at 9,600 baud; sensors answer within half of the time allowed.
    const WAITS: Waits = Waits { answer_ms: 300, silence_ms: 4 };

    struct Nrf52840;

    impl Board for Nrf52840 {
        type Room<T: 'static> = &'static mut T;
        type Clock = MonotonicClock;
        type Level = Switched<ModbusSource<SerialPort, MonotonicClock>>;
        type Temperature = NoSource;
        type Journal = Flash;
        type Plans = PlanFlash;
        type Link = SerialPort;
        type Contact = Contact;
        type Button = Button;
        type Retained = Retained;
        type Watchdog = watchdog::Running;
    }

    /// Apart from `main`, so that what the start needs of the stack is given back.
    #[inline(never)]
    fn start(
        parts: Parts,
        space: &'static mut Space,
        place: &'static mut MaybeUninit<App<Nrf52840>>,
    ) -> &'static mut App<Nrf52840> {
        let Space { memory, server, waiting } = space;
        let level = ModbusSource::new(parts.sensor_bus, parts.clock, LEVEL, WAITS);
        let hardware = Hardware {
            clock: parts.clock,
            level: Switched::new(level, parts.sensor_supply),
            temperature: NoSource,
            journal: parts.journal,
            plans: parts.plans,
            link: parts.link,
            contact: parts.contact,
            button: parts.button,
            retained: parts.retained,
            watchdog: parts.watchdog,
            device_id: parts.device_id,
            reset_cause: parts.reset_cause,
        };
        place.write(App::start(hardware, Rooms { memory, server, waiting }))
    }

    /// The way to panic of the negative control; nothing in what is shipped.
    #[inline(always)]
    fn control() {
        #[cfg(feature = "_unwrap")]
        core::hint::black_box(core::hint::black_box(Some(1_u8)).unwrap());
    }

    #[cortex_m_rt::entry]
    fn main() -> ! {
        static mut SPACE: Space = Space::new();
        static mut APP: MaybeUninit<App<Nrf52840>> = MaybeUninit::uninit();
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
    eprintln!("this program is for a board with the nRF52840; its README.md says how to load it");
}

//! The desk on a real terminal: a pseudo-terminal, and a parser that keeps its screen.

use portable_pty::{Child, CommandBuilder, MasterPty, PtySize, native_pty_system};
use std::io::{Read, Write};
use std::num::NonZero;
use std::process::Command;
use std::sync::{Arc, Condvar, Mutex};
use std::time::{Duration, Instant};

/// Nothing here takes this long on a machine that works; a test that waits for it has failed.
const PATIENCE: Duration = Duration::from_secs(20);

/// What the terminal has received.
struct Received {
    parser: vt100::Parser,
    bytes: Vec<u8>,
    closed: bool,
    hang_up: bool,
}

struct Session {
    master: Option<Box<dyn MasterPty + Send>>,
    writer: Box<dyn Write + Send>,
    child: Box<dyn Child + Send + Sync>,
    received: Arc<(Mutex<Received>, Condvar)>,
    modes_before: String,
}

const SIZE: (u16, u16) = (80, 24);
const UTF8: &[(&str, &str)] = &[("TERM", "xterm-256color"), ("LANG", "C.UTF-8")];

fn some(n: u16) -> NonZero<u16> {
    NonZero::new(n).expect("screens of the tests are not empty")
}

fn size((cols, rows): (u16, u16)) -> PtySize {
    PtySize {
        rows,
        cols,
        pixel_width: 0,
        pixel_height: 0,
    }
}

impl Session {
    fn start(variables: &[(&str, &str)], screen: (u16, u16)) -> Self {
        let pair = native_pty_system()
            .openpty(size(screen))
            .expect("a pseudo-terminal");
        let mut command = CommandBuilder::new(env!("CARGO_BIN_EXE_dotwright"));
        command.env_clear();
        for (name, value) in variables {
            command.env(name, value);
        }
        command.cwd(std::env::temp_dir());
        let modes_before = format!("{:?}", pair.master.get_termios());
        let mut reader = pair.master.try_clone_reader().expect("a reader");
        let child = pair
            .slave
            .spawn_command(command)
            .expect("the program starts");
        drop(pair.slave);
        let received = Arc::new((
            Mutex::new(Received {
                parser: vt100::Parser::new(some(screen.1), some(screen.0), 0),
                bytes: Vec::new(),
                closed: false,
                hang_up: false,
            }),
            Condvar::new(),
        ));
        let sink = received.clone();
        std::thread::spawn(move || {
            let mut chunk = [0; 4096];
            loop {
                let n = reader.read(&mut chunk).unwrap_or(0);
                let mut r = sink.0.lock().expect("no reader has panicked");
                r.parser.process(&chunk[..n]);
                r.bytes.extend_from_slice(&chunk[..n]);
                let done = n == 0 || r.hang_up;
                if done {
                    drop(std::mem::replace(&mut reader, Box::new(std::io::empty())));
                }
                r.closed = done;
                sink.1.notify_all();
                if done {
                    return;
                }
            }
        });
        Self {
            writer: pair.master.take_writer().expect("a writer"),
            master: Some(pair.master),
            child,
            received,
            modes_before,
        }
    }

    fn wait(&self, what: &str, test: impl Fn(&Received) -> bool) {
        let deadline = Instant::now() + PATIENCE;
        let mut r = self.received.0.lock().expect("no reader has panicked");
        while !test(&r) {
            let left = deadline.saturating_duration_since(Instant::now());
            let screen = r.parser.screen().contents();
            assert!(
                !left.is_zero(),
                "waited in vain for {what}; the screen:\n{screen}"
            );
            r = self
                .received
                .1
                .wait_timeout(r, left)
                .expect("no reader has panicked")
                .0;
        }
    }

    fn sees(&self, text: &str) {
        self.wait(text, |r| r.parser.screen().contents().contains(text));
    }

    fn sees_no_more(&self, text: &str) {
        self.wait(text, |r| !r.parser.screen().contents().contains(text));
    }

    fn send(&mut self, bytes: &str) {
        self.writer
            .write_all(bytes.as_bytes())
            .expect("the terminal takes keys");
    }

    fn resize(&mut self, screen: (u16, u16)) {
        let mut r = self.received.0.lock().expect("no reader has panicked");
        r.parser
            .screen_mut()
            .set_size(some(screen.1), some(screen.0));
        drop(r);
        self.master()
            .resize(size(screen))
            .expect("the terminal can be resized");
    }

    fn master(&self) -> &dyn MasterPty {
        &**self
            .master
            .as_ref()
            .expect("only the last step of a test hangs up")
    }

    fn hang_up(&mut self) {
        self.writer = Box::new(std::io::sink());
        self.master = None;
    }

    fn signal(&self, name: &str) {
        let id = self
            .child
            .process_id()
            .expect("the program runs")
            .to_string();
        let sent = Command::new("kill").args(["-s", name, &id]).status();
        assert!(sent.expect("kill exists").success());
    }

    /// Waits for the end, and gives the exit code.
    fn ends(&mut self) -> u32 {
        let deadline = Instant::now() + PATIENCE;
        loop {
            if let Some(status) = self.child.try_wait().expect("the child can be asked") {
                return status.exit_code();
            }
            assert!(Instant::now() < deadline, "the program does not end");
            std::thread::sleep(Duration::from_millis(5));
        }
    }

    /// Waits for the end; the terminal must be as it was.
    fn ends_restored(&mut self) -> u32 {
        let code = self.ends();
        // the terminal's own modes outlive the program as long as this side is open
        assert_eq!(
            format!("{:?}", self.master().get_termios()),
            self.modes_before
        );
        self.wait("the end of output", |r| r.closed);
        let r = self.received.0.lock().expect("no reader has panicked");
        let screen = r.parser.screen();
        assert!(!screen.alternate_screen(), "the alternate screen was left");
        assert!(!screen.hide_cursor(), "the cursor is back");
        code
    }
}

/// A failed test leaves no program behind.
impl Drop for Session {
    fn drop(&mut self) {
        let _ = self.child.kill();
    }
}

#[test]
fn start_browse_help_quit() {
    let mut s = Session::start(UTF8, SIZE);
    s.sees("level 1 of");
    s.send("\x1b[C\x1b[A");
    s.sees("level 3 of");
    s.send("?");
    s.sees("Keys on the plate");
    s.send("\x1b");
    s.sees("level 3 of");
    s.send("ds");
    s.sees_no_more("spacing");
    s.send("\r");
    s.sees("spacing");
    s.send("q");
    assert_eq!(s.ends_restored(), 0);
}

#[test]
fn the_outline_is_there_before_the_levels_and_the_screen_may_change() {
    let mut slow = UTF8.to_vec();
    slow.push(("DOTWRIGHT_REHEARSE", "400"));
    let mut s = Session::start(&slow, SIZE);
    s.sees("solving");
    s.sees("quit");
    s.wait("the outline", |r| {
        let dots = |c: char| ('\u{2801}'..='\u{28ff}').contains(&c);
        r.parser
            .screen()
            .contents()
            .chars()
            .filter(|c| dots(*c))
            .count()
            > 20
    });
    s.sees("% ");
    s.resize((110, 34));
    s.wait("the keys on the new last line", |r| {
        let last = r.parser.screen().rows(0, 110).nth(33);
        last.is_some_and(|l| l.contains("quit"))
    });
    s.send("?");
    s.sees("Keys on the plate");
    s.send("\x1b");
    s.sees("missing");
    s.send("q");
    assert_eq!(s.ends_restored(), 0);
}

#[test]
fn leaving_in_the_middle_of_a_solve() {
    let mut slow = UTF8.to_vec();
    slow.push(("DOTWRIGHT_REHEARSE", "100000"));
    let mut s = Session::start(&slow, SIZE);
    s.sees("solving");
    s.send("q");
    assert_eq!(s.ends_restored(), 0);
}

#[test]
fn a_panic_gives_the_terminal_back() {
    let mut staged = UTF8.to_vec();
    staged.push(("DOTWRIGHT_REHEARSE", "view"));
    let mut s = Session::start(&staged, SIZE);
    assert_ne!(s.ends_restored(), 0);
    s.sees("staged in the view");
}

#[test]
fn a_panic_of_the_solver_is_told_on_the_desk() {
    let mut staged = UTF8.to_vec();
    staged.push(("DOTWRIGHT_REHEARSE", "worker"));
    let mut s = Session::start(&staged, SIZE);
    s.sees("staged in the worker");
    s.send("d?");
    s.sees("Keys on the plate");
    s.send("\x03");
    assert_eq!(s.ends_restored(), 0);
}

#[test]
fn signals_give_the_terminal_back() {
    for name in ["HUP", "TERM", "INT"] {
        let mut s = Session::start(UTF8, SIZE);
        s.sees("level 1 of");
        s.signal(name);
        s.ends_restored();
    }
}

#[test]
fn a_terminal_that_goes_away_ends_the_program() {
    let mut s = Session::start(UTF8, SIZE);
    s.sees("level 1 of");
    // the reader holds the terminal open until it has something to read
    s.received.0.lock().expect("no reader has panicked").hang_up = true;
    s.send("d");
    s.wait("the reader to let go", |r| r.closed);
    s.hang_up();
    s.ends();
}

#[test]
fn a_small_window_gets_a_message_until_it_grows() {
    let mut s = Session::start(UTF8, (40, 10));
    s.sees("too small");
    s.resize(SIZE);
    s.sees("level 1 of");
    s.resize((50, 24));
    s.sees("too small");
    s.send("q");
    assert_eq!(s.ends_restored(), 0);
}

#[test]
fn no_colour_means_none() {
    let mut mono = UTF8.to_vec();
    mono.extend([("NO_COLOR", "1"), ("COLORTERM", "truecolor")]);
    let mut s = Session::start(&mono, SIZE);
    s.sees("level 1 of");
    s.send("dns");
    s.sees_no_more("spacing");
    s.wait("a screen without colours", |r| {
        let screen = r.parser.screen();
        let plain = vt100::Color::Default;
        (0..SIZE.1).all(|i| {
            (0..SIZE.0).all(|j| {
                screen
                    .cell(i, j)
                    .is_none_or(|c| c.fgcolor() == plain && c.bgcolor() == plain)
            })
        })
    });
    s.send("q");
    s.ends_restored();
    let r = s.received.0.lock().expect("no reader has panicked");
    let text = String::from_utf8_lossy(&r.bytes).into_owned();
    for colour in ["[38;", "[48;", ";38;", ";48;", "[31m", "[33m"] {
        assert!(!text.contains(colour), "{colour}");
    }
}

#[test]
fn a_seven_bit_locale_gets_seven_bits() {
    let mut s = Session::start(&[("TERM", "xterm"), ("LANG", "C")], SIZE);
    s.sees("level 1 of");
    s.send("dn?");
    s.sees("Keys on the plate");
    s.send("\x1bs5\r");
    s.sees(">5  ");
    s.send("q");
    s.ends_restored();
    let r = s.received.0.lock().expect("no reader has panicked");
    assert!(r.bytes.is_ascii());
}

#[test]
fn a_dumb_terminal_gets_no_control_sequences() {
    let mut s = Session::start(&[("TERM", "dumb"), ("LANG", "C.UTF-8")], SIZE);
    s.ends_restored();
    let r = s.received.0.lock().expect("no reader has panicked");
    assert!(!r.bytes.contains(&0x1b));
    assert!(!r.bytes.is_empty());
}

//! A panic in one point is the failure of that point.

use std::cell::{Cell, RefCell};
use std::panic::{self, AssertUnwindSafe};
use std::sync::Once;

thread_local! {
    static CATCHING: Cell<bool> = const { Cell::new(false) };
    static SAID: RefCell<String> = const { RefCell::new(String::new()) };
}

/// Does the work; where it panics, what the panic says and where. Nothing is printed.
pub fn caught<T>(work: impl FnOnce() -> T) -> Result<T, String> {
    static LISTEN: Once = Once::new();
    LISTEN.call_once(|| {
        let otherwise = panic::take_hook();
        panic::set_hook(Box::new(move |panic| {
            if CATCHING.get() {
                let said = panic.to_string().split_whitespace().collect::<Vec<_>>().join(" ");
                SAID.with_borrow_mut(|text| *text = said);
            } else {
                otherwise(panic);
            }
        }));
    });
    CATCHING.set(true);
    // What the work had is not looked at again.
    let done = panic::catch_unwind(AssertUnwindSafe(work));
    CATCHING.set(false);
    done.map_err(|_| SAID.take())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_panic_is_caught_with_its_words_and_place() {
        let said = caught(|| -> u8 { panic!("3 {} of 2", "states") }).expect_err("a panic");
        assert!(said.contains("3 states of 2") && said.contains("caught.rs"), "{said}");
        assert_eq!(caught(|| 7), Ok(7));
    }
}

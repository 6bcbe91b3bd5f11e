//! One declaration for each action, from which menus, buttons, tooltips and the list of keys are made.

/// A key with its modifiers. `key` is named as on the keyboard ("Z", "F1", "Page down", "0", "+").
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct Shortcut {
    /// Ctrl (Cmd on a Mac).
    pub control: bool,
    /// Shift.
    pub shift: bool,
    /// Alt.
    pub alt: bool,
    /// The key.
    pub key: &'static str,
}

impl Shortcut {
    /// As shown: "Ctrl+Shift+Z".
    pub fn text(&self) -> String {
        let mut text = String::new();
        for (held, name) in [
            (self.control, "Ctrl+"),
            (self.shift, "Shift+"),
            (self.alt, "Alt+"),
        ] {
            if held {
                text.push_str(name);
            }
        }
        text.push_str(self.key);
        text
    }
}

const fn plain(key: &'static str) -> Option<Shortcut> {
    Some(Shortcut {
        control: false,
        shift: false,
        alt: false,
        key,
    })
}

const fn ctrl(key: &'static str) -> Option<Shortcut> {
    Some(Shortcut {
        control: true,
        shift: false,
        alt: false,
        key,
    })
}

const fn ctrl_shift(key: &'static str) -> Option<Shortcut> {
    Some(Shortcut {
        control: true,
        shift: true,
        alt: false,
        key,
    })
}

/// Which menu an action is found in.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Menu {
    /// Files and the program.
    File,
    /// Changes of the current sounding.
    Edit,
    /// Reach, interval and verdict of the current sounding.
    Sounding,
    /// What the window shows.
    View,
    /// Help.
    Help,
}

/// What people are told about an action.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Declaration {
    /// The action.
    pub action: Action,
    /// Where it is found.
    pub menu: Menu,
    /// Label of menu entry and button.
    pub label: &'static str,
    /// Tooltip.
    pub tooltip: &'static str,
    /// Key.
    pub shortcut: Option<Shortcut>,
    /// The window does it (dialog, clipboard, zoom); [`crate::Session::command_of`] gives no command.
    pub window: bool,
}

macro_rules! actions {
    ($($menu:ident $owner:ident $action:ident $label:literal $tooltip:literal $shortcut:expr;)*) => {
        /// Something a person can do that needs no further argument.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
        pub enum Action {
            $(#[doc = $tooltip] $action,)*
        }

        /// All actions, in menu order.
        pub static ACTIONS: &[Declaration] = &[
            $(Declaration {
                action: Action::$action,
                menu: Menu::$menu,
                label: $label,
                tooltip: $tooltip,
                shortcut: $shortcut,
                window: owner!($owner),
            },)*
        ];

        impl Action {
            /// Its declaration.
            pub fn declaration(self) -> &'static Declaration {
                // The enum and the list come from one macro, so the index is always in the list.
                &ACTIONS[self as usize]
            }
        }
    };
}

macro_rules! owner {
    (window) => {
        true
    };
    (session) => {
        false
    };
}

actions! {
    File window OpenFiles "Open files…" "Open one or more sounding files." ctrl("O");
    File window OpenFolder "Open folder…" "Open every sounding file in a folder." ctrl_shift("O");
    File window OpenDemo "Open demo tray" "Open the built-in invented soundings." None;
    File session CloseItem "Close sounding" "Take this sounding out of the tray. Its draft and its decisions stay." ctrl("W");
    File window Quit "Quit" "Close the desk. Drafts are kept." ctrl("Q");
    Edit session Undo "Undo" "Take the last change back." ctrl("Z");
    Edit session Redo "Redo" "Make the undone change again." ctrl_shift("Z");
    Edit session ResetDewpoint "Received dew point" "Put the surface dew point back to the received value." None;
    Edit session ResetTemperature "Received temperature" "Put the surface temperature back to the received value." None;
    Edit session ResetMotion "Estimated motion" "Put the storm motion back to the estimate." None;
    Edit session ClearAmendments "Remove all amendments" "Go back to the sounding as received. Can be undone." None;
    Edit window CopyLine "Copy line" "Copy station, time, verdict, CAPE range, reason and caution as one line." ctrl_shift("C");
    Edit window CopyNumbers "Copy numbers" "Copy the numbers shown as text: those at a glance and the open groups." None;
    Edit window CopyWinds "Copy winds" "Copy the wind numbers as text." None;
    Sounding session SelectNext "Next sounding" "Open the next sounding of the tray." plain("Page down");
    Sounding session SelectPrevious "Previous sounding" "Open the sounding above in the tray." plain("Page up");
    Sounding session ReachDefault "Reach: default" "Mixed by day with a mixed layer, otherwise level." None;
    Sounding session ReachLevel "Reach: level" "A surface edit changes the surface parcel and the lowest 10 hPa only." None;
    Sounding session ReachMixed "Reach: mixed" "A surface edit is carried unchanged to the top of the mixed layer." None;
    Sounding session ReachTapered "Reach: tapered" "A surface edit fades out towards the top of the mixed layer." None;
    Sounding session PinLow "Pin drier end here" "Use the working dew point as the drier end of the interval." None;
    Sounding session PinHigh "Pin moister end here" "Use the working dew point as the moister end of the interval." None;
    Sounding session UnpinLow "Unpin drier end" "Let the drier end of the interval follow the candidates again." None;
    Sounding session UnpinHigh "Unpin moister end" "Let the moister end of the interval follow the candidates again." None;
    Sounding session Accept "Accepted" "The sounding is believed as received." None;
    Sounding session AcceptAsAmended "Accepted as amended" "The sounding is believed with the amendments in force." None;
    Sounding session ContaminatedAbove "Contaminated above" "The sounding is not to be believed above a pressure." None;
    Sounding session Contaminated "Contaminated" "The sounding is not to be believed at all." None;
    Sounding session NoVerdict "No verdict" "Take the drafted verdict back." None;
    Sounding session Decide "Decide" "Keep this verdict in the ledger, with reasons and initials." ctrl("Enter");
    View window ShowChart "Chart" "Show the chart and the response." ctrl("1");
    View window ShowWinds "Winds" "Show wind against height, the hodograph and the storm motion." ctrl("2");
    View window WindsToTwelve "Winds up to 12 km" "Draw the winds from the ground to 12 km." None;
    View window WindsToSix "Winds up to 6 km" "Draw the winds of the lowest 6 km, larger." None;
    View window WindsToThree "Winds up to 3 km" "Draw the winds of the lowest 3 km, larger still." None;
    View window ZoomIn "Larger" "Make everything larger." ctrl("+");
    View window ZoomOut "Smaller" "Make everything smaller." ctrl("-");
    View window ZoomReset "Normal size" "Show everything at its normal size." ctrl("0");
    View window ToggleTheme "Dark theme" "Switch between the light and the dark theme." None;
    View window ToggleTiming "Computing time" "Show how long the last change took to compute." plain("F12");
    Help window ShowKeys "Keys" "List what every key does." plain("F1");
    Help window ShowCaution "About and caution" "What these numbers are for, and what they are not." None;
}

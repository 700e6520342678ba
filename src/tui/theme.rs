//! How things look: styles by meaning, and the last step that keeps a drawing within what the terminal can show.
//!
//! The terminal's own foreground and background are never painted over; colours are accents, and each stands
//! beside a word, a mark or a pattern that says the same.

use std::borrow::Cow;

use ratatui::buffer::Buffer;
use ratatui::style::{Color, Modifier, Style};

use super::caps::{Caps, Colours};

/// The parts that a cost is split into.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Part {
    /// Price, installation and adders.
    Price,
    /// No-load loss.
    Iron,
    /// Load loss.
    Copper,
    /// What is neither: fans and pumps, upkeep, failures.
    Other,
}

/// Number of looks of the regions of a map: each a fill and, where there are colours, a colour.
pub(super) const REGION_LOOKS: usize = 6;

/// How things look on this terminal.
#[derive(Clone, Copy, Debug)]
pub struct Theme {
    caps: Caps,
}

impl Theme {
    /// The theme of a terminal.
    pub fn new(caps: Caps) -> Self {
        Self { caps }
    }

    /// What the terminal can show.
    pub fn caps(self) -> Caps {
        self.caps
    }

    /// Whether there are colours.
    pub fn coloured(self) -> bool {
        self.caps.colours != Colours::None
    }

    fn fg(self, sixteen: Color, many: u8) -> Style {
        match self.caps.colours {
            Colours::None => Style::new(),
            Colours::Sixteen => Style::new().fg(sixteen),
            Colours::Many => Style::new().fg(Color::Indexed(many)),
        }
    }

    /// Plain text.
    pub fn plain(self) -> Style {
        Style::new()
    }
    /// A heading.
    pub fn heading(self) -> Style {
        Style::new().add_modifier(Modifier::BOLD)
    }
    /// What may be passed over at first.
    pub fn muted(self) -> Style {
        Style::new().add_modifier(Modifier::DIM)
    }
    /// A key to press.
    pub fn key(self) -> Style {
        self.fg(Color::Blue, 32).add_modifier(Modifier::BOLD)
    }
    /// The line the cursor is on.
    pub fn selected(self) -> Style {
        Style::new().add_modifier(Modifier::REVERSED)
    }
    /// What is doubtful or went wrong.
    pub fn warning(self) -> Style {
        self.fg(Color::Red, 166).add_modifier(Modifier::BOLD)
    }
    /// What was changed and is not stored.
    pub fn changed(self) -> Style {
        self.fg(Color::Magenta, 133).add_modifier(Modifier::BOLD)
    }
    /// Part of a cost.
    pub fn part(self, part: Part) -> Style {
        match part {
            Part::Price => self.fg(Color::DarkGray, 245),
            Part::Iron => self.fg(Color::Blue, 32),
            Part::Copper => self.fg(Color::Yellow, 172),
            Part::Other => self.fg(Color::Magenta, 133),
        }
    }

    /// The fill of a part: solid where its colour tells it apart, a pattern where there is none.
    pub fn fill(self, part: Part) -> char {
        match (part, self.coloured(), self.caps.ascii) {
            (_, true, false) | (Part::Iron, false, false) => '█',
            (Part::Price, false, false) => '░',
            (Part::Copper, false, false) => '▒',
            (Part::Other, false, false) => '▚',
            (Part::Price, _, true) => '.',
            (Part::Iron, _, true) => '#',
            (Part::Copper, _, true) => '=',
            (Part::Other, _, true) => '+',
        }
    }

    /// Text in words of ASCII where only that can be shown: what one character cannot stand for.
    pub fn spell(self, text: &str) -> Cow<'_, str> {
        if !self.caps.ascii || text.is_ascii() {
            return Cow::Borrowed(text);
        }
        let mut out = text.replace(" … ", " to ");
        for (from, to) in SPELT {
            out = out.replace(from, to);
        }
        Cow::Owned(out)
    }

    /// The mark at the end of a bar that is longer than its place.
    pub fn goes_on(self) -> char {
        if self.caps.ascii { '>' } else { '»' }
    }

    /// The mark of a point that was drawn.
    pub fn cloud(self) -> char {
        if self.caps.ascii { 'o' } else { '•' }
    }

    /// The mark before the selected line.
    pub fn mark(self) -> char {
        if self.caps.ascii { '>' } else { '▶' }
    }

    /// The fill of a region of a map by its look.
    pub fn region_fill(self, look: usize) -> char {
        const SHADES: [char; REGION_LOOKS] = ['░', '▒', '·', '▓', '-', '+'];
        const ASCII: [char; REGION_LOOKS] = ['.', ':', '-', '+', '=', ','];
        let fills = if self.caps.ascii { ASCII } else { SHADES };
        fills[look % REGION_LOOKS]
    }

    /// Colour of a region of a map by its look.
    pub fn region(self, look: usize) -> Style {
        const SIXTEEN: [Color; REGION_LOOKS] = [
            Color::Blue,
            Color::Yellow,
            Color::Cyan,
            Color::Magenta,
            Color::DarkGray,
            Color::Green,
        ];
        const MANY: [u8; REGION_LOOKS] = [32, 172, 37, 133, 245, 65];
        self.fg(SIXTEEN[look % REGION_LOOKS], MANY[look % REGION_LOOKS])
    }
}

/// Characters of units and formulas in words.
const SPELT: [(&str, &str); 23] = [
    ("°", "deg"),
    ("α", "alpha"),
    ("β", "beta"),
    ("γ", "gamma"),
    ("η", "eta"),
    ("θ", "theta"),
    ("κ", "kappa"),
    ("λ", "lambda"),
    ("Σ", "sum "),
    ("Π", "product "),
    ("φ", "phi"),
    ("√", "sqrt"),
    ("²", "^2"),
    ("³", "^3"),
    ("·", "*"),
    ("Δ", "delta "),
    ("Ω", "ohm"),
    ("′", "'"),
    ("≤", "<="),
    ("≥", ">="),
    ("₀", "0"),
    ("₁", "1"),
    ("₂", "2"),
];

/// What stands for a character where only ASCII can be shown.
fn ascii(c: char) -> char {
    match c {
        ' '..='~' => c,
        '─' | '━' | '╌' | '┄' | '–' | '—' | '−' => '-',
        '│' | '┃' | '┆' => '|',
        '┌' | '┐' | '└' | '┘' | '├' | '┤' | '┬' | '┴' | '┼' => '+',
        '…' => '~',
        '·' | '•' => '.',
        '×' => 'x',
        '←' | '‹' | '≤' => '<',
        '→' | '›' | '▶' | '≥' => '>',
        '↑' => '^',
        '↓' => 'v',
        '²' => '2',
        '◆' => '@',
        'Ω' => 'O',
        'η' => 'n',
        '\u{2801}'..='\u{28FF}' => '*',
        '°' | '\u{2800}' | '\u{a0}' | '\u{2009}' | '\u{202f}' => ' ',
        _ => '?',
    }
}

/// Keeps a finished drawing within ASCII where the terminal asks for it.
pub fn settle(caps: Caps, buffer: &mut Buffer) {
    if !caps.ascii {
        return;
    }
    for cell in &mut buffer.content {
        if !cell.symbol().is_ascii() {
            let shown = cell.symbol().chars().next().map_or(' ', ascii);
            cell.set_char(shown);
        }
    }
}

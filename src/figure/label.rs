//! Text of a figure: upright and italic pieces, raised or lowered.

/// Where a piece stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Raise {
    #[default]
    Line,
    Up,
    Down,
}

/// A run of letters in one shape.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Piece {
    pub text: String,
    pub italic: bool,
    pub raise: Raise,
}

/// A line of text.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Label(pub Vec<Piece>);

impl Label {
    pub fn plain(text: impl Into<String>) -> Label {
        Label::default().then(text)
    }

    fn with(mut self, text: impl Into<String>, italic: bool, raise: Raise) -> Label {
        self.0.push(Piece { text: text.into(), italic, raise });
        self
    }

    #[must_use]
    pub fn then(self, text: impl Into<String>) -> Label {
        self.with(text, false, Raise::Line)
    }

    #[must_use]
    pub fn italic(self, text: impl Into<String>) -> Label {
        self.with(text, true, Raise::Line)
    }

    #[must_use]
    pub fn up(self, text: impl Into<String>) -> Label {
        self.with(text, false, Raise::Up)
    }

    #[must_use]
    pub fn down(self, text: impl Into<String>) -> Label {
        self.with(text, false, Raise::Down)
    }

    #[must_use]
    pub fn join(mut self, other: Label) -> Label {
        self.0.extend(other.0);
        self
    }

    /// The letters without their shapes.
    pub fn text(&self) -> String {
        self.0.iter().map(|p| p.text.as_str()).collect()
    }

    /// A number as figures show it: true minus sign, powers of ten for what is very large or small.
    pub fn number(value: f64, decimals: usize) -> Label {
        Label::plain(format!("{value:.decimals$}").replace('-', "\u{2212}"))
    }

    /// 10 to a power.
    pub fn power_of_ten(power: i32) -> Label {
        Label::plain("10").up(power.to_string().replace('-', "\u{2212}"))
    }
}

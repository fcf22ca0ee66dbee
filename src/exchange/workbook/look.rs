//! How cells look: by the part they play and by the digits they show. What is stored is always the whole figure.

use rust_xlsxwriter::{Color, Format, FormatAlign, FormatBorder, FormatUnderline};

/// The part a cell plays.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Debug)]
pub enum Part {
    /// Title of a sheet.
    Title,
    /// Head of a column.
    Head,
    /// Words.
    Text,
    /// Words that may run over several lines.
    Long,
    /// The row that opens a stage.
    Band,
    /// A warning.
    Loud,
    /// A figure a person entered: change it and the totals follow.
    Entered,
    /// A published figure or a constant of a rule.
    Published,
    /// A figure that a model of the program worked out: it does not follow.
    Value,
    /// A formula.
    Formula,
    /// A figure that sums up.
    Sum,
    /// A figure that matters.
    Strong,
    /// A link inside the workbook.
    Link,
}

/// The digits a figure shows.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Debug)]
pub enum Digits {
    /// No figure: words.
    Words,
    /// As they come.
    All,
    /// g CO2e/MJ and the like.
    Four,
    /// Shares.
    Six,
    /// Recipes per MJ: very small or very large.
    Power,
}

/// The format of a look.
pub fn format(part: Part, digits: Digits) -> Format {
    let base = Format::new()
        .set_font_name("Arial")
        .set_font_size(9)
        .set_align(FormatAlign::Top)
        .set_num_format(match digits {
            Digits::Words | Digits::All => "General",
            Digits::Four => "#,##0.0000;-#,##0.0000;0",
            Digits::Six => "0.000000",
            Digits::Power => "0.000000E+00",
        });
    // A little room between a figure and the unit in the next cell.
    let base = match digits {
        Digits::Words => base,
        _ => base.set_align(FormatAlign::Right).set_indent(1),
    };
    match part {
        Part::Title => base.set_bold().set_font_size(14),
        Part::Head => base
            .set_bold()
            .set_text_wrap()
            .set_background_color(Color::RGB(0x00E8_E4DA))
            .set_border_bottom(FormatBorder::Thin),
        Part::Text => base,
        Part::Long => base.set_text_wrap(),
        Part::Band => base
            .set_bold()
            .set_background_color(Color::RGB(0x00F3_F0E8))
            .set_border_top(FormatBorder::Thin),
        Part::Loud => base.set_bold().set_font_color(Color::RGB(0x009C_2A10)),
        Part::Entered => base
            .set_font_color(Color::RGB(0x0012_3C8C))
            .set_background_color(Color::RGB(0x00EA_F0FB)),
        Part::Published => base.set_font_color(Color::RGB(0x001E_5B3A)),
        Part::Value => base.set_italic().set_font_color(Color::RGB(0x0055_5555)),
        Part::Formula => base,
        Part::Sum => base.set_bold().set_border_top(FormatBorder::Thin),
        Part::Strong => base.set_bold(),
        Part::Link => base
            .set_font_color(Color::RGB(0x0012_3C8C))
            .set_underline(FormatUnderline::Single),
    }
}

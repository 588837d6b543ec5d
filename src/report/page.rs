//! A page of headings, paragraphs, tables and lists, drawn for a terminal or as Markdown.
//!
//! A report is written once, as blocks; what differs between the two is here and nowhere else.

use comfy_table::{Cell, CellAlignment, ColumnConstraint, ContentArrangement, Table as Grid, Width, presets};

/// One part of a page.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Block {
    /// The title of the page.
    Title(String),
    /// The heading of a part.
    Heading(String),
    /// A paragraph.
    Text(String),
    /// Short texts one below another.
    List(Vec<String>),
    /// Short texts, each with how deep it stands under the one before it that is less deep.
    Tree(Vec<(usize, String)>),
    /// Lines whose columns stand under one another: a calculation.
    Lines(Vec<(String, String)>),
    /// A table.
    Table(Table),
}

/// A table: its head, its rows, and which columns are numbers.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Table {
    pub(super) head: Vec<String>,
    pub(super) rows: Vec<Vec<String>>,
    pub(super) numbers: Vec<bool>,
}

impl Table {
    /// A table of columns: head, whether it is of numbers, and the cells.
    pub(super) fn of(columns: Vec<(String, bool, Vec<String>)>) -> Self {
        let mut table = Self::default();
        let height = columns.first().map_or(0, |(_, _, cells)| cells.len());
        table.rows = vec![Vec::with_capacity(columns.len()); height];
        for (head, numbers, cells) in columns {
            table.head.push(head);
            table.numbers.push(numbers);
            for (row, cell) in table.rows.iter_mut().zip(cells) {
                row.push(cell);
            }
        }
        table
    }

    /// Characters of the widest cell of a column, its head included.
    fn content(&self, index: usize) -> usize {
        self.rows.iter().map(|row| widest(&row[index])).max().unwrap_or(0).max(widest(&self.head[index]))
    }

    /// The columns of text that give way on a terminal so wide, the widest first, and the least that each may become: as many
    /// as it takes.
    fn yielding(&self, width: usize) -> Vec<(usize, u16)> {
        let contents: Vec<usize> = (0..self.head.len()).map(|index| self.content(index)).collect();
        let mut texts: Vec<usize> = (0..self.head.len()).filter(|&index| !self.numbers[index]).collect();
        texts.sort_by_key(|&index| std::cmp::Reverse(contents[index]));
        let all: usize = contents.iter().map(|content| content + PADDING + 1).sum::<usize>() + 1;
        let mut yielding = Vec::new();
        let mut left = all;
        for (place, index) in texts.into_iter().enumerate() {
            if place > 0 && left <= width {
                break;
            }
            let content = contents[index] + PADDING;
            let least = content.min(usize::from(if place == 0 { TEXT_COLUMN } else { NARROW_COLUMN }));
            left -= content - least;
            yielding.push((index, u16::try_from(least).unwrap_or(TEXT_COLUMN)));
        }
        yielding
    }

    fn escaped(&self) -> Self {
        let cells = |row: &Vec<String>| row.iter().map(|cell| escaped(cell)).collect();
        Self { head: cells(&self.head), rows: self.rows.iter().map(cells).collect(), numbers: self.numbers.clone() }
    }

    fn grid(&self, preset: comfy_table::TableStyle, width: Option<usize>) -> String {
        let mut grid = Grid::new();
        grid.load_style(preset);
        // Colours and the terminal's own width are not asked for: the same input gives the same bytes.
        grid.force_no_tty();
        if let Some(width) = width {
            grid.set_content_arrangement(ContentArrangement::Dynamic)
                .set_width(u16::try_from(width).unwrap_or(u16::MAX));
        }
        grid.set_header(&self.head);
        for row in &self.rows {
            grid.add_row(row.iter().map(Cell::new));
        }
        let yielding = width.map_or(Vec::new(), |width| self.yielding(width));
        for (index, &numbers) in self.numbers.iter().enumerate() {
            let Some(column) = grid.column_mut(index) else { continue };
            if numbers {
                column.set_cell_alignment(CellAlignment::Right);
            }
            if width.is_none() {
                continue;
            }
            let least = yielding.iter().find(|(place, _)| *place == index).map(|&(_, least)| least);
            column.set_constraint(
                least.map_or(ColumnConstraint::ContentWidth, |least| {
                    ColumnConstraint::LowerBoundary(Width::Fixed(least))
                }),
            );
        }
        grid.to_string()
    }
}

/// Narrowest that the widest column of text may become, in characters.
const TEXT_COLUMN: u16 = 24;
/// Narrowest that a further column of text may become, where that one is not enough.
const NARROW_COLUMN: u16 = 10;
/// Blanks on both sides of a cell.
const PADDING: usize = 2;

/// Draws a page for a terminal so many characters wide.
pub(super) fn text(blocks: &[Block], width: usize) -> String {
    let mut out = String::new();
    for block in blocks {
        match block {
            Block::Title(title) => {
                out += &wrapped(title, "", "", width);
                out += &format!("{}\n", "=".repeat(widest(title).min(width)));
            }
            Block::Heading(heading) => out += &format!("\n{heading}\n{}\n", "-".repeat(widest(heading).min(width))),
            Block::Text(text) => out += &wrapped(text, "", "", width),
            Block::List(items) => items.iter().for_each(|item| out += &wrapped(item, "- ", "  ", width)),
            Block::Tree(items) => items.iter().for_each(|(depth, item)| {
                let indent = "  ".repeat(*depth);
                out += &wrapped(item, &format!("{indent}- "), &format!("{indent}  "), width);
            }),
            Block::Lines(lines) => {
                let left = lines.iter().map(|(label, _)| widest(label)).max().unwrap_or(0);
                for (label, line) in lines {
                    let lead = format!("{label}{}  ", " ".repeat(left - widest(label)));
                    out += &wrapped(line, &lead, &" ".repeat(left + 2), width);
                }
            }
            Block::Table(table) => {
                let grid = table.grid(presets::UTF8_FULL_CONDENSED, Some(width));
                let lines: Vec<_> = grid.lines().map(str::trim_end).collect();
                out += &format!("{}\n", lines.join("\n"));
            }
        }
    }
    out
}

/// Draws a page as Markdown; what its reader would take for a mark of Markdown is escaped.
pub(super) fn markdown(blocks: &[Block]) -> String {
    let mut out = String::new();
    for block in blocks {
        out += &match block {
            Block::Title(title) => format!("# {}\n\n", escaped(title)),
            Block::Heading(heading) => format!("## {}\n\n", escaped(heading)),
            Block::Text(text) => format!("{}\n\n", escaped(text)),
            Block::List(items) => items.iter().map(|item| format!("- {}\n", escaped(item))).collect::<String>() + "\n",
            Block::Tree(items) => {
                let line = |(depth, item): &(usize, String)| format!("{}- {}\n", "  ".repeat(*depth), escaped(item));
                items.iter().map(line).collect::<String>() + "\n"
            }
            Block::Lines(lines) => {
                let rows = lines.iter().map(|(label, line)| vec![label.clone(), line.clone()]).collect();
                let head = vec!["Step".to_string(), "Arithmetic".to_string()];
                let table = Table { head, rows, numbers: vec![false, false] };
                format!("{}\n\n", table.escaped().grid(presets::ASCII_MARKDOWN, None))
            }
            Block::Table(table) => format!("{}\n\n", table.escaped().grid(presets::ASCII_MARKDOWN, None)),
        };
    }
    out.truncate(out.trim_end().len());
    out + "\n"
}

/// A text in which no character is a mark of Markdown; back-ticked words stay as they are.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut quoted = false;
    for c in text.chars() {
        if c == '`' {
            quoted = !quoted;
        } else if "\\*_<>|".contains(c) && (!quoted || c == '|') {
            out.push('\\');
        }
        out.push(c);
    }
    out
}

fn widest(text: &str) -> usize {
    unicode_width::UnicodeWidthStr::width(text)
}

/// A text in lines no wider than `width`, the first led by `first` and the others by `rest`.
fn wrapped(text: &str, first: &str, rest: &str, width: usize) -> String {
    let mut out = String::from(first);
    let mut used = widest(first);
    let mut bare = true;
    for word in text.split_whitespace() {
        let wide = widest(word);
        if !bare && used + 1 + wide > width {
            out.push('\n');
            out += rest;
            used = widest(rest);
            bare = true;
        }
        if !bare {
            out.push(' ');
            used += 1;
        }
        out += word;
        used += wide;
        bare = false;
    }
    out.push('\n');
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_page_in_both_forms() {
        let table = Table::of(vec![
            ("rank".into(), true, vec!["1".into(), "10".into()]),
            ("layout".into(), false, vec!["two".into(), "a|b of them".into()]),
        ]);
        let page = [Block::Title("Roof".into()), Block::Text("one * two three `a_b`".into()), Block::Table(table)];
        assert_eq!(
            markdown(&page),
            "# Roof\n\none \\* two three `a_b`\n\n| rank | layout       |\n|------|--------------|\n|    1 | two          |\n|   10 | a\\|b of them |\n"
        );
        let drawn = text(&page, 12);
        assert!(drawn.starts_with("Roof\n====\none * two\nthree `a_b`\n"), "{drawn}");
    }
}

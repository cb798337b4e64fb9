//! Finite algebras as tables.

use crate::proof::Table;
use crate::session::{AlgebraText, AlgebraView};
use crate::shell::layout::{columns, fold};
use crate::shell::quantity::{count, number};
use crate::shell::screen::Look;

/// A table with more entries than this is not printed.
const LARGEST: usize = 1_600;

/// The algebra of an answer, with the values that tell the sides apart.
pub fn text(found: &AlgebraText, look: Look) -> String {
    let mut text = sizes(&found.sizes, look);
    text += &tables(&found.tables, look);
    let with: Vec<String> = found
        .with
        .iter()
        .map(|(v, value)| format!("{v} = {value}"))
        .collect();
    let [(left, s), (right, t)] = &found.sides;
    let differ = if found.unknowns.is_empty() {
        format!("{left} = {s} and {right} = {t}")
    } else {
        let unknowns = found.unknowns.join(", ");
        format!("{left} and {right} differ for all values of {unknowns}")
    };
    let line = if with.is_empty() {
        differ
    } else {
        format!("{}: {differ}", with.join(", "))
    };
    text + &fold(&line, look.width, 4)
}

/// A known algebra, for a list.
pub fn known(view: &AlgebraView, look: Look) -> String {
    let total: u32 = view.sizes.iter().map(|(_, size)| size).sum();
    let smallest = if view.smallest {
        "smallest"
    } else {
        "not known to be smallest"
    };
    let elements = count(total as usize, "element");
    let line = format!(
        "A{}: {elements}, {smallest} for {}",
        view.number, view.question
    );
    fold(&line, look.width, 0) + &sizes(&view.sizes, look) + &tables(&view.tables, look)
}

/// How many elements each named sort has.
fn sizes(sizes: &[(String, u32)], look: Look) -> String {
    if let [(name, _)] = sizes
        && name.is_empty()
    {
        return String::new();
    }
    let each: Vec<String> = sizes
        .iter()
        .map(|(sort, size)| format!("{sort} {size}"))
        .collect();
    fold(
        &format!("elements by sort: {}", each.join(", ")),
        look.width,
        4,
    )
}

fn tables(tables: &[(String, Table)], look: Look) -> String {
    let mut text = String::new();
    let constants: Vec<String> = tables
        .iter()
        .filter(|(_, table)| table.shape.is_empty())
        .map(|(name, table)| format!("{name} = {}", table.values[0]))
        .collect();
    if !constants.is_empty() {
        text += &fold(&constants.join(", "), look.width, 4);
    }
    for (name, table) in tables.iter().filter(|(_, table)| !table.shape.is_empty()) {
        text += &match table.shape[..] {
            _ if table.values.len() > LARGEST => {
                let entries = number(table.values.len() as u128);
                fold(
                    &format!("{name}: {entries} entries, in the evidence"),
                    look.width,
                    4,
                )
            }
            [columns] => grid(name, &[String::new()], columns, &table.values, look),
            [rows, columns] => {
                let rows: Vec<String> = (0..rows).map(|row| row.to_string()).collect();
                grid(name, &rows, columns, &table.values, look)
            }
            [ref before @ .., columns] => {
                grid(name, &row_names(before), columns, &table.values, look)
            }
            [] => String::new(),
        };
    }
    text
}

/// All choices of the first arguments: `0,0`, `0,1`, …
fn row_names(sizes: &[u32]) -> Vec<String> {
    sizes.iter().fold(vec![String::new()], |names, &size| {
        let longer = names.iter().flat_map(|name| {
            (0..size).map(move |value| match name.as_str() {
                "" => value.to_string(),
                _ => format!("{name},{value}"),
            })
        });
        longer.collect()
    })
}

/// One table, the last argument across; wider than the screen, it comes in parts.
fn grid(name: &str, rows: &[String], across: u32, values: &[u32], look: Look) -> String {
    let cell = values
        .iter()
        .copied()
        .chain([across.saturating_sub(1)])
        .max()
        .unwrap_or(0);
    let cell = cell.to_string().len();
    let label = rows
        .iter()
        .map(|row| columns(row))
        .max()
        .unwrap_or(0)
        .max(columns(name));
    let room = look.width.saturating_sub(4 + label + 2);
    let at_once = (room / (cell + 1)).max(1) as u32;
    let mut text = String::new();
    let mut from = 0;
    while from < across {
        let to = across.min(from + at_once);
        let line = |label_text: &str, entries: &mut dyn Iterator<Item = u32>| {
            let blanks = " ".repeat(label - columns(label_text));
            let entries: String = entries.map(|value| format!(" {value:>cell$}")).collect();
            format!("    {label_text}{blanks} |{entries}\n")
        };
        text += &line(name, &mut (from..to));
        let rule = "-".repeat((to - from) as usize * (cell + 1));
        text += &format!("    {}-+{rule}\n", "-".repeat(label));
        for (place, row) in rows.iter().enumerate() {
            let start = place * across as usize;
            let entries = &values[start + from as usize..start + to as usize];
            text += &line(row, &mut entries.iter().copied());
        }
        from = to;
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_binary_table_looks_as_in_a_textbook() {
        let table = Table {
            shape: vec![2, 2],
            values: vec![0, 1, 1, 1],
        };
        let look = Look {
            color: false,
            width: 80,
        };
        let text = tables(&[("▷".to_owned(), table)], look);
        assert_eq!(text, "    ▷ | 0 1\n    --+----\n    0 | 0 1\n    1 | 1 1\n");
    }

    #[test]
    fn a_wide_table_comes_in_parts() {
        let values: Vec<u32> = (0..36).map(|place| place % 6).collect();
        let look = Look {
            color: false,
            width: 14,
        };
        let text = grid("*", &row_names(&[6]), 6, &values, look);
        assert!(text.lines().all(|line| columns(line) <= 14), "{text}");
        assert_eq!(text.lines().count(), 2 * 8);
    }
}

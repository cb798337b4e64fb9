//! Finite algebras as tables.

use crate::proof::Table;
use crate::session::{AlgebraText, AlgebraView};
use crate::shell::layout::{columns, fold};
use crate::shell::quantity::{count, number};
use crate::shell::screen::Look;

/// A table with more entries than this is not printed.
const LARGEST: usize = 1_600;

/// The algebra of an answer, with the values that tell the sides apart. One that has been printed
/// before is only named.
pub fn text(found: &AlgebraText, number: u32, is_known: bool, look: Look) -> String {
    let mut text = if is_known {
        fold(
            &format!("A{number} is shown above, and by algebras"),
            look.width,
            4,
        )
    } else {
        sizes(&found.sizes, look) + &tables(&found.tables, &found.sorts, look)
    };
    text += &fold(&deciding(found), look.width, 4);
    text
}

/// The values that tell the sides apart.
pub fn deciding(found: &AlgebraText) -> String {
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
    if with.is_empty() {
        differ
    } else {
        format!("{}: {differ}", with.join(", "))
    }
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
    fold(&line, look.width, 0)
        + &sizes(&view.sizes, look)
        + &tables(&view.tables, &view.sorts, look)
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

/// The tables of the symbols; where there are several sorts, each with the sorts of its arguments
/// and of its values.
fn tables(tables: &[(String, Table)], sorts: &[Vec<String>], look: Look) -> String {
    let mut text = String::new();
    let constants: Vec<String> = tables
        .iter()
        .filter(|(_, table)| table.shape.is_empty())
        .map(|(name, table)| format!("{name} = {}", table.values[0]))
        .collect();
    if !constants.is_empty() {
        text += &fold(&constants.join(", "), look.width, 4);
    }
    for (place, (name, table)) in tables.iter().enumerate() {
        let Some((&across, before)) = table.shape.split_last() else {
            continue;
        };
        if let Some((result, arguments)) = sorts.get(place).and_then(|sorts| sorts.split_last()) {
            text += &fold(&caption(name, arguments, result), look.width, 4);
        }
        text += &if table.values.len() > LARGEST {
            let entries = number(table.values.len() as u128);
            let line = format!("{name}: {entries} entries, in the evidence");
            fold(&line, look.width, 4)
        } else {
            grid(name, &row_names(before), across, &table.values, look)
        };
    }
    text
}

/// What stands beside and above a table: `get: Layer down, Key across, gives Value`.
fn caption(name: &str, arguments: &[String], result: &str) -> String {
    match arguments.split_last() {
        Some((across, [])) => format!("{name}: {across} across, gives {result}"),
        Some((across, down)) => {
            let down = down.join(", ");
            format!("{name}: {down} down, {across} across, gives {result}")
        }
        None => String::new(),
    }
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
        let text = tables(&[("▷".to_owned(), table)], &[], look);
        assert_eq!(text, "    ▷ | 0 1\n    --+----\n    0 | 0 1\n    1 | 1 1\n");
    }

    #[test]
    fn a_table_of_several_sorts_says_which_stand_where() {
        let table = Table {
            shape: vec![2, 1],
            values: vec![0, 1],
        };
        let sorts = vec![["Layer", "Key", "Value"].map(str::to_owned).to_vec()];
        let look = Look {
            color: false,
            width: 80,
        };
        let text = tables(&[("get".to_owned(), table)], &sorts, look);
        assert_eq!(
            text,
            "    get: Layer down, Key across, gives Value\n    get | 0\n    ----+--\n    \
             0   | 0\n    1   | 1\n"
        );
        let one = caption("size", &["Layer".to_owned()], "Value");
        assert_eq!(one, "size: Layer across, gives Value");
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

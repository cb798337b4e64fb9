//! From the table to terms: the sorts, the variables and the two sides of an equation.

use super::Stated;
use crate::language::declare::Statement;
use crate::language::diagnostic::Fault;
use crate::language::term::type_of;
use crate::term::{Sort, Symbol, TermId, Variable};
use crate::theory::Signature;
use std::ops::Range;

/// The symbol that a letter of the table stands for; none for a variable.
fn letter(law: &Stated, letter: u8) -> Option<Symbol> {
    match letter {
        b'*' | b'f' => law.symbols.operator,
        b'+' => law.symbols.other,
        b'e' => law.symbols.constant,
        b'i' => law.symbols.unary,
        _ => None,
    }
}

/// The sorts of `x`, `y`, `z` that make the equation well sorted.
pub(super) fn sorts_of(signature: &Signature, law: &Stated) -> Result<[Option<Sort>; 3], Fault> {
    let mut sorts = [None; 3];
    let mut result = None;
    let mut fits = true;
    for side in [law.left, law.right] {
        // Read forwards, with the sorts that are still expected on a stack.
        let mut expected: Vec<Option<Sort>> = vec![result];
        for byte in side.bytes() {
            let wanted = expected.pop().expect("the table is well formed");
            let sort = match letter(law, byte) {
                Some(symbol) => {
                    let declaration = &signature.symbols()[symbol.index()];
                    expected.extend(declaration.arguments.iter().rev().map(|sort| Some(*sort)));
                    Some(declaration.result)
                }
                None => {
                    let known = &mut sorts[(byte - b'x') as usize];
                    *known = known.or(wanted);
                    *known
                }
            };
            fits &= wanted.is_none() || sort == wanted;
            result = result.or(sort);
        }
    }
    if fits {
        return Ok(sorts);
    }
    let operator = law.symbols.operator.expect("the operator was found");
    Err(Fault::new(
        law.span.clone(),
        format!("the sorts do not allow {}", law.words),
    )
    .label("the equation would mix sorts")
    .help(format!(
        "the type of {} is {}",
        signature.symbols()[operator.index()].name,
        type_of(signature, operator)
    )))
}

/// Variables for `x`, `y`, `z`: the declared ones of the sort in their order, then implicit ones.
pub(super) fn choose_variables(
    at: &mut Statement<'_, '_, '_>,
    sorts: &[Option<Sort>; 3],
    span: &Range<usize>,
) -> Result<[Option<Variable>; 3], Fault> {
    let mut chosen = [None; 3];
    let mut used: Vec<u32> = Vec::new();
    for (slot, sort) in chosen.iter_mut().zip(sorts) {
        let Some(sort) = *sort else { continue };
        let signature = &mut at.theory.signature;
        // Declared variables are numbered before the implicit ones only by chance.
        let find = |implicit: bool| {
            let all = signature.variables().iter().zip(0u32..);
            all.filter(|(v, index)| {
                v.sort == sort && v.implicit == implicit && !used.contains(index)
            })
            .map(|(_, index)| index)
            .next()
        };
        let index = match find(false).or_else(|| find(true)) {
            Some(index) => index,
            None => {
                let name = signature.fresh_name(&mut 1, |_| false);
                signature.add_variable(&name, sort, true).map_err(|_| {
                    Fault::new(span.clone(), "there are too many variables")
                        .help("take some of them out")
                })?
            }
        };
        used.push(index);
        *slot = Some(Variable { index, sort });
    }
    Ok(chosen)
}

/// The term of one side: read backwards, so that arguments are there before their symbol.
pub(super) fn build(
    at: &mut Statement<'_, '_, '_>,
    law: &Stated,
    side: &str,
    variables: &[Option<Variable>; 3],
) -> TermId {
    let bank = &mut at.theory.bank;
    let mut stack: Vec<TermId> = Vec::new();
    for byte in side.bytes().rev() {
        let term = match letter(law, byte) {
            Some(symbol) => {
                let count = bank.info(symbol).arguments.len();
                let mut arguments = stack.split_off(stack.len() - count);
                arguments.reverse();
                bank.apply(symbol, &arguments)
            }
            None => {
                let variable = variables[(byte - b'x') as usize];
                bank.variable(variable.expect("every variable got its sort"))
            }
        };
        stack.push(term);
    }
    stack.pop().expect("the table is well formed")
}

// Package lang turns the text of a script into a syntax tree, and a tree back into text.
// It knows the grammar and nothing else: which names, relations, functions and clauses
// exist, and what they mean, is decided by those who read the tree.
//
// # From text to tree
//
// Split cuts a script into statements at the semicolons that are tokens. ParseStatement
// reads one of them, Parse all. A text goes through three hands:
//
//   - The lexer (lexer.go, token.go, words.go) is written by hand behind participle's
//     interface. It never fails: what cannot be a token becomes a bad one, which is
//     reported when the parser gets to it, so that a fault late in a script does not
//     hide an earlier one. Every word that the language knows is a token type of its own.
//   - Statements are structs that participle fills in (grammar.go); convert.go makes the
//     tree of them.
//   - Queries, expressions, relations, solids and lists are read by a parser that
//     descends by hand (parser.go, parse_….go), to which participle hands over through
//     the parts in parts.go. It looks ahead at most as far as a run of brackets.
//
// # Words
//
// There are three classes of known words. Reserved words (ReservedWords) are names only
// in double quotes or behind a point. Stop words (StopWords) are names anywhere, but need
// AS to be an alias, because they begin the next part of a query or a clause. Plain words
// (PlainWords) mean something in one place and are ordinary names elsewhere. So columns
// may be called id, count, number, cells, order or timestamp.
//
// A relation's noun is any word followed by OF. VALUES begins rows only before a bracket,
// and no function can have that name. FOR EACH followed by a name is the clause FOR EACH;
// a column called each stands in brackets behind FOR.
//
// # The tree
//
// Each construct has a struct (ast.go, ast_….go) of plain data. Every node knows the bytes
// it was read from. Brackets that only group leave no node: an expression's span leaves
// out brackets around it, its parent's span takes them in. A query in brackets is kept as
// a query of its own only where it has a WITH, an ORDER BY or a LIMIT. Numbers and names
// stay as they were written.
//
// The laws that the tests hold the package to, on random trees over the whole grammar:
//
//  1. What Print writes is read back as the same tree.
//  2. Blanks, comments and the case of bare words do not matter.
//  3. Every node lies within its parent, and its text alone is read as the same thing.
//  4. Walk reaches every node, and no other.
//
// # Faults
//
// Every fault is an *Error: a place, a message, and where one is known a way out. Caret
// renders it with the source line; it serves faults that are found later just as well,
// and so does Nearest, which finds the name that was meant.
//
// # Degenerate inputs
//
// An empty script, or one of comments and semicolons, has no statements and is no fault.
// A byte order mark and every blank that Unicode knows count as blanks. Bytes that are no
// UTF-8 are a fault. Texts and quoted names may run over several lines; a quoted name
// cannot be empty. What is nested more than 200 levels deep, chains more than 2,000
// operators of one kind, or piles up to more than 4,000 nodes one below another is
// refused, so that whoever walks a tree may recurse; flat lists have no limit.
//
// # Limitations
//
// Names are folded letter by letter (Unicode simple folding): a letter with its accent in
// one part and the same letter in two parts are different names. The parser stops at the
// first fault of a statement. Carets under characters whose width terminals disagree
// about (joined pictures, say) may stand a column off.
package lang

package lang

import "github.com/alecthomas/participle/v2/lexer"

// The statements as participle reads them. Each struct is one statement; capital words
// in the tags are token types (see symbols), @@ hands over to the part of the field's
// type. What participle captured becomes the tree in convert.go.

type queryGrammar struct {
	Query lastQueryPart `parser:"@@"`
}

type createGrammar struct {
	Replace bool                `parser:"CREATE @( OR REPLACE )?"`
	Data    *createDataGrammar  `parser:"( @@"`
	Solid   *createSolidGrammar `parser:"| @@"`
	View    *createViewGrammar  `parser:"| @@"`
	Frame   *createFrameGrammar `parser:"| @@ )"`
}

type createDataGrammar struct {
	Kind     string        `parser:"@( CAMPAIGN | TABLE )"`
	Name     namePart      `parser:"@@"`
	Files    *filePart     `parser:"( FROM ( FILES @@"`
	File     *filePart     `parser:"| @@ )"`
	Query    *queryPart    `parser:"| AS Left @@ Right )"`
	Readings *readingsPart `parser:"@@"`
}

type createSolidGrammar struct {
	Name  namePart  `parser:"SOLID @@"`
	Solid solidPart `parser:"AS @@"`
	Frame *namePart `parser:"( IN FRAME @@ )?"`
}

type createViewGrammar struct {
	Name  namePart  `parser:"VIEW @@"`
	Query queryPart `parser:"AS Left @@ Right"`
}

type createFrameGrammar struct {
	Name namePart `parser:"FRAME @@"`
	File filePart `parser:"MATCHING @@"`
}

type dropGrammar struct {
	Kind     string    `parser:"DROP ( @( CAMPAIGN | TABLE | SOLID | VIEW | FRAME )"`
	Name     *namePart `parser:"@@"`
	Diagrams bool      `parser:"| @DIAGRAMS )"`
}

type letGrammar struct {
	Name  anyWordPart  `parser:"LET @@"`
	Value lastExprPart `parser:"Equals @@"`
}

type saveGrammar struct {
	Query   savedQueryPart `parser:"SAVE @@"`
	To      filePart       `parser:"TO @@"`
	Options []saveOption   `parser:"@@*"`
}

// saveOption notes where it stands, so that a second one can be pointed at.
type saveOption struct {
	Tokens []lexer.Token
	Word   string `parser:"@OVERWRITE | WITH @( UNITS | PROVENANCE ) | QUOTE @FORMULAS"`
}

type explainGrammar struct {
	Measured bool          `parser:"EXPLAIN @MEASURED?"`
	Query    lastQueryPart `parser:"@@"`
}

type requireGrammar struct {
	Label     textPart      `parser:"REQUIRE @@"`
	None      *queryPart    `parser:"( (?= NONE Left) NONE Left @@ Right"`
	Condition *lastExprPart `parser:"| @@ )"`
}

type listGrammar struct {
	What wordPart `parser:"LIST @@"`
}

type describeGrammar struct {
	File    *filePart    `parser:"DESCRIBE ( (?= FILE Literal) FILE @@"`
	Name    *anyWordPart `parser:"| @@"`
	Operand *operandPart `parser:"( OF @@ )? )"`
}

type runGrammar struct {
	File filePart `parser:"RUN @@"`
}

type setGrammar struct {
	Name  wordPart    `parser:"SET @@"`
	Value settingPart `parser:"@@"`
}

type helpGrammar struct {
	Help  bool          `parser:"@HELP"`
	Topic []anyWordPart `parser:"( @@ ( Dash? @@ )* )?"`
}

type quitGrammar struct {
	Quit bool `parser:"@QUIT"`
}

type drawGrammar struct {
	Verb      string       `parser:"@( DRAW | SHOW )"`
	Relation  relationPart `parser:"@@"`
	Options   []drawOption `parser:"@@*"`
	To        *filePart    `parser:"( TO @@"`
	Overwrite bool         `parser:"@OVERWRITE? )?"`
}

type drawOption struct {
	Tokens  []lexer.Token
	Shaded  *namePart   `parser:"SHADED BY @@"`
	Limits  []valuePart `parser:"| LIMITS Left @@ ( Comma @@ )* Right"`
	Along   *namePart   `parser:"| ALONG @@"`
	Showing []namePart  `parser:"| SHOWING @@ ( Comma @@ )*"`
	Weight  *weightPart `parser:"| WEIGHTED BY @@"`
	Seen    []valuePart `parser:"| SEEN FROM Left @@ Comma @@ Comma @@ Right"`
}

type remarkGrammar struct {
	Verb string   `parser:"@( TITLE | TEXT )"`
	Text textPart `parser:"@@"`
}

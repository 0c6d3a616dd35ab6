package function

import (
	"strings"
	"unicode/utf8"

	"nearcell/catalog/column"
)

// textScalars are the functions of texts. They count characters (Unicode code
// points), not bytes.
func textScalars() []*Scalar {
	upper := &Scalar{Name: "UPPER", Signature: "UPPER(text)", Meaning: "the text in upper case", Example: "UPPER('l17') = 'L17'"}
	upper.Check, upper.Eval = checkText("UPPER", column.Text), mapped(upper, strings.ToUpper)
	lower := &Scalar{Name: "LOWER", Signature: "LOWER(text)", Meaning: "the text in lower case", Example: "LOWER('L17') = 'l17'"}
	lower.Check, lower.Eval = checkText("LOWER", column.Text), mapped(lower, strings.ToLower)
	length := &Scalar{Name: "CHAR_LENGTH", Aliases: []string{"CHARACTER_LENGTH"}, Signature: "CHAR_LENGTH(text)",
		Meaning: "the number of characters", Example: "CHAR_LENGTH('Käse') = 4"}
	length.Check, length.Eval = checkText("CHAR_LENGTH", column.Integer), evalLength(length)
	return []*Scalar{upper, lower, length,
		{Name: "TRIM", Signature: "TRIM([character FROM] text)", Meaning: "the text without the blanks, or that character, at its ends",
			Example: "TRIM('  L17 ') = 'L17'", CanFail: true, Check: checkTrim, Eval: evalTrim},
		{Name: "SUBSTRING", Signature: "SUBSTRING(text FROM start [FOR length])",
			Meaning: "characters from start (the first is 1), so many or all that follow; commas may stand for FROM and FOR",
			Example: "SUBSTRING('Hall 4' FROM 6 FOR 1) = '4'", CanFail: true, Check: checkSubstring, Eval: evalSubstring},
	}
}

func checkText(name string, result column.Type) func([]Arg) (Result, error) {
	return func(args []Arg) (Result, error) {
		if err := wantCount(name, args, 1, 1); err != nil {
			return Result{}, err
		}
		return Result{result, nil, repeatType(column.Text, 1)}, wantType(name, args, 0, column.Text)
	}
}

// recoded is a new dictionary and what became of the old codes.
type recoded struct {
	dict  *column.Dict
	codes []uint32
}

// mapped computes a text of each text of the dictionary, once.
func mapped(owner *Scalar, f func(string) string) func(*Arena, []column.Vector, []uint64, int, *column.Vector) error {
	return func(a *Arena, args []column.Vector, _ []uint64, n int, out *column.Vector) error {
		in := &args[0]
		if len(in.Dict.Texts) == 0 {
			return nil // nothing but NULLs
		}
		key := TableKey{Owner: owner, Dict: in.Dict}
		r, ok := a.Table(key).(*recoded)
		if !ok {
			texts := a.Texts()
			r = &recoded{codes: make([]uint32, len(in.Dict.Texts))}
			for i, s := range in.Dict.Texts {
				r.codes[i] = texts.Code(f(s))
			}
			r.dict = texts.Finish()
			a.SetTable(key, r)
		}
		for i, c := range in.C[:n] {
			out.C[i] = r.codes[c]
		}
		out.Dict = r.dict
		return nil
	}
}

func evalLength(owner *Scalar) func(*Arena, []column.Vector, []uint64, int, *column.Vector) error {
	return func(a *Arena, args []column.Vector, _ []uint64, n int, out *column.Vector) error {
		in := &args[0]
		if len(in.Dict.Texts) == 0 {
			return nil
		}
		key := TableKey{Owner: owner, Dict: in.Dict}
		lengths, ok := a.Table(key).([]int64)
		if !ok {
			lengths = make([]int64, len(in.Dict.Texts))
			for i, s := range in.Dict.Texts {
				lengths[i] = int64(utf8.RuneCountInString(s))
			}
			a.SetTable(key, lengths)
		}
		for i, c := range in.C[:n] {
			out.I[i] = lengths[c]
		}
		return nil
	}
}

func checkTrim(args []Arg) (Result, error) {
	if err := wantCount("TRIM", args, 1, 2); err != nil {
		return Result{}, err
	}
	for i := range args {
		if err := wantType("TRIM", args, i, column.Text); err != nil {
			return Result{}, err
		}
	}
	return Result{column.Text, nil, repeatType(column.Text, len(args))}, nil
}

func evalTrim(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	texts := a.Texts()
	of := &args[len(args)-1]
	row := FirstRow(on, n, func(i int) bool {
		mark := " "
		if len(args) == 2 {
			mark = args[0].Text(i)
		}
		if utf8.RuneCountInString(mark) != 1 {
			return true
		}
		out.C[i] = texts.Code(strings.Trim(of.Text(i), mark))
		return false
	})
	out.Dict = texts.Finish()
	return noValue(row, "TRIM takes one character off, not '%s'", &args[0])
}

func checkSubstring(args []Arg) (Result, error) {
	if err := wantCount("SUBSTRING", args, 2, 3); err != nil {
		return Result{}, err
	}
	if err := wantType("SUBSTRING", args, 0, column.Text); err != nil {
		return Result{}, err
	}
	types := []column.Type{column.Text}
	for i := range args[1:] {
		if err := wantType("SUBSTRING", args, i+1, column.Integer); err != nil {
			return Result{}, err
		}
		types = append(types, column.Integer)
	}
	return Result{column.Text, nil, types}, nil
}

func evalSubstring(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	texts := a.Texts()
	length := &args[len(args)-1]
	row := FirstRow(on, n, func(i int) bool {
		s, start := args[0].Text(i), args[1].I[i]
		if len(args) == 2 {
			out.C[i] = texts.Code(substring(s, start, int64(len(s))+1, true))
			return false
		}
		if length.I[i] < 0 {
			return true
		}
		out.C[i] = texts.Code(substring(s, start, length.I[i], false))
		return false
	})
	out.Dict = texts.Finish()
	return noValue(row, "SUBSTRING cannot take %s characters", length)
}

// substring takes the characters at positions start to start+length-1, those
// of them that there are; open: to the end.
func substring(s string, start, length int64, open bool) string {
	end := start + length // position after the last
	if start > 0 && length > 0 && end < 0 {
		open = true // beyond 64 bits
	}
	from, to := -1, len(s)
	position := int64(0)
	for i := range s {
		position++
		if from < 0 && position >= start {
			from = i
		}
		if !open && position >= end {
			to = i
			break
		}
	}
	if from < 0 || from >= to {
		return ""
	}
	return s[from:to]
}

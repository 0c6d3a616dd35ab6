package lang_test

import (
	"errors"
	"fmt"

	"nearcell/lang"
)

func ExampleParse() {
	script, err := lang.Parse(`
		-- by space, and not by count of samples
		select avg(temp) weighted by (volume * 2) mean from cells of hall for each t within air;
		list campaigns`)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Print(lang.Print(script))
	// Output:
	// SELECT avg(temp) WEIGHTED BY (volume * 2) AS mean FROM cells OF hall FOR EACH t WITHIN air;
	// LIST campaigns;
}

func ExampleCaret() {
	src := "LET a = 1;\n\nSELECT id, tmep FORM CELLS OF hall;\n"
	_, err := lang.Parse(src)
	var fault *lang.Error
	if errors.As(err, &fault) {
		fmt.Println(lang.Caret("hall.ncell", src, fault.Span, fault.Error()))
	}
	// Output:
	// hall.ncell:3: expected FROM but found 'FORM' (did you mean FROM?)
	//   SELECT id, tmep FORM CELLS OF hall;
	//                   ^^^^
}

func ExampleWalk() {
	query, err := lang.ParseQuery("SELECT a + b AS c FROM t WHERE (SELECT MAX(d) FROM u) > 1")
	if err != nil {
		fmt.Println(err)
		return
	}
	lang.Walk(query, func(n lang.Node) bool {
		if c, ok := n.(*lang.Column); ok {
			fmt.Println(c.Name.Text, c.Span())
		}
		_, within := n.(*lang.Subquery)
		return !within
	})
	// Output:
	// a {7 8}
	// b {11 12}
}

func ExampleNearest() {
	fmt.Println(lang.Nearest("tmep", []string{"id", "temp", "volume"}))
	// Output: temp
}

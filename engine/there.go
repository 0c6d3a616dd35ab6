package engine

import (
	"context"
	"errors"
	"io"

	"nearcell/catalog"
	"nearcell/engine/problem"
)

// sampleSetting has the names that the examples of the registries use. It is only
// ever bound, never computed.
const sampleSetting = `
CREATE SOLID air AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5;
CREATE CAMPAIGN hall AS (
  SELECT * FROM (VALUES ('L01', 1.5, 2.5, 0.4, 4.2, 'floor')) AS v (id, x, y, z, temp, level)) WITHIN air;
CREATE TABLE log AS (
  SELECT * FROM (VALUES (TIMESTAMP '2031-04-07 00:00:00', 'L01', 4.2)) AS v (t, logger, temp));
CREATE VIEW readings AS (SELECT s.id, s.x, s.y, s.z, l.t, l.temp FROM hall s JOIN log l ON l.logger = s.id);
LET upper = 8;
`

// noFolder is where the files of the examples are not: no file can have a name
// with this character.
const noFolder = "\x00"

// there tells whether the program has what an entry is about. It is asked with the
// example, which is bound as "check" would bind it, and is not there exactly when
// it is refused under the code not-yet. So HELP cannot drift from the program.
func (e entry) there() bool { return there(e.example) }

func there(example string) bool {
	s := New(catalog.Memory(), Options{Out: io.Discard, Err: io.Discard, Quiet: true})
	s.checkOnly = true
	for _, text := range []string{sampleSetting, example} {
		if err := s.Run(context.Background(), "example", text, noFolder); err != nil {
			var p *problem.Problem
			return !errors.As(s.last, &p) || p.Code != "not-yet"
		}
	}
	return true
}

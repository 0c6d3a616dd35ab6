package engine

import (
	"errors"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/store"
	"nearcell/engine/problem"
)

// kindWord names a kind with its article for messages.
func kindWord(k catalog.Kind) string {
	return "a " + strings.ToLower(k.String())
}

// catalogProblem words an error of the catalog.
func catalogProblem(err error, at problem.Place) error {
	var exists *catalog.ErrExists
	var none *catalog.ErrNoSuch
	switch {
	case errors.As(err, &exists):
		kind := exists.Kind.String()
		return problem.New("name-taken", at, "there is %s '%s' already", kindWord(exists.Kind), exists.Name).
			WithHint("CREATE OR REPLACE %s replaces it, DROP %s removes it", kind, kind).Because(err)
	case errors.As(err, &none) && none.Found != 0:
		return problem.New("wrong-kind", at, "'%s' is %s, not %s", none.Key, kindWord(none.Found), kindWord(none.Kind)).
			WithHint("DROP %s %s drops it", none.Found, none.Key).Because(err)
	case errors.As(err, &none):
		return problem.New("no-object", at, "there is no %s '%s'", strings.ToLower(none.Kind.String()), none.Key).
			Because(err)
	}
	return problem.New("catalog", at, "%s", err.Error()).Because(err)
}

// wordStore puts an error of the catalog's files into a user's words, wherever
// it came up; other errors pass as they are.
func wordStore(err error) error {
	var p *problem.Problem
	if !errors.As(err, &p) {
		return err
	}
	var damaged *store.DamagedError
	var newer *store.NewerError
	var locked *store.LockedError
	switch {
	case errors.As(err, &damaged):
		p.Code = "catalog"
		p.Message = "the catalog's file " + damaged.Path + " is damaged and is not used"
		p.Hint = "CREATE OR REPLACE makes the thing again from its source"
	case errors.As(err, &newer):
		p.Code = "catalog"
		p.Message = "the catalog was written by a later version of this program"
		p.Hint = "use that version, or another --catalog"
	case errors.As(err, &locked):
		p.Code = "catalog"
		p.Message = "another process is changing the catalog"
		p.Hint = "wait for it to end"
	}
	return err
}

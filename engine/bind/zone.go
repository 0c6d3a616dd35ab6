package bind

import (
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/lang"
)

// atTimeZone binds t AT TIME ZONE 'zone'.
func (x *exprs) atTimeZone(e *lang.AtTimeZone) (expr.Expr, error) {
	args, err := x.all([]lang.Expr{e.Operand, e.Zone})
	if err != nil {
		return nil, err
	}
	return x.made(e, args...)(expr.NewCall(function.Zoned, args, x.at(e)))
}

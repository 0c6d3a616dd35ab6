package lang

import "reflect"

// Equal tells whether two trees say the same. Places do not count, and neither does
// the case of bare names and of :names; numbers and texts must be written alike.
func Equal(a, b Node) bool {
	return same(reflect.ValueOf(a), reflect.ValueOf(b))
}

var (
	atType    = reflect.TypeFor[At]()
	spanType  = reflect.TypeFor[Span]()
	nameType  = reflect.TypeFor[Name]()
	paramType = reflect.TypeFor[Param]()
)

func same(a, b reflect.Value) bool {
	if a.IsValid() != b.IsValid() {
		return false
	}
	if !a.IsValid() {
		return true
	}
	if a.Type() != b.Type() {
		return false
	}
	switch a.Kind() {
	case reflect.Pointer, reflect.Interface:
		if a.IsNil() || b.IsNil() {
			return a.IsNil() && b.IsNil()
		}
		return same(a.Elem(), b.Elem())
	case reflect.Slice:
		return sameList(a, b)
	case reflect.Struct:
		return sameStruct(a, b)
	}
	return a.Equal(b)
}

func sameList(a, b reflect.Value) bool {
	if a.Len() != b.Len() {
		return false
	}
	for i := range a.Len() {
		if !same(a.Index(i), b.Index(i)) {
			return false
		}
	}
	return true
}

func sameStruct(a, b reflect.Value) bool {
	switch a.Type() {
	case atType, spanType:
		return true
	case nameType:
		x, y := a.Interface().(Name), b.Interface().(Name)
		return x.Quoted == y.Quoted && x.Key() == y.Key()
	case paramType:
		return Fold(a.Interface().(Param).Name) == Fold(b.Interface().(Param).Name)
	}
	for i := range a.NumField() {
		if !same(a.Field(i), b.Field(i)) {
			return false
		}
	}
	return true
}

// Key gives the text under which the value set by LET is looked up, whatever the case.
func (p *Param) Key() string { return Fold(p.Name) }

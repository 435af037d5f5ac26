// Package thermo lists the methods. Everything below it is pure: no file, no
// log, no clock.
package thermo

import (
	"tieline/thermo/feldspar"
	"tieline/thermo/method"
	"tieline/thermo/pyroxene"
)

// Methods are all methods, in the order in which they are listed and evaluated.
func Methods() []*method.Method {
	return []*method.Method{
		feldspar.ElkinsGrove1990,
		feldspar.FuhrmanLindsley1988,
		pyroxene.BreyKoehler1990,
		pyroxene.BreyKoehler1990Ca,
		pyroxene.NimisGruetter2010,
	}
}

// ByID is the method of an id, nil for none.
func ByID(id string) *method.Method {
	for _, m := range Methods() {
		if m.ID == id {
			return m
		}
	}
	return nil
}

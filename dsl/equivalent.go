package dsl

import "ampturn/magcirc/induct"

// EquivalentCircuit is two coupled windings as a circuit of inductances.
type EquivalentCircuit struct {
	circuit            induct.Circuit
	primary, secondary string
	caption            string
}

package dialect

import "testing"

// TestFaults tells apart what leaves something out of the network and what
// spoils only itself.
func TestFaults(t *testing.T) {
	for line, faults := range map[string]bool{
		"tell v[oit]":                               false,
		"tell v[out":                                false,
		"let x = 1 V + 1 A":                         false,
		"let x = ":                                  false,
		"function G = v[oit]/Vs":                    false,
		"require v[out] <= 3 A":                     false,
		"port q at oit hull":                        false,
		"allow floating because \"so\"":             false,
		"prefer resistor E12\nprefer resistor E24":  false,
		"far -[resistor Rx = 1 Ω, rated 3 A]- hull": false,
		"use \"gone.plight\"":                       false,
		"resistor Rx = 1 Ω":                         false,
		"subnetwork Cell (a, b) {\n  a -[resistor R = 1 V]- b\n}":                                                     false,
		"subnetwork Cell (a, b) {\n  a -[R5]- b\n}":                                                                   false,
		"subnetwork Cell (a, b) with W = 0 Ω {\n  a -[resistor R = W]- b\n}\nfar -[part F = Cell with W = 1 Ω]- hull": false,
		"let x = 1 V + 1 A\nfar -[resistor Rx = x/(1 A)]- hull":                                                       true,
		"far -[resistor Rx = 1 A]- hull":                                                                              true,
		"far -[resistor Rx = ]- hull":                                                                                 true,
		"far -[R5]- hull":                                                                                             true,
		"far -[R1]- hull":                                                                                             true,
		"far -[resistor R1 = 1 Ω]- hull":                                                                              true,
		"far -[resistor Rx = 1 Ω":                                                                                     true,
		"diode D1 = 1 V":                                                                                              true,
		"coupling K = 2, between L1 R1":                                                                               true,
		"op amp U1 = ideal, + at out":                                                                                 true,
		"part F = Nothing, a at far":                                                                                  true,
		"subnetwork Cell (a, b) {\n  a -[resistor R = 1 V]- b\n}\nfar -[part F = Cell]- hull":                         true,
		"subnetwork Cell (a, b) {\n  a -[R5]- b\n}\nfar -[part F = Cell]- hull":                                       true,
		"subnetwork Cell (a, b) {\n  a -[resistor R = ]- b\n}\nfar -[part F = Cell]- hull":                            true,
		"subnetwork Cell (a, b) with W = 1 Ω {\n  a -[resistor R = W]- b\n}\nfar -[part F = Cell with W = 0 Ω]- hull": true,
		"use \"gone.plight\"\npart F = Cell, a at far, b at hull":                                                     true,
	} {
		c := Check(Parse("case.plight", frame+line+"\n"), nil)
		if c.Description.Faults != faults {
			t.Errorf("%s\n\tfaults: %v, findings %v", line, c.Description.Faults, c.Findings)
		}
	}
}

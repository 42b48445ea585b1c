package circuit

// ArmSensitivity is the derivative of H by the values of one arm.
type ArmSensitivity struct {
	R     complex128 // 1/Ω
	L     complex128 // 1/H
	C     complex128 // 1/F
	Stray complex128 // 1/Ω
	Lead  complex128 // 1/Ω
}

// InputSensitivity is the derivative of H by the values of the detector's input.
type InputSensitivity struct {
	Lead complex128 // 1/Ω
	R    complex128 // 1/Ω; 0 for an open input
	C    complex128 // 1/F
}

// Sensitivity is the derivative of H by everything that the ladder is made of.
type Sensitivity struct {
	Arms       []ArmSensitivity // in the ladder's order; all 0 in a Tap. Holds until the Workspace is used again.
	Source     complex128       // 1/Ω
	Return     complex128       // 1/Ω
	ReturnSeen complex128       // 1/Ω
	Input      InputSensitivity
}

// Sensitivity gives the derivatives of H: dH/dZ = i·a for an impedance that carries i per volt of EMF, and a for 1 A into the
// detector's terminals with the EMF at zero, both counted in the same direction (Director and Rohrer 1969).
func (r *Response) Sensitivity() Sensitivity {
	w := r.workspace()
	jOmega := complex(0, w.omega)
	arms := w.sensitivity[:len(w.branches)]
	for k := range arms {
		b := &w.branches[k]
		if b.place == Tap {
			arms[k] = ArmSensitivity{}
			continue
		}
		byZ := r.Arms[k] * b.injected * w.intoLadder
		arms[k] = ArmSensitivity{
			R:     byZ * b.inner,
			L:     byZ * b.inner * jOmega,
			C:     -byZ * b.element * b.element * jOmega,
			Stray: byZ,
			Lead:  byZ,
		}
	}
	if w.branches[w.tap].place == Shunt {
		arms[w.tap].Lead = (r.Arms[w.tap] + r.Detector) * w.tapLeadShare * w.intoLadder
	}
	bySource := r.Source * w.sourceShare * w.intoLadder
	byLoad := -r.H * r.Z // by the input's admittance 1/R + jωC
	return Sensitivity{
		Arms:       arms,
		Source:     bySource,
		Return:     bySource,
		ReturnSeen: (r.Source - r.Detector) * w.commonShare * w.intoLadder,
		Input: InputSensitivity{
			Lead: -r.Detector * w.intoLadder,
			R:    -byLoad * complex(1/w.inputR/w.inputR, 0),
			C:    byLoad * jOmega,
		},
	}
}

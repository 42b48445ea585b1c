package circuit

import "math"

// Workspace holds the working storage of [Ladder.Solve] and [Ladder.Transfer]. The zero value is ready for use; used again and again it
// saves the allocations. It serves one goroutine at a time.
type Workspace struct {
	solves       int     // how often it was used: tells an outdated Response
	omega        float64 // rad/s
	source       float64 // Ω, generator's source resistance
	inputR       float64 // Ω, detector's input resistance
	tap          int
	branches     []branch
	currents     []complex128
	sensitivity  []ArmSensitivity
	drive        complex128 // A/V, from the generator with the detector taken off
	load         complex128 // S, detector's input: R and C
	intoLadder   complex128 // share of a current into the detector's terminals that takes the sense lead, not the input
	sourceShare  complex128 // of 1 A into the sense lead, generator at zero: against the generator's current
	commonShare  complex128 // likewise: from the ladder's common through ReturnSeen
	tapLeadShare complex128 // likewise: from the joint to the tap through the tapped arm's Lead
}

// branch is an arm at one frequency, followed by the joint at its far end. A shunt lies across that joint.
type branch struct {
	place   Place
	r       float64    // Ω, R of the element
	element complex128 // Ω, R and L ∥ C
	inner   complex128 // d(element)/dR = (1/(1 + jωC(R + jωL)))²; its root is the share of the arm's current through R
	series  complex128 // Ω, with wires; 0 in a shunt or a tap
	shunt   complex128 // Ω, with wires; open in a series arm or a tap
	below   complex128 // Ω, of the joint to common: the shunt beside all that follows

	toShunt, onward   complex128 // shares of a current that comes from the generator's side
	toShuntBack, back complex128 // shares of a current that comes from the far side

	driven   complex128 // A, arm's current for 1 A into the ladder's input, detector taken off
	injected complex128 // A, arm's current for 1 A into the sense lead, generator at zero
}

var open = complex(math.Inf(1), 0)

func isOpen(z complex128) bool { return math.IsInf(real(z), 1) }

// parallel gives the impedance of a beside b and the shares that each takes of a current into both. Shares are products and sums only,
// so neither is less accurate for being small.
func parallel(a, b complex128) (z, toA, toB complex128) {
	switch {
	case isOpen(a):
		return b, 0, 1
	case isOpen(b):
		return a, 1, 0
	case a == 0 && b == 0:
		return 0, 0.5, 0.5
	}
	y := 1 / (a + b)
	toA, toB = b*y, a*y
	return a * toA, toA, toB
}

// solve finds the currents that all results are made of, and returns the transfer H and the output impedance Z.
func (w *Workspace) solve(l *Ladder, f float64) (h, z complex128) {
	if l.Tap < 0 || l.Tap >= len(l.Arms) || l.Arms[l.Tap].Place == Series {
		panic("circuit: the ladder's Tap is no shunt or tap arm; see Check")
	}
	w.prepare(l, f)
	input := w.fold()
	seen := complex(l.ReturnSeen, 0)
	generator := complex(l.Source+l.Return, 0)

	w.drive = 1 / (generator + seen + input)
	openVoltage := w.drive * (w.driveInput(l) + seen)

	z = w.injectTap(l, generator, seen) + complex(l.Input.Lead, 0)
	w.load = complex(1/l.Input.R, w.omega*l.Input.C)
	w.intoLadder = 1 / (1 + w.load*z)
	return openVoltage * w.intoLadder, z * w.intoLadder
}

// prepare sets up the branches at one frequency.
func (w *Workspace) prepare(l *Ladder, f float64) {
	n := len(l.Arms)
	if cap(w.branches) < n {
		w.branches = make([]branch, n)
		w.currents = make([]complex128, n)
		w.sensitivity = make([]ArmSensitivity, n)
	}
	w.branches = w.branches[:n]
	w.solves++
	w.omega, w.source, w.inputR, w.tap = 2*math.Pi*f, l.Source, l.Input.R, l.Tap
	for k := range w.branches {
		a, b := &l.Arms[k], &w.branches[k]
		b.place, b.r, b.series, b.shunt = a.Place, a.R, 0, open
		var root complex128
		b.element, root = a.impedance(w.omega)
		b.inner = root * root
		switch a.Place {
		case Series:
			b.series = b.element + complex(a.Stray+a.Lead, 0)
		case Shunt:
			b.shunt = b.element + complex(a.Stray+a.Lead, 0)
		}
	}
}

// impedance gives that of the arm's element without wires, (R + jωL)/(1 + jωC(R + jωL)), and the share of its current through R and L.
func (a *Arm) impedance(omega float64) (z, share complex128) {
	z = complex(a.R, omega*a.L)
	if omega == 0 || a.C == 0 {
		return z, 1
	}
	share = 1 / (1 + complex(0, omega*a.C)*z)
	return z * share, share
}

// fold goes from the far end to the input and returns the ladder's impedance there, detector taken off.
func (w *Workspace) fold() complex128 {
	beyond := open
	for k := len(w.branches) - 1; k >= 0; k-- {
		b := &w.branches[k]
		b.below, b.toShunt, b.onward = parallel(b.shunt, beyond)
		beyond = b.series + b.below
	}
	return beyond
}

// driveInput sends 1 A into the input, detector taken off, and returns the voltage from the tap to the ladder's common.
func (w *Workspace) driveInput(l *Ladder) (tapVoltage complex128) {
	i := complex128(1)
	for k := range w.branches {
		b := &w.branches[k]
		if k <= w.tap && !isOpen(b.below) { // nothing flows, nor drops, towards a joint that is open
			tapVoltage = i * b.below
		}
		b.driven = i
		if b.place != Series {
			b.driven = i * b.toShunt
		}
		i *= b.onward
	}
	if t := &w.branches[w.tap]; t.place == Shunt {
		tapVoltage = t.driven * (t.element + complex(l.Arms[w.tap].Stray, 0))
	}
	return tapVoltage
}

// injectTap sends 1 A into the tap and out at the detector's low side, with the generator at zero, and returns the impedance
// that it meets.
//
// It is the sum of two distributions. In the first the current leaves at the ladder's common; the generator with both common leads is one more
// path back to it. The second carries it on from there to the detector's low side: through ReturnSeen, and a part `around` of it backwards
// through the ladder and the generator. The impedance is the sum of drops on the way from the tap through the series arms
// and the generator to the detector's low side, where both run the same way.
func (w *Workspace) injectTap(l *Ladder, generator, seen complex128) complex128 {
	around := seen * w.drive

	near := generator + seen
	for k := range w.branches[:w.tap] {
		b := &w.branches[k]
		near, b.toShuntBack, b.back = parallel(b.shunt, near+b.series)
	}
	far := open
	if w.tap+1 < len(w.branches) {
		far = w.branches[w.tap+1].series + w.branches[w.tap+1].below
	}
	rest, toGenerator, toFar := parallel(near, far)

	t, lead := &w.branches[w.tap], complex(l.Arms[w.tap].Lead, 0)
	inner := open
	if t.place == Shunt {
		inner = t.element + complex(l.Arms[w.tap].Stray, 0)
	}
	_, toElement, toJoint := parallel(inner, lead+rest)
	t.injected = toElement - around*t.driven
	w.tapLeadShare = -(toJoint + around*t.driven)
	w.commonShare = t.injected
	drop := -w.tapLeadShare * lead

	i := toJoint * toFar
	for k := w.tap + 1; k < len(w.branches); k++ {
		b := &w.branches[k]
		if b.place == Series {
			b.injected = i - around*b.driven
		} else {
			b.injected = i*b.toShunt - around*b.driven
			w.commonShare += b.injected
		}
		i *= b.onward
	}

	i = toJoint * toGenerator
	for k := w.tap - 1; k >= 0; k-- {
		b := &w.branches[k]
		if b.place == Series {
			b.injected = -(i + around*b.driven)
			drop -= b.injected * b.series
		} else {
			b.injected = i*b.toShuntBack - around*b.driven
			w.commonShare += b.injected
		}
		i *= b.back
	}
	w.sourceShare = -(i + around)
	return drop - w.sourceShare*generator
}

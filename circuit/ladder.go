package circuit

import (
	"errors"
	"fmt"
	"math"
)

// Place says how an arm stands in the ladder.
type Place int

const (
	Series Place = iota // from one joint to the next
	Shunt               // from a joint to common
	Tap                 // a joint without an element
)

func (p Place) String() string {
	switch p {
	case Series:
		return "series"
	case Shunt:
		return "shunt"
	case Tap:
		return "tap"
	}
	return fmt.Sprintf("Place(%d)", int(p))
}

// Arm is one element of the ladder with its wires. In a Tap all are zero.
type Arm struct {
	Place Place
	R     float64 // Ω
	L     float64 // H, in series with R
	C     float64 // F, across R and L
	Stray float64 // Ω, in series with the element; a detector tapped at this arm sees its drop too
	Lead  float64 // Ω, in series with the element; a detector tapped at this arm does not see its drop
}

// Input is the detector's input and the cable to it.
type Input struct {
	Lead float64 // Ω, sense lead: carries the detector's input current only
	R    float64 // Ω, more than zero; +Inf is an open input
	C    float64 // F, input and cable, beyond Lead
}

// Ladder is the divider between generator and detector.
type Ladder struct {
	Source     float64 // Ω, generator's source resistance; 0 where the EMF is the amplitude at the ladder's input
	Arms       []Arm   // from the generator to the far end
	Tap        int     // index of the Shunt or Tap arm that the detector is on
	Return     float64 // Ω, common lead to the generator's low side, beyond the detector's low side
	ReturnSeen float64 // Ω, common lead from the ladder's common to the detector's low side: its drop adds to the detector's voltage
	Input      Input
}

// Check reports the first fault that leaves the ladder without a meaning. Arms are counted from 1.
func (l *Ladder) Check() error {
	shunts := 0
	for i := range l.Arms {
		a := &l.Arms[i]
		if err := a.check(); err != nil {
			return fmt.Errorf("arm %d (%v): %w", i+1, a.Place, err)
		}
		if a.Place == Shunt {
			shunts++
		}
	}
	if shunts == 0 {
		return fmt.Errorf("no shunt among the ladder's %d arms: nothing divides the voltage, want at least one", len(l.Arms))
	}
	if l.Tap < 0 || l.Tap >= len(l.Arms) {
		return fmt.Errorf("the detector is on arm %d, want one of 1 to %d", l.Tap+1, len(l.Arms))
	}
	if l.Arms[l.Tap].Place == Series {
		return fmt.Errorf("the detector is on arm %d, which is a series arm; want a shunt or a tap", l.Tap+1)
	}
	if err := firstFault(
		amount{"source resistance", l.Source, "Ω"},
		amount{"return", l.Return, "Ω"},
		amount{"return seen by the detector", l.ReturnSeen, "Ω"},
		amount{"sense lead", l.Input.Lead, "Ω"},
		amount{"detector's input capacitance", l.Input.C, "F"},
	); err != nil {
		return err
	}
	if !(l.Input.R > 0) {
		return fmt.Errorf("detector's input resistance is %g Ω, want more than 0, +Inf for an open input", l.Input.R)
	}
	if l.shorted() {
		return errors.New("the generator is shorted: no resistance at all in its loop at DC; want a source resistance, a series arm or no 0 Ω shunt at the input")
	}
	return nil
}

func (a *Arm) check() error {
	if a.Place < Series || a.Place > Tap {
		return errors.New("no such place, want series, shunt or tap")
	}
	if a.Place == Tap && *a != (Arm{Place: Tap}) {
		return errors.New("has an element or a wire, want none: a tap is a joint only")
	}
	return firstFault(
		amount{"R", a.R, "Ω"},
		amount{"L", a.L, "H"},
		amount{"C", a.C, "F"},
		amount{"stray", a.Stray, "Ω"},
		amount{"lead", a.Lead, "Ω"},
	)
}

type amount struct {
	name  string
	value float64
	unit  string
}

// firstFault is about the first of the amounts that is negative or not finite.
func firstFault(amounts ...amount) error {
	for _, q := range amounts {
		if !(q.value >= 0) || math.IsInf(q.value, 1) {
			return fmt.Errorf("%s is %g %s, want a finite value of 0 or more", q.name, q.value, q.unit)
		}
	}
	return nil
}

// shorted reports whether the generator's EMF meets no resistance at DC.
func (l *Ladder) shorted() bool {
	if l.Source+l.Return+l.ReturnSeen > 0 {
		return false
	}
	for i := range l.Arms {
		a := &l.Arms[i]
		resistive := a.R+a.Stray+a.Lead > 0
		switch {
		case a.Place == Series && resistive:
			return false
		case a.Place == Shunt && !resistive:
			return true
		}
	}
	return false
}

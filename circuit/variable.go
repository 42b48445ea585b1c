package circuit

import "fmt"

// Element names one number that a ladder is made of.
type Element int

const (
	ArmR           Element = iota // Ω
	ArmL                          // H
	ArmC                          // F
	ArmStray                      // Ω
	ArmLead                       // Ω
	SourceR                       // Ω
	ReturnLead                    // Ω
	ReturnSeenLead                // Ω
	InputLead                     // Ω
	InputR                        // Ω
	InputC                        // F
	elements
)

var elementNames = [elements]string{
	"R", "L", "C", "stray", "lead",
	"source resistance", "return", "return seen by the detector",
	"sense lead", "detector's input resistance", "detector's input capacitance",
}

// ofArm reports whether each arm has one of its own.
func (e Element) ofArm() bool { return e <= ArmLead }

// Variable is one number of a ladder that will vary.
type Variable struct {
	Element Element
	Arm     int // index of its arm; of no meaning for what belongs to none
}

// String counts arms from 1.
func (v Variable) String() string {
	switch {
	case v.Element < 0 || v.Element >= elements:
		return fmt.Sprintf("Element(%d)", int(v.Element))
	case v.Element.ofArm():
		return fmt.Sprintf("%s of arm %d", elementNames[v.Element], v.Arm+1)
	}
	return elementNames[v.Element]
}

// In points to where the variable stands in the ladder.
func (v Variable) In(l *Ladder) *float64 {
	switch v.Element {
	case ArmR:
		return &l.Arms[v.Arm].R
	case ArmL:
		return &l.Arms[v.Arm].L
	case ArmC:
		return &l.Arms[v.Arm].C
	case ArmStray:
		return &l.Arms[v.Arm].Stray
	case ArmLead:
		return &l.Arms[v.Arm].Lead
	case SourceR:
		return &l.Source
	case ReturnLead:
		return &l.Return
	case ReturnSeenLead:
		return &l.ReturnSeen
	case InputLead:
		return &l.Input.Lead
	case InputR:
		return &l.Input.R
	case InputC:
		return &l.Input.C
	}
	panic("circuit: no such element in a ladder")
}

// By gives the derivative of H by one variable, in 1 over its unit.
func (s *Sensitivity) By(v Variable) complex128 {
	switch v.Element {
	case ArmR:
		return s.Arms[v.Arm].R
	case ArmL:
		return s.Arms[v.Arm].L
	case ArmC:
		return s.Arms[v.Arm].C
	case ArmStray:
		return s.Arms[v.Arm].Stray
	case ArmLead:
		return s.Arms[v.Arm].Lead
	case SourceR:
		return s.Source
	case ReturnLead:
		return s.Return
	case ReturnSeenLead:
		return s.ReturnSeen
	case InputLead:
		return s.Input.Lead
	case InputR:
		return s.Input.R
	case InputC:
		return s.Input.C
	}
	panic("circuit: no such element in a ladder")
}

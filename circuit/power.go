package circuit

import "math"

// Power is where the generator's power goes, wires apart.
type Power struct {
	Arms     []float64 // W, in each arm's R
	Source   float64   // W, in the source resistance
	Detector float64   // W, in the detector's input resistance
}

// Power gives the real power for an EMF of so many volts rms.
func (r *Response) Power(emf float64) Power {
	w := r.workspace()
	p := Power{
		Arms:     make([]float64, len(w.branches)),
		Source:   squared(r.Source) * w.source * emf * emf,
		Detector: squared(r.H) / w.inputR * emf * emf,
	}
	for k := range p.Arms {
		b := &w.branches[k]
		throughR := squared(r.Arms[k]) * math.Hypot(real(b.inner), imag(b.inner))
		p.Arms[k] = throughR * b.r * emf * emf
	}
	return p
}

// squared gives |z|².
func squared(z complex128) float64 { return real(z)*real(z) + imag(z)*imag(z) }

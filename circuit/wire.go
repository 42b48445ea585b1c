package circuit

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// Conductor is a length of wire.
type Conductor struct {
	Material string  // one of [Materials]
	Area     float64 // m², cross-section
	Length   float64 // m, all that the current runs through: there and back for a pair
}

type material struct {
	name        string
	resistivity float64 // Ω·m at 20 °C
	coefficient float64 // 1/K at 20 °C, relative to the resistance there
}

var materials = []material{
	{"aluminium", 28.264e-9, 0.00403}, // hard-drawn, IEC 60889 (from memory; 28.264 is 1.7241/0.61)
	{"copper", 1e-6 / 58, 0.00393},    // annealed, IEC 60028
}

// Materials lists the names of those known, sorted.
func Materials() []string {
	var names []string
	for _, m := range materials {
		names = append(names, m.name)
	}
	slices.Sort(names)
	return names
}

// Resistance gives the conductor's resistance in Ω at a temperature in °C: ρ·(1 + α·(T − 20 °C))·Length/Area.
func (c Conductor) Resistance(temperatureC float64) (float64, error) {
	m, at20, err := c.at20()
	if err != nil {
		return 0, err
	}
	factor := 1 + m.coefficient*(temperatureC-20)
	if !(factor > 0) || math.IsInf(factor, 1) {
		return 0, fmt.Errorf("conductor at %g °C, want more than %.1f °C, where the law for %s ends", temperatureC, 20-1/m.coefficient, m.name)
	}
	return at20 * factor, nil
}

// TemperatureCoefficient gives dR/dT of the conductor in Ω/K, the same at every temperature.
func (c Conductor) TemperatureCoefficient() (float64, error) {
	m, at20, err := c.at20()
	return at20 * m.coefficient, err
}

func (c Conductor) at20() (m material, resistance float64, err error) {
	i := slices.IndexFunc(materials, func(m material) bool { return m.name == c.Material })
	if i < 0 {
		return m, 0, fmt.Errorf("conductor of %q, want one of: %s", c.Material, strings.Join(Materials(), ", "))
	}
	if !(c.Area > 0) || math.IsInf(c.Area, 1) {
		return m, 0, fmt.Errorf("conductor's cross-section is %g m², want a finite value above 0 (wire gauges run from %d to %d)", c.Area, minGauge, maxGauge)
	}
	if !(c.Length >= 0) || math.IsInf(c.Length, 1) {
		return m, 0, fmt.Errorf("conductor's length is %g m, want a finite value of 0 or more", c.Length)
	}
	return materials[i], materials[i].resistivity * c.Length / c.Area, nil
}

const (
	minGauge = -3 // written 0000 or 4/0
	maxGauge = 40
)

// GaugeDiameter gives the diameter in m of a solid wire of American wire gauge n: 0.127 mm · 92^((36−n)/39) (ASTM B258). n runs from −3
// (written 0000) to 40 and need not be whole; outside of that the diameter is NaN.
func GaugeDiameter(n float64) float64 {
	if !(n >= minGauge && n <= maxGauge) {
		return math.NaN()
	}
	return 0.127e-3 * math.Pow(92, (36-n)/39)
}

// GaugeArea gives the cross-section in m² that belongs to [GaugeDiameter]; NaN where n is outside of −3 to 40.
func GaugeArea(n float64) float64 {
	d := GaugeDiameter(n)
	return math.Pi / 4 * d * d
}

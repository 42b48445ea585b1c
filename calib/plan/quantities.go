package plan

import (
	"fmt"
	"math"
	"regexp"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/quantity"
)

// unstated is no uncertainty and no history.
var unstated = Uncertainty{Shares: -1, Standard: -1}

// exactly is a value without uncertainty.
func exactly(x float64) Quantity { return Quantity{X: x, Uncertainty: unstated} }

// sign is what a quantity may be.
type sign int

const (
	anySign sign = iota
	notNegative
	positive
)

// written is a quantity as a string, with the uncertainty in parentheses where there is one.
func (d *decoder) written(n *node, k quantity.Kind, s sign) (v quantity.Value, ok bool) {
	if n.kind != unstable.String {
		d.unquoted(n, k)
		return v, false
	}
	v, err := quantity.Parse(n.text, k)
	switch {
	case k == quantity.Ratio && plainNumber.MatchString(n.text):
		// Whether "2" is 2 % or 200 % is not guessed.
		d.fault(n, "%q has no unit; a share is written like \"2 %%\" or \"25 ppm\"", n.text)
		return quantity.Value{}, false
	case err != nil:
		d.fault(n, "%v", err)
		return quantity.Value{}, false
	case s == notNegative && v.X < 0:
		d.fault(n, "%q is negative; %v is 0 or more here", n.text, k)
	case s == positive && v.X <= 0:
		d.fault(n, "%q is not above 0, as %v has to be here", n.text, k)
	default:
		return v, true
	}
	return quantity.Value{}, false
}

var plainNumber = regexp.MustCompile(`^[-+]?\d+(\.\d+)?([eE][-+]?\d+)?$`)

// unquoted reports what stands where a quantity in quotes is due, and how that is written.
func (d *decoder) unquoted(n *node, k quantity.Kind) {
	bare := n.kind != unstable.Table && n.kind != unstable.Array && plainNumber.MatchString(n.text)
	switch {
	case bare && k == quantity.Ratio:
		d.fault(n, "%s is a bare number; %v is written in quotes, like %q", n.text, k, k.Example())
	case bare && k == quantity.Angle:
		d.fault(n, "%s is a bare number; write it in quotes with its unit: %q", n.text, n.text+" deg")
	case bare:
		d.fault(n, "%s is a bare number; write it in quotes with its unit: %q", n.text, n.text+" "+k.Unit())
	default:
		d.fault(n, "%s where %v is due, like %q", n.what(), k, k.Example())
	}
}

// value is a quantity for which no uncertainty is used, so none may be written.
func (d *decoder) value(n *node, k quantity.Kind, s sign) (quantity.Value, bool) {
	v, ok := d.written(n, k, s)
	if ok && v.HasU {
		d.fault(n, "%q has an uncertainty, which is not used here; write the value alone", n.text)
		return v, false
	}
	return v, ok
}

// plain is the number of such a quantity; missing where the key is left out.
func (d *decoder) plain(n *node, k quantity.Kind, s sign, missing float64) float64 {
	if n == nil {
		return missing
	}
	v, ok := d.value(n, k, s)
	if !ok {
		return missing
	}
	return v.X
}

// quantity is a value with its uncertainty and history, as a string or as a table; missing, exactly, where the key is left out.
func (d *decoder) quantity(n *node, k quantity.Kind, s sign, missing float64) Quantity {
	if n == nil {
		return exactly(missing)
	}
	q, _, ok := d.stated(n, k, s)
	if !ok {
		q.X = missing
	}
	return q
}

// stated is quantity with the convention that a voltage was written in.
func (d *decoder) stated(n *node, k quantity.Kind, s sign) (q Quantity, c quantity.Convention, ok bool) {
	q = exactly(0)
	if n.kind != unstable.Table {
		v, ok := d.written(n, k, s)
		q.X, q.Absolute = v.X, v.U
		return q, v.Convention, ok
	}
	t := d.table(n)
	var v quantity.Value
	if valueNode := t.need("value", fmt.Sprintf("%q", k.Example())); valueNode != nil {
		v, ok = d.written(valueNode, k, s)
	}
	q = Quantity{X: v.X, Uncertainty: t.uncertainty(k)}
	if v.HasU {
		if q.Stated() {
			d.fault(t.get("value"), "the uncertainty stands in parentheses behind the value and beside it as well; keep one")
		}
		q.Relative, q.Absolute, q.Shape = 0, v.U, Normal
	}
	t.done()
	d.checkDOF(n, q.Uncertainty)
	if ok && k == quantity.Voltage {
		t.checkConvention(v.Convention)
	}
	return q, v.Convention, ok
}

// uncertainty reads u, U with k, or tolerance, and dof, shares and standard beside them. A Ratio's is taken as relative.
func (t *table) uncertainty(k quantity.Kind) Uncertainty {
	out, first := unstated, ""
	factor := t.number(t.get("k"), 2, "a coverage factor, like 2, above 0 and without quotes", above0)
	for _, way := range []struct {
		key   string
		scale float64
		shape Shape
	}{
		{"u", 1, Normal},
		{"U", 1 / factor, Normal},
		{"tolerance", 1 / math.Sqrt(3), Rectangular}, // GUM 4.3.7, equation (7): a²/3
	} {
		n := t.get(way.key)
		switch {
		case n == nil:
		case first != "":
			t.fault(n, "%s and %s both state the uncertainty; keep one", first, way.key)
		default:
			first = way.key
			spread := t.spread(n, k)
			out.Relative, out.Absolute, out.Shape = spread.Relative*way.scale, spread.Absolute*way.scale, way.shape
		}
	}
	if n := t.node.fields["k"]; n != nil && t.node.fields["U"] == nil {
		t.fault(n, "k without U: a coverage factor belongs to an expanded uncertainty U")
	}
	out.DOF = t.number(t.get("dof"), 0, "degrees of freedom, above 0 and without quotes", above0)
	out.Shares = t.refer(t.get("shares"), "[error.NAME]", t.bench.errors)
	out.Standard = t.refer(t.get("standard"), "[[standard]]", t.bench.standards)
	return out
}

// spread is what u, U and tolerance hold: a share of the value, a fixed part, or both.
func (t *table) spread(n *node, k quantity.Kind) quantity.Spread {
	if k == quantity.Ratio {
		return quantity.Spread{Relative: t.plain(n, k, notNegative, 0)}
	}
	if n.kind != unstable.String {
		t.unquoted(n, k)
		return quantity.Spread{}
	}
	spread, err := quantity.ParseSpread(n.text, k)
	switch {
	case err != nil:
		t.fault(n, "%v", err)
	case k == quantity.Temperature && spread.Relative != 0:
		t.fault(n, "%q is a share, of which a temperature in °C has none; write it like \"0.5 °C\"", n.text)
	default:
		return spread
	}
	return quantity.Spread{}
}

// checkConvention reports an uncertainty of a voltage that is written in another convention than the voltage.
func (t *table) checkConvention(c quantity.Convention) {
	for _, key := range []string{"u", "U", "tolerance"} {
		n := t.node.fields[key]
		if n == nil || n.kind != unstable.String {
			continue
		}
		for _, part := range strings.Split(n.text, "+") {
			v, err := quantity.Parse(part, quantity.Voltage)
			if err != nil || v.Convention == quantity.Unstated || v.Convention == c {
				continue
			}
			of := "in V alone"
			if c != quantity.Unstated {
				of = c.String()
			}
			t.fault(n, "%q is %v, its value is %s; write both alike", n.text, v.Convention, of)
		}
	}
}

// checkDOF reports degrees of freedom of nothing.
func (d *decoder) checkDOF(n *node, u Uncertainty) {
	if u.DOF != 0 && !u.Stated() {
		d.fault(n.fields["dof"], "degrees of freedom without an uncertainty that they belong to; add u, U or tolerance")
	}
}

// over is u, with what it leaves open filled in from v.
func (u Uncertainty) over(v Uncertainty) Uncertainty {
	if u.DOF == 0 && !(u.Stated() && v.Stated()) {
		u.DOF = v.DOF
	}
	if !u.Stated() {
		u.Relative, u.Absolute, u.Shape = v.Relative, v.Absolute, v.Shape
	}
	if u.Shares < 0 {
		u.Shares = v.Shares
	}
	if u.Standard < 0 {
		u.Standard = v.Standard
	}
	return u
}

func above0(x float64) bool { return x > 0 }

package study

import "railproof/netlist"

// Tolerances where nothing is said, each common practice.
const (
	resistorTolerance     = 0.05
	electrolyticTolerance = 0.20
	zenerTolerance        = 0.05
	// electrolyticFrom is the capacitance from which a capacitor is taken as an electrolytic, F.
	electrolyticFrom = 10e-6
)

// planTolerances lists the toleranced parameters of the supply.
func (p *Plan) planTolerances() {
	s := p.supply
	add := func(id netlist.ElementID, symbol netlist.Symbol, low, high float64, origin string) {
		if low == 0 && high == 0 {
			return
		}
		p.index[statedKey{id, symbol}] = len(p.Parameters)
		p.Parameters = append(p.Parameters, Parameter{id, symbol, low, high, origin})
	}
	for k := range s.Circuit.Elements {
		id, e := netlist.ElementID(k), &s.Circuit.Elements[k]
		low, high, origin := 0.0, 0.0, ""
		if t, ok := s.Property(id, "tolerance"); ok {
			low, high, origin = t.Low, t.High, t.Origin
			if low == high {
				low, high = -abs(low), abs(low)
			}
		}
		stated := origin != ""
		switch d := e.Device.(type) {
		case netlist.Resistor:
			if p.IsLoad(id) && !stated || d.Ohms == 0 {
				continue
			}
			if !stated {
				low, high, origin = -resistorTolerance, resistorTolerance, "common practice"
			}
			add(id, "R", low, high, origin)
		case netlist.Capacitor:
			if !stated && d.Farads >= electrolyticFrom {
				low, high, origin = -electrolyticTolerance, electrolyticTolerance, "common practice"
			}
			add(id, "C", low, high, origin)
		case netlist.Inductor:
			add(id, "L", low, high, origin)
		case netlist.Diode:
			vz, ok := s.zenerVoltage(id)
			if !ok {
				continue
			}
			if !stated {
				low, high, origin = -zenerTolerance, zenerTolerance, "common practice"
				vmin, okMin := s.Property(id, "VZmin")
				vmax, okMax := s.Property(id, "VZmax")
				if okMin && okMax {
					low, high, origin = vmin.Value()/vz-1, vmax.Value()/vz-1, vmin.Origin
				}
			}
			add(id, "VZ", low, high, origin)
		case netlist.Regulator:
			nominal, min, max := netlist.Symbol("VOUT"), netlist.Symbol("VOUTmin"), netlist.Symbol("VOUTmax")
			if d.Adjustable || d.Shunt {
				nominal, min, max = "VREF", "VREFmin", "VREFmax"
			}
			if !stated {
				v, ok := s.Property(id, nominal)
				vmin, okMin := s.Property(id, min)
				vmax, okMax := s.Property(id, max)
				if ok && okMin && okMax && v.Value() != 0 && !s.isStated(id, nominal) {
					low, high, origin = vmin.Value()/v.Value()-1, vmax.Value()/v.Value()-1, vmin.Origin
				}
			}
			add(id, "VOUT", low, high, origin)
		}
	}
}

func abs(x float64) float64 {
	if x < 0 {
		return -x
	}
	return x
}

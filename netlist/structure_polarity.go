package netlist

import "slices"

// PolarityFacts finds parts that stand the wrong way round by the graph alone: rectifier diodes that short a
// winding, polarised capacitors across a rail of the other sign or across a winding, zeners in forward
// direction, and regulators whose input is on a rail of the other polarity. d may be nil.
func (c *Circuit) PolarityFacts(d *Duty) []Fact {
	f := newRailFinder(c, d)
	var facts []Fact
	for i := range c.Elements {
		id := ElementID(i)
		e := &c.Elements[i]
		switch device := e.Device.(type) {
		case Diode:
			if c.IsZener(id) {
				facts = append(facts, f.forwardZener(id)...)
			} else {
				facts = append(facts, f.shortingDiode(id)...)
			}
		case Capacitor:
			if c.Polarised(id, d) {
				facts = append(facts, f.reversedCapacitor(id)...)
			}
		case Regulator:
			if device.Shunt {
				continue
			}
			want := int(device.Polarity)
			if f.signAt(e.Nodes[0], e.Nodes[2]) == -want {
				facts = append(facts, c.factAbout("polarity", id, e.Name+" is a "+polarityWord(want)+" regulator with its input on a "+
					polarityWord(-want)+" rail", "state the order of its nodes: part "+e.Name+" "+e.TypeName+" pins=..."))
			}
		}
	}
	return facts
}

func polarityWord(sign int) string {
	if sign < 0 {
		return "negative"
	}
	return "positive"
}

// signAt is the sign of the rail that a node hangs on, seen without passing another node; 0 if it hangs on
// none or on both.
func (f *railFinder) signAt(node, without NodeID) int {
	if node == Ground {
		return 0
	}
	up, down := f.onRail(node, without, Ground, +1), f.onRail(node, without, Ground, -1)
	switch {
	case up && !down:
		return +1
	case down && !up:
		return -1
	}
	return 0
}

// shortingDiode finds the second of two diodes that lead straight from one end of a winding to the other:
// every half cycle they short it. It is reported for the later diode.
func (f *railFinder) shortingDiode(id ElementID) []Fact {
	e := &f.c.Elements[id]
	anode, cathode := e.Nodes[0], e.Nodes[1]
	for _, way := range []struct {
		winding, middle NodeID
		pin             int // of the other diode, at the middle
	}{{anode, cathode, 0}, {cathode, anode, 1}} {
		if f.cluster[way.winding] == none || way.middle != Ground && f.cluster[way.middle] != none {
			continue
		}
		for _, other := range f.c.Touching(way.middle) {
			o := &f.c.Elements[other]
			if _, ok := o.Device.(Diode); !ok || other >= id || o.Nodes[way.pin] != way.middle || f.c.IsZener(other) {
				continue
			}
			end := o.Nodes[1-way.pin]
			if f.cluster[end] == none || f.cluster[end] == f.cluster[way.winding] || end == Ground || way.winding == Ground {
				continue
			}
			if port := f.portAcross([]NodeID{way.winding, end}); port >= 0 || f.tap(f.cluster[way.winding], f.cluster[end]) != none {
				return []Fact{f.c.factAbout("polarity", id, o.Name+" and "+e.Name+" lead straight through node "+f.c.Nodes[way.middle].Name+
					" from one end of a winding to the other and short it every cycle", "turn "+e.Name+" or "+o.Name+" round")}
			}
		}
	}
	return nil
}

// reversedCapacitor finds a polarised capacitor across a rail of the other sign, or across a winding.
func (f *railFinder) reversedCapacitor(id ElementID) []Fact {
	e := &f.c.Elements[id]
	plus, minus := e.Nodes[0], e.Nodes[1]
	if plus == minus {
		return nil
	}
	assumed := ""
	if fields, _ := f.c.FieldRatings(id); !slices.ContainsFunc(fields, func(r Rating) bool { return r.Symbol == "polarised" }) {
		assumed = " (taken as polarised, node 1 plus)"
	}
	remedy := "turn " + e.Name + " round, or state rate " + e.Name + " polarised=no"
	if f.portAcross(e.Nodes) >= 0 {
		return []Fact{f.c.factAbout("polarity", id, e.Name+assumed+" stands across an alternating voltage", "rate "+e.Name+" polarised=no if it is a bipolar type")}
	}
	up, down := f.signAt(plus, minus), f.signAt(minus, plus)
	if (up < 0 || plus == Ground || up == 0) && down > 0 && f.quiet(plus) || up < 0 && f.quiet(minus) {
		return []Fact{f.c.factAbout("polarity", id, e.Name+assumed+" has its plus on "+f.c.Nodes[plus].Name+" and its minus on "+
			f.c.Nodes[minus].Name+", a reverse voltage", remedy)}
	}
	return nil
}

// quiet reports whether a node is ground, or hangs on a rail: neither a winding nor of unknown potential.
func (f *railFinder) quiet(n NodeID) bool {
	return n == Ground || f.cluster[n] == none && (f.signAt(n, Ground) != 0)
}

// forwardZener finds a zener that conducts forward across a rail.
func (f *railFinder) forwardZener(id ElementID) []Fact {
	e := &f.c.Elements[id]
	anode, cathode := e.Nodes[0], e.Nodes[1]
	forward := cathode == Ground && len(f.feeders(anode, cathode, +1)) > 0 && len(f.feeders(anode, cathode, -1)) == 0 ||
		anode == Ground && len(f.feeders(cathode, anode, -1)) > 0 && len(f.feeders(cathode, anode, +1)) == 0
	if !forward {
		return nil
	}
	return []Fact{f.c.factAbout("polarity", id, "zener "+e.Name+" stands in forward direction across the rail", "turn "+e.Name+" round")}
}

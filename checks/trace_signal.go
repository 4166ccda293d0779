package checks

import (
	"fmt"
	"strings"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/syntax"
)

// nodePrefix tells a node from an element of the same name.
const nodePrefix = "node:"

// readSignals turns arguments into signals, each once, in their order.
func readSignals(r *Result, arguments []string) ([]study.Signal, error) {
	var list []study.Signal
	for _, a := range arguments {
		found, err := readSignal(r.Circuit, a)
		if err != nil {
			return nil, err
		}
		list = appendNew(list, found)
	}
	return list, nil
}

func appendNew(list, more []study.Signal) []study.Signal {
next:
	for _, s := range more {
		for _, old := range list {
			if old == s {
				continue next
			}
		}
		list = append(list, s)
	}
	return list
}

// readSignal reads one argument. What stands in the netlist as written goes before a kind behind a colon.
func readSignal(c *netlist.Circuit, text string) ([]study.Signal, error) {
	if name, ok := strings.CutPrefix(text, nodePrefix); ok {
		if id, ok := c.FindNode(name); ok {
			return nodeSignal(id, text)
		}
	}
	element, isElement := c.Find(text)
	node, isNode := c.FindNode(text)
	switch {
	case isElement && isNode:
		return nil, fmt.Errorf("%s is the name of a node and of an element; expected %s%s, %s:%s or %s:%s", text, nodePrefix, text, text, study.VoltageSignal, text, study.CurrentSignal)
	case isNode:
		return nodeSignal(node, text)
	case isElement:
		return elementSignals(c, element)
	}
	if colon := strings.LastIndexByte(text, ':'); colon >= 0 {
		name, kind := text[:colon], study.SignalKind(text[colon+1:])
		if id, ok := c.Find(name); ok {
			if kind != study.VoltageSignal && kind != study.CurrentSignal {
				return nil, fmt.Errorf("%q; expected %s:%s or %s:%s", text, name, study.VoltageSignal, name, study.CurrentSignal)
			}
			both, err := elementSignals(c, id)
			if err != nil {
				return nil, err
			}
			if kind == study.CurrentSignal {
				return both[1:], nil
			}
			return both[:1], nil
		}
		if id, ok := c.FindNode(name); ok && kind == study.VoltageSignal {
			return nodeSignal(id, name)
		}
		if kind == study.VoltageSignal || kind == study.CurrentSignal {
			text = name
		}
	}
	return nil, unknownName(c, text)
}

func nodeSignal(id netlist.NodeID, text string) ([]study.Signal, error) {
	if id == netlist.Ground {
		return nil, fmt.Errorf("%s is the ground that voltages count from; expected another node", text)
	}
	return []study.Signal{{IsNode: true, Node: id, Kind: study.VoltageSignal}}, nil
}

func elementSignals(c *netlist.Circuit, id netlist.ElementID) ([]study.Signal, error) {
	if _, ok := c.Elements[id].Device.(netlist.Coupling); ok {
		return nil, fmt.Errorf("%s couples inductors and has neither voltage nor current; expected one of the inductors", c.Elements[id].Name)
	}
	return []study.Signal{{Element: id, Kind: study.VoltageSignal}, {Element: id, Kind: study.CurrentSignal}}, nil
}

// signalsOf is what shows the stress of an element or "node:NAME".
func signalsOf(c *netlist.Circuit, name string) []study.Signal {
	list, err := readSignal(c, name)
	if id, ok := c.Find(name); ok && err != nil { // a node has the same name
		list, _ = elementSignals(c, id)
	}
	return list
}

// unknownName is the error about a name that neither a node nor an element has.
func unknownName(c *netlist.Circuit, text string) error {
	var names []string
	for k := range c.Elements {
		names = append(names, c.Elements[k].Name)
	}
	for k := 1; k < len(c.Nodes); k++ {
		names = append(names, c.Nodes[k].Name)
	}
	word := strings.TrimPrefix(text, nodePrefix)
	if near, ok := syntax.Nearest(word, names); ok {
		return fmt.Errorf("no node or element %q; did you mean %s?", word, near)
	}
	return fmt.Errorf("no node or element %q; expected a name that stands in the netlist", word)
}

// fewNodes is up to how many nodes a netlist without rails may have for all of them to be traced.
const fewNodes = 8

// railSignals are the voltages that a person would look at first: along each rail what the reservoirs, filters and
// regulators deliver, then the nodes of the duty sheet's rails; where there is neither, every node of a small netlist.
func railSignals(c *netlist.Circuit, d *netlist.Duty) []study.Signal {
	var list []study.Signal
	add := func(id netlist.NodeID) {
		if id > netlist.Ground {
			list = appendNew(list, []study.Signal{{IsNode: true, Node: id, Kind: study.VoltageSignal}})
		}
	}
	for _, rail := range c.RailMap(d) {
		for _, s := range rail.Stages {
			switch s.Role {
			case netlist.StageReservoir, netlist.StageFilter, netlist.StageRegulator:
				add(s.Node)
			}
		}
		add(rail.Output)
	}
	for _, r := range d.Rails {
		add(r.Node)
	}
	if len(list) == 0 && len(c.Nodes)-1 <= fewNodes {
		for k := 1; k < len(c.Nodes); k++ {
			add(netlist.NodeID(k))
		}
	}
	return list
}

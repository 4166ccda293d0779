package checks

import "railproof/netlist"

// structureCheck is a check on the graph alone: it passes on the facts that the netlist shows before anything
// is solved.
func structureCheck(severity Severity, facts func(p *Pass) []netlist.Fact, c Check) *Check {
	c.Stress, c.Rating, c.Worst, c.Formula = "none", "none", "none", "none"
	c.run = func(p *Pass) {
		for _, fact := range facts(p) {
			remedy := fact.Remedy
			if remedy == "" {
				remedy = p.check.Remedy
			}
			p.add(Finding{Element: fact.Element, At: fact.At, Verdict: Violated, Severity: severity, Reason: fact.Text, Remedy: remedy})
		}
	}
	return &c
}

var polarity = structureCheck(Critical, func(p *Pass) []netlist.Fact { return p.Circuit().PolarityFacts(p.Supply.Duty) }, Check{
	Name: "polarity", Title: "part the wrong way round",
	Applies:      "rectifier diodes, zeners, polarised capacitors and regulators",
	Assumptions:  "read from the rails that the graph shows; the solved voltages are judged by the other checks",
	SeverityRule: "critical: a hazard",
	Source:       "common practice of schematic review",
	Remedy:       "turn the part round, or state the order of its nodes with pins=",
})

var floatingNode = structureCheck(Minor, func(p *Pass) []netlist.Fact { return p.Circuit().FloatingNodes() }, Check{
	Name: "floating-node", Title: "part of the circuit without ground",
	Applies:      "parts of the circuit that nothing ties to ground",
	Assumptions:  "voltages between its nodes hold; those to ground are arbitrary",
	SeverityRule: "minor",
	Source:       "nodal analysis: a part without reference has no potential",
	Remedy:       "connect its return to node 0",
})

var noDCPath = structureCheck(Major, func(p *Pass) []netlist.Fact { return p.Circuit().NodesWithoutDCPath() }, Check{
	Name: "no-dc-path", Title: "node without a direct-current path",
	Applies:      "nodes that only capacitors, current sources and control pins tie to ground",
	Assumptions:  "in reality leakage decides the voltage there: how capacitors in series share it is undefined",
	SeverityRule: "major",
	Source:       "nodal analysis: no direct voltage is defined there",
	Remedy:       "a resistor from there to ground, as leakage or bleeder",
})

var shortedElement = structureCheck(Major, func(p *Pass) []netlist.Fact { return p.Circuit().ShortedElements() }, Check{
	Name: "shorted-element", Title: "element with both ends on one node",
	Applies:      "elements whose main terminals lie on one node",
	Assumptions:  "none",
	SeverityRule: "major: it does nothing, and was hardly meant so",
	Source:       "common practice of schematic review",
	Remedy:       "check its nodes",
})

var sourceLoop = structureCheck(Critical, func(p *Pass) []netlist.Fact { return p.Circuit().SourceLoops() }, Check{
	Name: "source-loop", Title: "loop of ideal voltage sources",
	Applies:      "ideal voltage sources",
	Assumptions:  "none",
	SeverityRule: "critical: its current is without bound or undefined",
	Source:       "Kirchhoff's voltage law",
	Remedy:       "a resistance in series with one of them",
})

var unconnectedTerminal = structureCheck(Minor, func(p *Pass) []netlist.Fact { return p.Circuit().UnconnectedTerminals() }, Check{
	Name: "unconnected-terminal", Title: "terminal that meets nothing",
	Applies:      "terminals that are alone on their node; nodes named ? or NC_1 are meant so",
	Assumptions:  "none",
	SeverityRule: "minor",
	Source:       "common practice of schematic review",
	Remedy:       "check the spelling of the node, or name it NC_1 if it is meant so",
})

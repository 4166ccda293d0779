package report

// Cautions stand in every report that is read by people.
var Cautions = []string{
	"Mains voltage and charged capacitors can kill. Disconnect, discharge and measure before touching; a reservoir " +
		"keeps its charge long after the line is off.",
	"This report is an aid to design and review, not an approval. It judges the netlist and the duty sheet that it was given, by " +
		"models with limits; parts, layout, insulation, creepage and cooling of the built supply are outside it.",
	"Local codes and the applicable safety standard go before anything stated here. Leave work on mains circuits, and " +
		"the release of them, to licensed practice.",
}

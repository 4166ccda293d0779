package checks

// catalogue lists every check in the order of the documentation. A new check is one value in the file of its
// part family and one line here.
var catalogue = []*Check{
	diodeReverseVoltage, diodeAverageCurrent, diodeRepetitivePeakCurrent, diodeSurgeCurrent, diodeJunctionTemperature,
	capacitorVoltage, capacitorReverseVoltage, capacitorRippleCurrent, capacitorEndurance, storedCharge,
	zenerResistorPower, zenerPower, zenerRegulation,
	regulatorHeadroom, regulatorInputVoltage, regulatorJunctionTemperature, regulatorCurrent, regulatorMinimumLoad,
	regulatorCapacitors, regulatorBackflow,
	resistorPower, resistorVoltage,
	transistorVoltage, transistorCurrent, transistorJunctionTemperature, transistorSafeArea,
	windingCurrent, chokeInductance, fuseCurrent, fuseSurge, limiterCurrent,
	railVoltage, railRipple, outputShort,
	sourceUnknown, peakOrRMS, unsolved,
	polarity, floatingNode, noDCPath, shortedElement, sourceLoop, unconnectedTerminal,
	valueSuffix, duplicateName, libraryNotRead, afterEnd, modelNote,
}

// Catalogue returns every check, in a fixed order.
func Catalogue() []*Check { return append([]*Check(nil), catalogue...) }

// Named returns the check of a name.
func Named(name string) (*Check, bool) {
	for _, c := range catalogue {
		if c.Name == name {
			return c, true
		}
	}
	return nil, false
}

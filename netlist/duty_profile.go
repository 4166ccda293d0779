package netlist

// StoredChargeProfiles are the profiles a duty sheet can name. They bound the voltage left on a capacitor
// a given time after the line is disconnected. The applicable safety standard decides; these are the
// figures of the clauses named, each as quoted by a second source unless it says otherwise.
var StoredChargeProfiles = []Profile{
	{Name: "accessible-terminals", Voltage: 60, Within: 2, Source: "IEC 62368-1: measured 2 s after disconnection (5.5.2.2, second source); 60 V dc for class ES1 (Table 4, from memory)"},
	{Name: "laboratory", Voltage: 60, Within: 5, Source: "common practice with IEC 61010-1 6.10.3: below 60 V 5 s after disconnection (second source)"},
	{Name: "laboratory-internal", Voltage: 60, Within: 10, Source: "IEC 61010-1 6.1.2: 10 s after interrupting the supply, or a warning mark; 60 V dc of 6.3.1 (from memory)"},
	{Name: "plug-pins", Voltage: 34, Within: 1, Source: "IEC 60335-1 22.5: 34 V peak 1 s after unplugging (second source)"},
	{Name: "rapid", Voltage: 30, Within: 2, Source: "MIL-HDBK-454 guideline 1: 30 V within 2 s (from memory)"},
}

func profileNames() []string {
	var names []string
	for _, p := range StoredChargeProfiles {
		names = append(names, p.Name)
	}
	return names
}

package netlist

import "railproof/netlist/quantity"

// Sets of kinds used below.
const (
	kindSemiconductor = KindDiode | KindRegulator | KindShunt | KindTransistor | KindFet
	kindDissipating   = KindZener | KindRegulator | KindShunt | KindTransistor | KindFet
)

// meanings is the table of rating symbols: the trade's letter symbols (IEC 60747 and JEDEC for
// semiconductors, IEC 60384 for capacitors, IEC 60115 for resistors, IEC 60127 for fuses) and a few of
// our own where the trade has none.
var meanings = []Meaning{
	// Diodes.
	{Symbol: "VRRM", Unit: quantity.Volt, Kinds: KindRectifier, Description: "repetitive peak reverse voltage"},
	{Symbol: "VRSM", Unit: quantity.Volt, Kinds: KindRectifier, Description: "non-repetitive peak reverse voltage"},
	{Symbol: "IFAV", Unit: quantity.Ampere, Kinds: KindRectifier, Description: "mean forward current"},
	{Symbol: "TIFAV", Unit: quantity.Celsius, Kinds: KindRectifier, Description: "ambient temperature up to which IFAV holds"},
	{Symbol: "IFAVcap", Unit: quantity.One, Kinds: KindRectifier, Description: "factor on IFAV for a capacitive load"},
	{Symbol: "IFRM", Unit: quantity.Ampere, Kinds: KindRectifier, Description: "repetitive peak forward current"},
	{Symbol: "IFSM", Unit: quantity.Ampere, Kinds: KindRectifier, Description: "surge: crest of one half sine"},
	{Symbol: "tIFSM", Unit: quantity.Second, Kinds: KindRectifier, Description: "length of the half sine of IFSM"},
	{Symbol: "I2t", Unit: quantity.AmpereSquaredSecond, Kinds: KindRectifier, Description: "surge integral for less than half a cycle"},
	{Symbol: "VF", Unit: quantity.Volt, Kinds: KindDiode, Description: "highest forward voltage, at IVF"},
	{Symbol: "IVF", Unit: quantity.Ampere, Kinds: KindDiode, Description: "forward current at which VF holds"},
	{Symbol: "IR", Unit: quantity.Ampere, Kinds: KindDiode, Description: "reverse current"},
	{Symbol: "trr", Unit: quantity.Second, Kinds: KindRectifier, Description: "reverse recovery time"},

	// Zeners.
	{Symbol: "VZ", Unit: quantity.Volt, Kinds: KindZener, Range: true, Description: "zener voltage at IZT"},
	{Symbol: "IZT", Unit: quantity.Ampere, Kinds: KindZener, Description: "test current of VZ"},
	{Symbol: "ZZT", Unit: quantity.Ohm, Kinds: KindZener, Description: "dynamic impedance at IZT"},
	{Symbol: "IZK", Unit: quantity.Ampere, Kinds: KindZener, Description: "knee current: regulation is lost below it"},
	{Symbol: "ZZK", Unit: quantity.Ohm, Kinds: KindZener, Description: "dynamic impedance at IZK"},
	{Symbol: "IZM", Unit: quantity.Ampere, Kinds: KindZener, Description: "highest continuous zener current"},
	{Symbol: "TC", Unit: quantity.One, Kinds: KindZener, Description: "temperature coefficient of VZ, relative per kelvin"},

	// Heat.
	{Symbol: "PD", Unit: quantity.Watt, Kinds: kindDissipating, Description: "dissipation up to TPD"},
	{Symbol: "TPD", Unit: quantity.Celsius, Kinds: kindDissipating, Description: "temperature up to which PD holds"},
	{Symbol: "kPD", Unit: quantity.WattPerKelvin, Kinds: kindDissipating, Description: "fall of PD above TPD"},
	{Symbol: "Tj", Unit: quantity.Celsius, Kinds: kindSemiconductor, Description: "highest junction temperature"},
	{Symbol: "RthJA", Unit: quantity.KelvinPerWatt, Kinds: kindSemiconductor, Description: "thermal resistance, junction to ambient, without a sink"},
	{Symbol: "RthJL", Unit: quantity.KelvinPerWatt, Kinds: KindDiode, Description: "thermal resistance, junction to lead"},
	{Symbol: "RthJC", Unit: quantity.KelvinPerWatt, Kinds: kindSemiconductor, Description: "thermal resistance, junction to case"},
	{Symbol: "RthCS", Unit: quantity.KelvinPerWatt, Kinds: kindSemiconductor, Description: "thermal resistance, case to sink"},

	// Capacitors.
	{Symbol: "UR", Unit: quantity.Volt, Kinds: KindCapacitor, Description: "rated voltage, dc"},
	{Symbol: "UAC", Unit: quantity.Volt, Kinds: KindCapacitor, Description: "rated alternating voltage, rms"},
	{Symbol: "US", Unit: quantity.Volt, Kinds: KindCapacitor, Description: "surge voltage"},
	{Symbol: "IR", Unit: quantity.Ampere, Kinds: KindCapacitor, Description: "rated ripple current, rms"},
	{Symbol: "fIR", Unit: quantity.Hertz, Kinds: KindCapacitor, Description: "frequency at which IR holds"},
	{Symbol: "ESR", Unit: quantity.Ohm, Kinds: KindCapacitor, Range: true, Description: "equivalent series resistance"},
	{Symbol: "category", Unit: quantity.Celsius, Kinds: KindCapacitor | KindResistor, Description: "upper category temperature"},
	{Symbol: "endurance", Unit: quantity.Hour, Kinds: KindCapacitor, Description: "endurance at the category temperature and IR"},
	{Symbol: "tolerance", Unit: quantity.One, Kinds: KindCapacitor | KindResistor | KindInductor | KindZener | KindRegulator | KindShunt,
		Range: true, Description: "tolerance of the value; of a zener or regulator, of its voltage"},
	{Symbol: "polarised", Kinds: KindCapacitor, Words: []string{"yes", "no"}, Description: "whether node 1 must stay positive"},
	{Symbol: "class", Kinds: KindCapacitor, Words: []string{"X1", "X2", "X3", "Y1", "Y2", "Y3", "Y4"}, Description: "interference suppression class (IEC 60384-14)"},
	{Symbol: "technology", Kinds: KindCapacitor, Words: []string{"electrolytic", "tantalum", "film", "ceramic"}, Description: "what the capacitor is made of"},

	// Resistors, and what they stand for.
	{Symbol: "P70", Unit: quantity.Watt, Kinds: KindResistor, Description: "rated dissipation at 70 degC ambient"},
	{Symbol: "Umax", Unit: quantity.Volt, Kinds: KindResistor, Description: "limiting element voltage"},
	{Symbol: "IN", Unit: quantity.Ampere, Kinds: KindResistor, Description: "rated current of the fuse it stands for"},
	{Symbol: "I2t", Unit: quantity.AmpereSquaredSecond, Kinds: KindResistor, Description: "pre-arcing (melting) integral of the fuse"},
	{Symbol: "family", Kinds: KindResistor, FreeWord: true, Description: "family of the fuse: speed and voltage, such as T-250V"},
	{Symbol: "UN", Unit: quantity.Volt, Kinds: KindResistor, Description: "rated voltage of the fuse"},
	{Symbol: "IBC", Unit: quantity.Ampere, Kinds: KindResistor, Description: "breaking capacity of the fuse"},
	{Symbol: "Rcold", Unit: quantity.Ohm, Kinds: KindResistor, Description: "cold resistance of the inrush limiter it stands for"},
	{Symbol: "Rhot", Unit: quantity.Ohm, Kinds: KindResistor, Description: "hot resistance of the inrush limiter at its rated current"},
	{Symbol: "Imax", Unit: quantity.Ampere, Kinds: KindResistor, Description: "highest steady current of the inrush limiter, rms"},

	// Windings and chokes.
	{Symbol: "Irms", Unit: quantity.Ampere, Kinds: KindInductor | KindSource, Description: "rated current, rms"},
	{Symbol: "Isat", Unit: quantity.Ampere, Kinds: KindInductor, Description: "current at which the core saturates, peak"},
	{Symbol: "Rcu", Unit: quantity.Ohm, Kinds: KindInductor, Description: "winding resistance at 20 degC, in addition to what is drawn"},
	{Symbol: "Iinrush", Unit: quantity.Ampere, Kinds: KindInductor | KindSource, Description: "magnetising inrush, peak"},

	// Regulators. Voltages of negative types are magnitudes.
	{Symbol: "VOUT", Unit: quantity.Volt, Kinds: KindRegulator, Range: true, Description: "output voltage (magnitude); a range states its tolerance"},
	{Symbol: "VREF", Unit: quantity.Volt, Kinds: KindRegulator | KindShunt, Range: true, Description: "reference voltage"},
	{Symbol: "IADJ", Unit: quantity.Ampere, Kinds: KindRegulator | KindShunt, Description: "current of the adjust or reference pin"},
	{Symbol: "VDO", Unit: quantity.Volt, Kinds: KindRegulator, Description: "highest drop-out voltage at IO"},
	{Symbol: "VI", Unit: quantity.Volt, Kinds: KindRegulator, Description: "highest input voltage (magnitude)"},
	{Symbol: "VIO", Unit: quantity.Volt, Kinds: KindRegulator, Description: "highest input-to-output difference"},
	{Symbol: "VOI", Unit: quantity.Volt, Kinds: KindRegulator, Description: "highest output-over-input (reverse) voltage"},
	{Symbol: "IO", Unit: quantity.Ampere, Kinds: KindRegulator, Description: "highest output current"},
	{Symbol: "Ilim", Unit: quantity.Ampere, Kinds: KindRegulator, Range: true, Description: "current limit into a shorted output"},
	{Symbol: "IOmin", Unit: quantity.Ampere, Kinds: KindRegulator, Description: "lowest load current at which it regulates"},
	{Symbol: "IQ", Unit: quantity.Ampere, Kinds: KindRegulator, Description: "quiescent current"},
	{Symbol: "Rout", Unit: quantity.Ohm, Kinds: KindRegulator, Description: "output resistance"},
	{Symbol: "PSRRmin", Unit: quantity.One, Kinds: KindRegulator, Description: "least ripple rejection, input over output: 1000 for 60 dB"},
	{Symbol: "CIN", Unit: quantity.Farad, Kinds: KindRegulator, Description: "input capacitance asked for"},
	{Symbol: "COUT", Unit: quantity.Farad, Kinds: KindRegulator, Range: true, Description: "output capacitance asked for"},
	{Symbol: "ESRmin", Unit: quantity.Ohm, Kinds: KindRegulator, Description: "least series resistance of the output capacitor"},
	{Symbol: "ESRmax", Unit: quantity.Ohm, Kinds: KindRegulator, Description: "most series resistance of the output capacitor"},
	{Symbol: "VKA", Unit: quantity.Volt, Kinds: KindShunt, Description: "highest cathode voltage"},
	{Symbol: "IKA", Unit: quantity.Ampere, Kinds: KindShunt, Description: "highest cathode current"},
	{Symbol: "IKAmin", Unit: quantity.Ampere, Kinds: KindShunt, Description: "cathode current from which it regulates"},

	// Transistors.
	{Symbol: "VCEO", Unit: quantity.Volt, Kinds: KindTransistor, Description: "collector-emitter voltage, base open"},
	{Symbol: "VCBO", Unit: quantity.Volt, Kinds: KindTransistor, Description: "collector-base voltage, emitter open"},
	{Symbol: "VEBO", Unit: quantity.Volt, Kinds: KindTransistor, Description: "emitter-base voltage, collector open"},
	{Symbol: "IC", Unit: quantity.Ampere, Kinds: KindTransistor, Description: "collector current"},
	{Symbol: "VDS", Unit: quantity.Volt, Kinds: KindFet, Description: "drain-source voltage"},
	{Symbol: "VGS", Unit: quantity.Volt, Kinds: KindFet, Description: "gate-source voltage"},
	{Symbol: "ID", Unit: quantity.Ampere, Kinds: KindFet, Description: "drain current"},
}

// symbolAliases are other names of the trade for the same ratings.
var symbolAliases = []struct {
	spelling string
	symbol   Symbol
}{
	{"PIV", "VRRM"}, {"PRV", "VRRM"}, {"IF(AV)", "IFAV"}, {"I(AV)", "IFAV"}, {"I²t", "I2t"},
	{"Ptot", "PD"}, {"TJmax", "Tj"}, {"polarized", "polarised"}, {"tol", "tolerance"},
}

package parts

import (
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// The rating symbols of the tables: the trade's letter symbols, and a few of our own where the
// trade has none. A symbol is also the name of its column.
const (
	// Diodes (JEDEC and IEC 60747-2 letter symbols).
	VRRM    netlist.Symbol = "VRRM"    // repetitive peak reverse voltage
	VRSM    netlist.Symbol = "VRSM"    // non-repetitive peak reverse voltage
	IFAV    netlist.Symbol = "IFAV"    // mean forward current; of a bridge: mean output current
	TIFAV   netlist.Symbol = "TIFAV"   // temperature up to which IFAV holds; the condition says of what
	IFAVcap netlist.Symbol = "IFAVcap" // factor on IFAV for a capacitive load
	IFRM    netlist.Symbol = "IFRM"    // repetitive peak forward current
	IFSM    netlist.Symbol = "IFSM"    // surge: crest of one half sine
	TIFSM   netlist.Symbol = "tIFSM"   // length of that half sine
	I2t     netlist.Symbol = "I2t"     // surge integral
	VF      netlist.Symbol = "VF"      // maximum forward voltage at IVF; of a bridge: of one element
	IVF     netlist.Symbol = "IVF"
	VF2     netlist.Symbol = "VF2" // a second point of the same limit
	IVF2    netlist.Symbol = "IVF2"
	IR      netlist.Symbol = "IR"    // reverse current at 25 degC; of a zener: at VR
	IRhot   netlist.Symbol = "IRhot" // reverse current at TjIR
	TjIR    netlist.Symbol = "TjIR"
	Trr     netlist.Symbol = "trr" // reverse recovery time
	CJ      netlist.Symbol = "CJ"  // junction capacitance at VCJ
	VCJ     netlist.Symbol = "VCJ"

	// Heat.
	Tj    netlist.Symbol = "Tj"    // highest junction temperature in operation
	TjAbs netlist.Symbol = "TjAbs" // absolute maximum junction temperature, where it is another
	RthJA netlist.Symbol = "RthJA" // junction to ambient
	RthJL netlist.Symbol = "RthJL" // junction to lead or terminal
	RthJC netlist.Symbol = "RthJC" // junction to case
	RthCS netlist.Symbol = "RthCS" // case to sink

	// Zeners.
	VZ    netlist.Symbol = "VZ" // nominal at IZT
	VZmin netlist.Symbol = "VZmin"
	VZmax netlist.Symbol = "VZmax"
	IZT   netlist.Symbol = "IZT"  // test current
	ZZT   netlist.Symbol = "ZZT"  // highest dynamic impedance at IZT
	IZK   netlist.Symbol = "IZK"  // knee test current
	ZZK   netlist.Symbol = "ZZK"  // highest dynamic impedance at IZK
	IZM   netlist.Symbol = "IZM"  // highest continuous current
	IZSM  netlist.Symbol = "IZSM" // highest surge current, 8.3 ms
	VR    netlist.Symbol = "VR"   // test voltage of IR
	TC    netlist.Symbol = "TC"   // temperature coefficient of VZ
	PD    netlist.Symbol = "PD"   // power up to TPD
	TPD   netlist.Symbol = "TPD"  // temperature up to which PD holds; the condition says of what
	KPD   netlist.Symbol = "kPD"  // fall of PD above TPD

	// Regulators. Voltages of negative types are magnitudes.
	VOUT    netlist.Symbol = "VOUT"
	VOUTmin netlist.Symbol = "VOUTmin"
	VOUTmax netlist.Symbol = "VOUTmax"
	VREF    netlist.Symbol = "VREF" // output to adjust; of a shunt reference: reference to anode
	VREFmin netlist.Symbol = "VREFmin"
	VREFmax netlist.Symbol = "VREFmax"
	IADJ    netlist.Symbol = "IADJ"   // highest adjust or reference pin current
	VDO     netlist.Symbol = "VDO"    // highest drop-out voltage, at IVDO
	VDOtyp  netlist.Symbol = "VDOtyp" // typical drop-out voltage, at IVDO
	IVDO    netlist.Symbol = "IVDO"
	VI      netlist.Symbol = "VI"    // highest input voltage
	VIO     netlist.Symbol = "VIO"   // highest input-to-output difference
	VImin   netlist.Symbol = "VImin" // input voltage from which regulation is guaranteed
	IO      netlist.Symbol = "IO"    // output current
	Ilim    netlist.Symbol = "Ilim"  // current into a shorted output
	Rout    netlist.Symbol = "Rout"  // output resistance
	IOmin   netlist.Symbol = "IOmin" // lowest load current
	IQ      netlist.Symbol = "IQ"    // highest quiescent current
	IQtyp   netlist.Symbol = "IQtyp"
	CIN     netlist.Symbol = "CIN"    // input capacitor asked for
	COUT    netlist.Symbol = "COUT"   // smallest output capacitor
	ESRmin  netlist.Symbol = "ESRmin" // window of its series resistance
	ESRmax  netlist.Symbol = "ESRmax"
	PSRR    netlist.Symbol = "PSRR"    // typical ripple rejection at 120 Hz, as a ratio; dB in the file
	PSRRmin netlist.Symbol = "PSRRmin" // least ripple rejection at 120 Hz, as a ratio; dB in the file
	VOI     netlist.Symbol = "VOI"     // highest voltage of the output above the input
	VKA     netlist.Symbol = "VKA"     // highest cathode voltage of a shunt reference
	IKA     netlist.Symbol = "IKA"     // highest cathode current
	IKAmin  netlist.Symbol = "IKAmin"  // cathode current from which it regulates
	ZKA     netlist.Symbol = "ZKA"     // highest dynamic impedance

	// Transistors. Ratings of PNP types are magnitudes. No field-effect transistor is built in.
	VCEO   netlist.Symbol = "VCEO"
	VCBO   netlist.Symbol = "VCBO"
	VEBO   netlist.Symbol = "VEBO"
	IC     netlist.Symbol = "IC"  // continuous collector current
	ICM    netlist.Symbol = "ICM" // peak collector current
	HFEmin netlist.Symbol = "hFEmin"
	HFE    netlist.Symbol = "hFE" // typical static current gain; of a Darlington the product
	HFEmax netlist.Symbol = "hFEmax"
	VDS    netlist.Symbol = "VDS"
	VGS    netlist.Symbol = "VGS"
	ID     netlist.Symbol = "ID"
)

// column is one word of the tables' vocabulary.
type column struct {
	symbol  netlist.Symbol
	unit    quantity.Unit
	low     float64        // smallest value that is not a slip
	high    float64        // largest value that is not a slip
	at      netlist.Symbol // the column that states at which current, time or voltage this holds
	decibel bool           // written in dB, kept as a ratio
}

// vocabulary fixes the order of values in a row and what may stand in a column. The bounds are not
// physics: they catch milli for mega and volts for millivolts.
var vocabulary = []column{
	{symbol: VRRM, unit: quantity.Volt, low: 10, high: 2000},
	{symbol: VRSM, unit: quantity.Volt, low: 10, high: 2500},
	{symbol: IFAV, unit: quantity.Ampere, low: 0.01, high: 200},
	{symbol: TIFAV, unit: quantity.Celsius, low: 0, high: 175},
	{symbol: IFAVcap, unit: quantity.One, low: 0.3, high: 1},
	{symbol: IFRM, unit: quantity.Ampere, low: 0.01, high: 2000},
	{symbol: IFSM, unit: quantity.Ampere, low: 0.1, high: 4000, at: TIFSM},
	{symbol: TIFSM, unit: quantity.Second, low: 1e-6, high: 0.02},
	{symbol: I2t, unit: quantity.AmpereSquaredSecond, low: 1e-4, high: 1e5},
	{symbol: VF, unit: quantity.Volt, low: 0.2, high: 3, at: IVF},
	{symbol: IVF, unit: quantity.Ampere, low: 1e-3, high: 200},
	{symbol: VF2, unit: quantity.Volt, low: 0.2, high: 3, at: IVF2},
	{symbol: IVF2, unit: quantity.Ampere, low: 1e-3, high: 200},
	{symbol: IR, unit: quantity.Ampere, low: 1e-9, high: 0.01, at: VR},
	{symbol: IRhot, unit: quantity.Ampere, low: 1e-8, high: 0.1, at: TjIR},
	{symbol: TjIR, unit: quantity.Celsius, low: 50, high: 200},
	{symbol: Trr, unit: quantity.Second, low: 1e-9, high: 1e-4},
	{symbol: CJ, unit: quantity.Farad, low: 1e-13, high: 1e-8, at: VCJ},
	{symbol: VCJ, unit: quantity.Volt, low: 0, high: 50},
	{symbol: Tj, unit: quantity.Celsius, low: 70, high: 200},
	{symbol: TjAbs, unit: quantity.Celsius, low: 70, high: 200},
	{symbol: RthJA, unit: quantity.KelvinPerWatt, low: 1, high: 600},
	{symbol: RthJL, unit: quantity.KelvinPerWatt, low: 0.5, high: 300},
	{symbol: RthJC, unit: quantity.KelvinPerWatt, low: 0.1, high: 300},
	{symbol: RthCS, unit: quantity.KelvinPerWatt, low: 0, high: 10},
	{symbol: VZ, unit: quantity.Volt, low: 1.8, high: 300, at: IZT},
	{symbol: VZmin, unit: quantity.Volt, low: 1.4, high: 300, at: IZT},
	{symbol: VZmax, unit: quantity.Volt, low: 1.8, high: 360, at: IZT},
	{symbol: IZT, unit: quantity.Ampere, low: 5e-5, high: 2},
	{symbol: ZZT, unit: quantity.Ohm, low: 0.1, high: 5000, at: IZT},
	{symbol: IZK, unit: quantity.Ampere, low: 1e-5, high: 0.01},
	{symbol: ZZK, unit: quantity.Ohm, low: 10, high: 1e4, at: IZK},
	{symbol: IZM, unit: quantity.Ampere, low: 1e-4, high: 5},
	{symbol: IZSM, unit: quantity.Ampere, low: 1e-3, high: 100},
	{symbol: VR, unit: quantity.Volt, low: 0.5, high: 300},
	{symbol: TC, unit: quantity.One, low: -0.002, high: 0.002},
	{symbol: PD, unit: quantity.Watt, low: 0.05, high: 300},
	{symbol: TPD, unit: quantity.Celsius, low: 0, high: 175},
	{symbol: KPD, unit: quantity.WattPerKelvin, low: 5e-4, high: 3},
	{symbol: VOUT, unit: quantity.Volt, low: 1, high: 60},
	{symbol: VOUTmin, unit: quantity.Volt, low: 0.9, high: 60},
	{symbol: VOUTmax, unit: quantity.Volt, low: 1, high: 65},
	{symbol: VREF, unit: quantity.Volt, low: 0.4, high: 10},
	{symbol: VREFmin, unit: quantity.Volt, low: 0.4, high: 10},
	{symbol: VREFmax, unit: quantity.Volt, low: 0.4, high: 10},
	{symbol: IADJ, unit: quantity.Ampere, low: 0, high: 0.01},
	{symbol: VDOtyp, unit: quantity.Volt, low: 0.01, high: 5, at: IVDO},
	{symbol: VDO, unit: quantity.Volt, low: 0.01, high: 5, at: IVDO},
	{symbol: IVDO, unit: quantity.Ampere, low: 1e-3, high: 20},
	{symbol: VI, unit: quantity.Volt, low: 3, high: 150},
	{symbol: VIO, unit: quantity.Volt, low: 3, high: 150},
	{symbol: VImin, unit: quantity.Volt, low: 1, high: 100},
	{symbol: VOI, unit: quantity.Volt, low: 0.1, high: 60},
	{symbol: VKA, unit: quantity.Volt, low: 2, high: 100},
	{symbol: IO, unit: quantity.Ampere, low: 1e-3, high: 20},
	{symbol: Ilim, unit: quantity.Ampere, low: 1e-3, high: 50},
	{symbol: Rout, unit: quantity.Ohm, low: 0, high: 10},
	{symbol: IKA, unit: quantity.Ampere, low: 1e-3, high: 1},
	{symbol: IKAmin, unit: quantity.Ampere, low: 1e-6, high: 0.01},
	{symbol: IQtyp, unit: quantity.Ampere, low: 1e-7, high: 0.2},
	{symbol: IQ, unit: quantity.Ampere, low: 1e-7, high: 0.2},
	{symbol: IOmin, unit: quantity.Ampere, low: 0, high: 0.1},
	{symbol: ZKA, unit: quantity.Ohm, low: 0.01, high: 10},
	{symbol: CIN, unit: quantity.Farad, low: 0, high: 1e-2},
	{symbol: COUT, unit: quantity.Farad, low: 0, high: 1e-2},
	{symbol: ESRmin, unit: quantity.Ohm, low: 0, high: 100},
	{symbol: ESRmax, unit: quantity.Ohm, low: 1e-3, high: 100},
	{symbol: PSRR, unit: quantity.One, low: 10, high: 120, decibel: true},
	{symbol: PSRRmin, unit: quantity.One, low: 10, high: 120, decibel: true},
	{symbol: VCEO, unit: quantity.Volt, low: 5, high: 2000},
	{symbol: VCBO, unit: quantity.Volt, low: 5, high: 2000},
	{symbol: VEBO, unit: quantity.Volt, low: 1, high: 50},
	{symbol: IC, unit: quantity.Ampere, low: 1e-3, high: 200},
	{symbol: ICM, unit: quantity.Ampere, low: 1e-3, high: 400},
	{symbol: HFEmin, unit: quantity.One, low: 3, high: 1e5},
	{symbol: HFE, unit: quantity.One, low: 3, high: 1e5},
	{symbol: HFEmax, unit: quantity.One, low: 3, high: 1e6},
	{symbol: VDS, unit: quantity.Volt, low: 5, high: 2000},
	{symbol: VGS, unit: quantity.Volt, low: 2, high: 100},
	{symbol: ID, unit: quantity.Ampere, low: 1e-3, high: 500},
}

// rank is the place of a symbol in the vocabulary.
var rank = func() map[netlist.Symbol]int {
	places := make(map[netlist.Symbol]int, len(vocabulary))
	for i, c := range vocabulary {
		places[c.symbol] = i
	}
	return places
}()

func columnOf(symbol netlist.Symbol) (column, bool) {
	i, ok := rank[symbol]
	if !ok {
		return column{}, false
	}
	return vocabulary[i], true
}

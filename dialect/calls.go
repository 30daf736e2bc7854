package dialect

// callGroup sorts the functions of the notation by what they take.
type callGroup int

const (
	mathematics     callGroup = iota // numbers; some take functions and signals
	waveformCall                     // u and delta
	signalPart                       // a signal gives a signal
	functionView                     // a function gives a real function of frequency
	functionMeasure                  // a function gives a number or fact
	signalMeasure                    // a signal gives a number
	partMeasure                      // a part gives a number
)

// callInfo is one function or measure of the notation.
type callInfo struct {
	Name       string
	Parameters []string // for signature help: "H", "X", "TOLERANCE"
	Optional   int      // how many of the last parameters may be left out
	Group      callGroup
	Definition string // one or two sentences, for hovers
	many       bool   // takes more arguments than named
}

var callList = []callInfo{
	{Name: "sqrt", Parameters: []string{"X"}, Group: mathematics,
		Definition: "The square root. The root of Ω^2 is Ω; a root without a unit of its own is an error."},
	{Name: "exp", Parameters: []string{"X"}, Group: mathematics,
		Definition: "e to the power X; X is a plain number, or linear in t with a plain coefficient such as t/3 ms."},
	{Name: "log", Parameters: []string{"X"}, Group: mathematics,
		Definition: "The natural logarithm of a plain number."},
	{Name: "sin", Parameters: []string{"X"}, Group: mathematics,
		Definition: "The sine of an angle in rad or °; in a waveform of an expression linear in t, such as 2*pi*f*t + 30°."},
	{Name: "cos", Parameters: []string{"X"}, Group: mathematics,
		Definition: "The cosine of an angle in rad or °; in a waveform of an expression linear in t, such as 2*pi*f*t + 30°."},
	{Name: "abs", Parameters: []string{"X"}, Group: mathematics,
		Definition: "The absolute value of a number or a signal, the magnitude of a function of s at s = jω."},
	{Name: "min", Parameters: []string{"X", "Y"}, Group: mathematics, many: true,
		Definition: "The smallest of numbers or signals of one unit, at every instant."},
	{Name: "max", Parameters: []string{"X", "Y"}, Group: mathematics, many: true,
		Definition: "The largest of numbers or signals of one unit, at every instant."},
	{Name: "dB", Parameters: []string{"X"}, Group: mathematics,
		Definition: "The level 20·log10 of the magnitude of a plain ratio (IEC 60027-3, field quantities)."},
	{Name: "u", Parameters: []string{"t - T"}, Group: waveformCall,
		Definition: "The unit step: 0 before its argument is zero, 1 after."},
	{Name: "delta", Parameters: []string{"t - T"}, Group: waveformCall,
		Definition: "The unit impulse at the instant its argument is zero; its area is 1, so its unit is 1/s."},
	{Name: "zir", Parameters: []string{"X"}, Group: signalPart,
		Definition: "The zero-input response: the part of a signal that the initial state alone produces, all sources zero."},
	{Name: "zsr", Parameters: []string{"X"}, Group: signalPart,
		Definition: "The zero-state response: the part of a signal that the sources produce from rest."},
	{Name: "due", Parameters: []string{"X", "SOURCE"}, Group: signalPart,
		Definition: "The share of one source in the zero-state response (superposition)."},
	{Name: "natural", Parameters: []string{"X"}, Group: signalPart,
		Definition: "The part of a signal at the network's own natural frequencies."},
	{Name: "forced", Parameters: []string{"X"}, Group: signalPart,
		Definition: "The part of a signal at the sources' frequencies."},
	{Name: "gain", Parameters: []string{"H"}, Group: functionView,
		Definition: "The magnitude |H(jω)|, in the unit of H; compared with a level it becomes 20·log10 of it."},
	{Name: "phase", Parameters: []string{"H"}, Group: functionView,
		Definition: "The angle of H(jω), continuous in ω; just above zero frequency it lies above −180° and at most at 180°. A pole or zero on the imaginary axis turns it by half a turn."},
	{Name: "real", Parameters: []string{"H"}, Group: functionView,
		Definition: "The real part of H(jω)."},
	{Name: "imag", Parameters: []string{"H"}, Group: functionView,
		Definition: "The imaginary part of H(jω)."},
	{Name: "delay", Parameters: []string{"H"}, Group: functionView,
		Definition: "The group delay −d(phase)/dω of H(jω), in seconds."},
	{Name: "bandwidth", Parameters: []string{"H"}, Group: functionMeasure,
		Definition: "From zero to the lowest frequency at which the gain is 1/√2 of that at DC, where that is finite and not 0; otherwise the width of the range around the largest gain, between the nearest frequencies at which the gain is 1/√2 of it."},
	{Name: "crossover", Parameters: []string{"H"}, Group: functionMeasure,
		Definition: "The highest frequency at which the gain of a plain ratio is 1 (0 dB)."},
	{Name: "damping", Parameters: []string{"H"}, Group: functionMeasure,
		Definition: "The smallest damping ratio ζ = −Re p/|p| of the poles p of H; two poles that are the only ones are taken together, s² + 2ζω0·s + ω0², also when both are real."},
	{Name: "natural_frequency", Parameters: []string{"H"}, Group: functionMeasure,
		Definition: "The natural frequency ω0 that belongs to damping(H): the magnitude |p| of the pole with the smallest damping ratio, or the root of the product of two poles that are the only ones."},
	{Name: "quality", Parameters: []string{"H"}, Group: functionMeasure,
		Definition: "The quality factor 1/(2ζ), with the damping ratio ζ = damping(H)."},
	{Name: "stable", Parameters: []string{"H"}, Group: functionMeasure,
		Definition: "True when every pole of H has a negative real part."},
	{Name: "peak", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "The largest value of a signal, over the time range asked about or from 0+ on; its least upper bound where that is only approached. At a jump both limits count."},
	{Name: "trough", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "The smallest value of a signal, over the time range asked about or from 0+ on; its greatest lower bound where that is only approached. At a jump both limits count."},
	{Name: "final", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "The limit of a signal as t grows; a signal that keeps swinging has none."},
	{Name: "mean", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "The mean value over the time range asked about; without a range in the long run, once everything that decays has died away."},
	{Name: "rms", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "The root mean square over the time range asked about; without a range in the long run, once everything that decays has died away."},
	{Name: "settle", Parameters: []string{"X", "TOLERANCE"}, Optional: 1, Group: signalMeasure,
		Definition: "The last time at which a signal is outside ±TOLERANCE (1 % when it is left out) of its final value; where that is 0, of its largest distance from 0."},
	{Name: "overshoot", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "How far a signal goes beyond its final value, over that value: (peak − final)/final, with the trough where the final value is negative, and 0 where it does not go beyond. Undefined when the final value is 0."},
	{Name: "rise", Parameters: []string{"X"}, Group: signalMeasure,
		Definition: "The time from where a signal first reaches 10 % of its final value to where it first reaches 90 % of it."},
	{Name: "last_above", Parameters: []string{"X", "VALUE"}, Group: signalMeasure,
		Definition: "The last time at which a signal is above a value; undefined when it never is, or is for ever."},
	{Name: "last_below", Parameters: []string{"X", "VALUE"}, Group: signalMeasure,
		Definition: "The last time at which a signal is below a value; undefined when it never is, or is for ever."},
	{Name: "energy", Parameters: []string{"PART"}, Group: partMeasure,
		Definition: "The energy a part has absorbed over the time range asked about, or from 0 on: the integral of p[PART]."},
	{Name: "stored", Parameters: []string{"PART"}, Group: partMeasure,
		Definition: "The energy in an inductor (L·i²/2) or a capacitor (C·v²/2), a function of time."},
}

var callTable = func() map[string]*callInfo {
	table := make(map[string]*callInfo, len(callList))
	for i := range callList {
		table[callList[i].Name] = &callList[i]
	}
	return table
}()

// Signature is the form of a function or measure, for signature help.
type Signature struct {
	Name       string
	Parameters []string // upper case: to be replaced by a name or expression
	Optional   int      // how many of the last may be left out
	Many       bool     // takes further arguments like the last one
	Definition string
}

// Signatures lists the functions and measures of the notation.
func Signatures() []Signature {
	all := make([]Signature, len(callList))
	for i, c := range callList {
		all[i] = Signature{c.Name, c.Parameters, c.Optional, c.many, c.Definition}
	}
	return all
}

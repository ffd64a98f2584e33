package unit

// Units in metres, seconds and vehicles: multiply by one to come in, divide by it to go out.
const (
	Kilometre = 1000.0
	Mile      = 1609.344 // the international mile of 1959, exact
	Foot      = 0.3048   // the international foot of 1959, exact

	Minute = 60.0
	Hour   = 3600.0

	KilometrePerHour = Kilometre / Hour
	MilePerHour      = Mile / Hour

	VehPerHour   = 1 / Hour
	VehPerMinute = 1 / Minute

	VehPerKilometre = 1 / Kilometre
	VehPerMile      = 1 / Mile
)

// Kind is what a quantity measures.
type Kind int

// The kinds of quantities that files hold; a clock time has a parser of its own.
const (
	Speed          Kind = iota // m/s
	Length                     // m
	Flow                       // veh/s
	FlowPerLane                // veh/s per lane
	DensityPerLane             // veh/m per lane
	Duration                   // s
	Share                      // fraction
)

// scale is one accepted unit: a value x in it is x*num/den in metres, seconds and vehicles. Two whole numbers
// rather than one factor, so that the conversion rounds once.
type scale struct {
	name     string
	num, den float64
}

// kinds is indexed by Kind. The first unit is the default of a bare number, where bare says that there is one.
var kinds = [...]struct {
	name  string
	bare  bool
	units []scale
}{
	Speed:          {"speed", true, []scale{{"km/h", 1000, 3600}, {"mph", 1609.344, 3600}, {"m/s", 1, 1}}},
	Length:         {"length", true, []scale{{"m", 1, 1}, {"km", 1000, 1}, {"mi", 1609.344, 1}, {"ft", 0.3048, 1}}},
	Flow:           {"flow", true, []scale{{"veh/h", 1, 3600}, {"veh/min", 1, 60}, {"veh/s", 1, 1}}},
	FlowPerLane:    {"flow per lane", true, []scale{{"veh/h/lane", 1, 3600}}},
	DensityPerLane: {"density per lane", true, []scale{{"veh/km/lane", 1, 1000}, {"veh/mi/lane", 1, 1609.344}, {"veh/m/lane", 1, 1}}},
	Duration:       {"duration", false, []scale{{"s", 1, 1}, {"min", 60, 1}, {"h", 3600, 1}}},
	Share:          {"share", true, []scale{{"", 1, 1}, {"%", 1, 100}}},
}

// String is the kind's name, such as "speed".
func (k Kind) String() string { return kinds[k].name }

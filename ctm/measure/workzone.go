package measure

import (
	"fmt"

	"example.org/tailback/network/unit"
)

// WorkZone holds what the handbook's work-zone method asks for (Highway Capacity Manual, 6th and 7th editions,
// chapter 10, section 4; NCHRP 03-107; Yeom et al. 2015, Transportation Research Record 2485:51-60). The method
// is for basic segments with 12-ft lanes, where no local data exist; it knows nothing of police presence, pavement,
// or a single open lane on a steep upgrade.
type WorkZone struct {
	Lanes, Open float64 // lanes in normal times and in the work zone
	Hard        bool    // concrete or other hard barrier, else cones, drums or other soft ones
	Rural       bool    // else urban
	Lateral     float64 // m from the edge of the travel lane to the barrier, 0..3.6576 (12 ft)
	Night       bool
	NormalLimit float64 // speed limit in normal times, m/s; 0 stands for the normal free speed
	Limit       float64 // speed limit in the work zone, m/s; 0 stands for the normal one
	RampDensity float64 // ramps per metre, on and off, 3 mi to either side of the work zone's centre
	Alpha       float64 // drop from pre-breakdown capacity to queue discharge, a share; the handbook's average is 0.134
	Heavy       HeavyVehicles
	Capacity    float64 // normal capacity of a lane, veh/s
	FreeSpeed   float64 // normal free speed, m/s
	Coef        Coefficients
}

// DefaultAlpha is the average drop in work zones (HCM 6th ed., section 10.4).
const DefaultAlpha = 0.134

// HeavyVehicles turns passenger cars into vehicles: f_HV = 1/(1 + P_T (E_T - 1)) (HCM 6th ed., equation 12-10).
// The zero value is a stream of passenger cars.
type HeavyVehicles struct {
	Share      float64 // P_T
	Equivalent float64 // E_T; 0 stands for 2, level terrain (exhibit 12-25)
}

// Factor is f_HV.
func (h HeavyVehicles) Factor() float64 {
	e := h.Equivalent
	if e == 0 {
		e = 2
	}
	return 1 / (1 + h.Share*(e-1))
}

// Coefficients are those of equations 10-8 and 10-10 in the handbook's units (pc/h per lane, mi/h, ft, ramps/mi).
// They are from memory, the signs confirmed by the handbook's text and the result by its example problem 4 of
// chapter 25 to 0.5 %; a study may override each.
type Coefficients struct {
	Base, Severity, Barrier, Area, Lateral, Light                                          float64
	SpeedBase, SpeedRatio, SpeedLimit, SpeedSeverity, SpeedBarrier, SpeedLight, SpeedRamps float64
	RatioLow, RatioHigh                                                                    float64 // bounds of the ratio of the speed limits
}

// HandbookCoefficients are the published ones.
func HandbookCoefficients() Coefficients {
	return Coefficients{
		Base: 2093, Severity: 154, Barrier: 194, Area: 179, Lateral: 9, Light: 59,
		SpeedBase: 9.95, SpeedRatio: 33.49, SpeedLimit: 0.53, SpeedSeverity: 5.60, SpeedBarrier: 3.84, SpeedLight: 1.71, SpeedRamps: 8.7,
		RatioLow: 1, RatioHigh: 1.2,
	}
}

// Units of the handbook.
const (
	foot = unit.Foot
	mile = unit.Mile
	mph  = unit.MilePerHour
)

// Estimate is a work zone's capacity and free speed, and how they came about.
type Estimate struct {
	Severity  float64  // lane closure severity index LCSI
	QDR       float64  // queue discharge, passenger cars per second and open lane
	PreDrop   float64  // capacity before breakdown, passenger cars per second and open lane, before any cap
	RawSpeed  float64  // free speed before any cap, m/s
	Capacity  float64  // of an open lane when it breaks down, veh/s
	Discharge float64  // of an open lane out of the queue, veh/s; 0 where the method gives none
	FreeSpeed float64  // m/s; 0 where the method gives none
	Source    string   // the method in a few words
	Notes     []string // the numbers on the way, and what was capped
}

// LCSI is the lane closure severity index 1/(OR N_o), OR = N_o/N, at most 2 (HCM 6th ed., equation 10-7 and exhibit
// 10-15).
func (w *WorkZone) LCSI() float64 { return min(2, w.Lanes/(w.Open*w.Open)) }

// QDR is the queue discharge rate in passenger cars per hour and open lane (equation 10-8):
//
//	QDR = 2093 - 154 LCSI - 194 f_Br - 179 f_AT + 9 f_LAT - 59 f_DN
func (w *WorkZone) QDR() float64 {
	c := &w.Coef
	return c.Base - c.Severity*w.LCSI() - c.Barrier*one(!w.Hard) - c.Area*one(w.Rural) + c.Lateral*w.Lateral/foot - c.Light*one(w.Night)
}

// Speed is the free speed in mi/h (equation 10-10), with f_Sr the ratio of the normal speed limit to the work zone's:
//
//	FFS_wz = 9.95 + 33.49 f_Sr + 0.53 SL_wz - 5.60 LCSI - 3.84 f_Br - 1.71 f_DN - 8.7 TRD
//
// A lower limit can raise it (Jeon & Benekohal 2023): the published form is kept, and a study can override every
// coefficient.
func (w *WorkZone) Speed() float64 {
	c := &w.Coef
	normal, limit := w.limits()
	ratio := max(c.RatioLow, min(c.RatioHigh, normal/limit))
	return c.SpeedBase + c.SpeedRatio*ratio + c.SpeedLimit*limit/mph - c.SpeedSeverity*w.LCSI() -
		c.SpeedBarrier*one(!w.Hard) - c.SpeedLight*one(w.Night) - c.SpeedRamps*w.RampDensity*mile
}

// limits are the speed limits in normal times and in the work zone, m/s.
func (w *WorkZone) limits() (normal, limit float64) {
	normal, limit = w.NormalLimit, w.Limit
	if normal == 0 {
		normal = w.FreeSpeed
	}
	if limit == 0 {
		limit = normal
	}
	return normal, limit
}

func one(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

// Estimate applies the method. Capacity before breakdown follows from queue discharge (equation 10-9):
//
//	c_wz = 100 QDR/(100 - alpha_wz)
//
// It, the discharge and the free speed are capped at their normal values (equations 10-11 and 10-12: CAF and SAF at
// most 1).
func (w *WorkZone) Estimate() Estimate {
	qdr, factor := max(0, w.QDR()), w.Heavy.Factor()
	e := Estimate{Severity: w.LCSI(), QDR: qdr / 3600, PreDrop: qdr / (1 - w.Alpha) / 3600, RawSpeed: w.Speed() * mph}
	e.Capacity = min(w.Capacity, e.PreDrop*factor)
	e.Discharge = min(e.Capacity, e.QDR*factor)
	e.FreeSpeed = min(w.FreeSpeed, e.RawSpeed)
	e.Source = "handbook work-zone method (HCM, 6th ed., equations 10-8 to 10-12)"
	normal, limit := w.limits()
	e.note("lane closure severity index %s, queue discharge %s pc/h per open lane, drop %s: %s pc/h per open lane before breakdown",
		number(e.Severity), number(qdr), percent(w.Alpha), number(e.PreDrop*3600))
	if w.Heavy.Share > 0 {
		e.note("%s heavy vehicles: factor %s", percent(w.Heavy.Share), number(factor))
	}
	if e.PreDrop*factor > w.Capacity {
		e.note("capacity capped at the normal %s per lane", hourly(w.Capacity))
	}
	e.note("free speed %s from speed limits of %s (normal) and %s (work zone) and %s ramps per km",
		bothSpeeds(e.RawSpeed), bothSpeeds(normal), bothSpeeds(limit), number(w.RampDensity*1000))
	if e.RawSpeed > w.FreeSpeed {
		e.note("free speed capped at the normal %s", bothSpeeds(w.FreeSpeed))
	}
	return e
}

func (e *Estimate) note(format string, args ...any) {
	e.Notes = append(e.Notes, fmt.Sprintf(format, args...))
}

package network

import "math"

// WGS 84 ellipsoid: equatorial radius in metres and flattening (NIMA TR8350.2, 3rd edition, table 3.1).
const (
	earthRadius     = 6378137.0
	earthFlattening = 1 / 298.257223563
)

// Geodesic is the distance in metres between two points (longitude, latitude in degrees) along the WGS 84
// ellipsoid, by the inverse formula of Vincenty (1975), Survey Review 23(176):88-93, equations 13-21. It is
// right to well under a millimetre for road networks. For nearly antipodal points, where the formula does not
// converge, it returns NaN.
func Geodesic(p, q [2]float64) float64 {
	if p == q {
		return 0
	}
	const f = earthFlattening
	const b = earthRadius * (1 - f)
	rad := math.Pi / 180
	L := (q[0] - p[0]) * rad
	sinU1, cosU1 := reduced(p[1] * rad)
	sinU2, cosU2 := reduced(q[1] * rad)
	lambda := L
	for range 200 {
		sinL, cosL := math.Sincos(lambda)
		sinSigma := math.Hypot(cosU2*sinL, cosU1*sinU2-sinU1*cosU2*cosL)
		cosSigma := sinU1*sinU2 + cosU1*cosU2*cosL
		if sinSigma == 0 {
			return 0
		}
		sigma := math.Atan2(sinSigma, cosSigma)
		sinAlpha := cosU1 * cosU2 * sinL / sinSigma
		cos2Alpha := 1 - sinAlpha*sinAlpha
		cos2M := 0.0 // on the equator cos2Alpha is 0 and the term vanishes
		if cos2Alpha > 0 {
			cos2M = cosSigma - 2*sinU1*sinU2/cos2Alpha
		}
		C := f / 16 * cos2Alpha * (4 + f*(4-3*cos2Alpha))
		next := L + (1-C)*f*sinAlpha*(sigma+C*sinSigma*(cos2M+C*cosSigma*(2*cos2M*cos2M-1)))
		if math.Abs(next-lambda) < 1e-12 {
			u2 := cos2Alpha * (earthRadius*earthRadius - b*b) / (b * b)
			A := 1 + u2/16384*(4096+u2*(-768+u2*(320-175*u2)))
			B := u2 / 1024 * (256 + u2*(-128+u2*(74-47*u2)))
			d := B * sinSigma * (cos2M + B/4*(cosSigma*(2*cos2M*cos2M-1)-
				B/6*cos2M*(4*sinSigma*sinSigma-3)*(4*cos2M*cos2M-3)))
			return b * A * (sigma - d)
		}
		lambda = next
	}
	return math.NaN()
}

// reduced gives sine and cosine of the reduced latitude of a geodetic latitude in radians.
func reduced(phi float64) (sin, cos float64) {
	return math.Sincos(math.Atan((1 - earthFlattening) * math.Tan(phi)))
}

// LineLength is the sum of the geodesics of a line (longitude, latitude in degrees) in metres.
func LineLength(line [][2]float64) float64 {
	sum := 0.0
	for i := 1; i < len(line); i++ {
		sum += Geodesic(line[i-1], line[i])
	}
	return sum
}

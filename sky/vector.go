package sky

import "math"

const (
	radPerDeg = math.Pi / 180
	degPerRad = 180 / math.Pi
	radPerSec = radPerDeg / 3600 // radians in a second of arc
	turn      = 2 * math.Pi
)

// vec is a direction or a place in right-handed rectangular axes.
type vec [3]float64

func (a vec) dot(b vec) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func (a vec) cross(b vec) vec {
	return vec{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

// plus returns a + k·b.
func (a vec) plus(k float64, b vec) vec {
	return vec{a[0] + k*b[0], a[1] + k*b[1], a[2] + k*b[2]}
}

func (a vec) times(k float64) vec { return vec{k * a[0], k * a[1], k * a[2]} }

func (a vec) length() float64 { return math.Sqrt(a.dot(a)) }

func (a vec) unit() vec { return a.times(1 / a.length()) }

// direction returns the unit vector of a longitude and latitude in radians.
func direction(lon, lat float64) vec {
	sl, cl := math.Sincos(lon)
	sb, cb := math.Sincos(lat)
	return vec{cb * cl, cb * sl, sb}
}

// between returns the angle between two vectors in radians, exact at 0 and at π.
func between(a, b vec) float64 {
	return math.Atan2(a.cross(b).length(), a.dot(b))
}

// mat is a rotation of axes; its rows are the new axes.
type mat [3]vec

func (m *mat) apply(a vec) vec { return vec{m[0].dot(a), m[1].dot(a), m[2].dot(a)} }

// after returns the rotation that does n first and then m.
func (m *mat) after(n *mat) mat {
	var p mat
	for i := range p {
		for j := range p[i] {
			p[i][j] = m[i][0]*n[0][j] + m[i][1]*n[1][j] + m[i][2]*n[2][j]
		}
	}
	return p
}

// aboutX, aboutY and aboutZ turn the axes counter-clockwise by an angle in radians.
func aboutX(a float64) *mat {
	s, c := math.Sincos(a)
	return &mat{{1, 0, 0}, {0, c, s}, {0, -s, c}}
}

func aboutY(a float64) *mat {
	s, c := math.Sincos(a)
	return &mat{{c, 0, -s}, {0, 1, 0}, {s, 0, c}}
}

func aboutZ(a float64) *mat {
	s, c := math.Sincos(a)
	return &mat{{c, s, 0}, {-s, c, 0}, {0, 0, 1}}
}

// mod returns a reduced to [0, m). It is for angles of a few turns: a digit is lost with every ten of them.
func mod(a, m float64) float64 {
	a -= m * math.Floor(a/m)
	if a < 0 || a >= m { // only ever by rounding
		return 0
	}
	return a
}

// half returns a reduced to [−m/2, m/2], under the same caution.
func half(a, m float64) float64 { return a - m*math.Floor(a/m+0.5) }

// halfTurn returns an angle in radians reduced to [−π, π].
func halfTurn(a float64) float64 { return half(a, turn) }

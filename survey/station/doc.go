// Package station reduces the raw readings of a total station to coordinates: faces and rounds are averaged, set-ups are connected by a
// weighted least-squares adjustment, and every point gets the covariance that the stated accuracy of the instrument gives it. It
// knows nothing of files, cables or forces. Lengths in m, angles in rad, azimuths clockwise from north.
package station

// Package vibration gives natural frequencies and wave return times of a cable between fixed supports. It knows tension, mass, length
// and stiffness, not surveys or verdicts.
//
// Beside a shape these readings say less than they seem to. A frequency of a taut string, a sideways frequency, an antisymmetric one
// and the time of a return wave rest on tension / mass, and so does the shape: with the shape known they check it and say
// nothing of the tension. Only symmetric in-plane frequencies of a cable whose lambda squared is neither small nor large do.
package vibration

// Package tension turns a fitted shape and a load into forces, brings the design to the day of the visit with the
// exact elastic catenary, and decides with probabilities whether the cable hangs as it was designed. It knows nothing
// of files and pages.
//
// Signs: a support's vertical reaction is positive when the support pushes or pulls the cable upwards; slopes are dz/ds
// going from support A to support B; sag is positive below the chord.
package tension

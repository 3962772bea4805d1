// Package tone has tone networks to begin with: design files in the project's own language, with values of its own, each for what
// a builder may want a control to do. They are texts, so that what a builder reads and changes is what was tested.
package tone

package xover

// Bounds on what a design file may hold. They are far above any real design, and keep a hostile file from
// exhausting memory or stack.
const (
	MaxFileBytes  = 1 << 20 // bytes in the file
	MaxNesting    = 64      // arrays, inline tables and brackets inside one another; parts of a dotted key
	MaxValues     = 50_000  // values of all kinds in the file
	MaxParts      = 1000    // entries of [parts]
	MaxDrivers    = 64      // [driver.NAME] tables
	MaxWays       = 16      // [[way]] tables
	MaxControls   = 64      // [control.NAME] tables
	MaxPeaks      = 16      // peaks of a driver's breakup
	MaxAngles     = 180     // response files of a driver in one plane
	MaxTargets    = 8       // targets of a way
	MaxSteps      = 500     // steps of a network
	MaxExpression = 100     // parts in one step
	MaxTextBytes  = 1000    // bytes in a string
	MaxNameRunes  = 32      // characters in the name of a part, driver, way, node or control
	MaxErrors     = 100     // errors that are reported; what follows is left out

	maxPeakDB = 40 // dB, of a breakup's peak, up or down
)

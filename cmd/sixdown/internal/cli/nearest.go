package cli

import (
	"fmt"

	"sixdown/xover"
)

// didYouMean proposes the known name that is nearest to name, or says the fallback if none is near.
func didYouMean(name string, known []string, fallback string) string {
	if near := xover.Nearest(name, known); near != "" {
		return fmt.Sprintf("did you mean %q?", near)
	}
	return fallback
}

package cli

import "fmt"

// didYouMean proposes the known name that is nearest to name, or says the fallback if none is near.
func didYouMean(name string, known []string, fallback string) string {
	best, least := "", max(1, len(name)/3)+1
	for _, k := range known {
		if slips := editDistance(name, k); slips < least {
			best, least = k, slips
		}
	}
	if best == "" {
		return fallback
	}
	return fmt.Sprintf("did you mean %q?", best)
}

// editDistance counts the letters to insert, delete or replace to make b of a.
//
// V. I. Levenshtein, "Binary Codes Capable of Correcting Deletions, Insertions, and Reversals", Soviet Physics
// Doklady 10(8), 1966; by the usual dynamic programming over one row.
func editDistance(a, b string) int {
	from, to := []rune(a), []rune(b)
	row := make([]int, len(to)+1)
	for j := range row {
		row[j] = j
	}
	for i, r := range from {
		diagonal := row[0]
		row[0] = i + 1
		for j, q := range to {
			replace := diagonal
			if r != q {
				replace++
			}
			diagonal = row[j+1]
			row[j+1] = min(replace, row[j+1]+1, row[j]+1)
		}
	}
	return row[len(to)]
}

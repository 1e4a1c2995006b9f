package limits

import (
	"fmt"
	"slices"
	"strings"
)

// allow applies the strongest allowance whose listed orders are all within
// their share of the limit: the rows of every other order are raised. Totals
// stay as they are.
func allow(rules []allowance, rows []Row) {
	for _, a := range slices.Backward(rules) {
		if !a.earned(rows) {
			continue
		}
		why := fmt.Sprintf("x %g by %s: orders %s within %g %% of theirs", a.multiplier, a.rule, list(a.orders), 100*a.share)
		for i := range rows {
			if !slices.Contains(a.orders, rows[i].Order) {
				rows[i].scale(a.multiplier, why, a.mark)
			}
		}
		return
	}
}

// earned reports whether every listed order has a row within the share.
func (a allowance) earned(rows []Row) bool {
	kept := 0
	for i := range rows {
		if slices.Contains(a.orders, rows[i].Order) {
			if rows[i].Value > a.share*rows[i].Limit {
				return false
			}
			kept++
		}
	}
	return kept == len(a.orders)
}

func list(orders []int) string {
	words := make([]string, len(orders))
	for i, h := range orders {
		words[i] = fmt.Sprint(h)
	}
	return strings.Join(words, ", ")
}

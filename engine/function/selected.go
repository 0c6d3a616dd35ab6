package function

import "slices"

// selected is the element of x that would stand at place k if x were sorted; x is
// left in another order (Hoare 1961: partition around a middle one of three, go on
// with the side that holds k). Should the sides stay large, it sorts.
func selected(x []int64, k int) int64 {
	for tries := 0; len(x) > 32; tries++ {
		if tries > 64 {
			break
		}
		pivot := middleOf(x[0], x[len(x)/2], x[len(x)-1])
		i, j := 0, len(x)-1
		for i <= j {
			for x[i] < pivot {
				i++
			}
			for x[j] > pivot {
				j--
			}
			if i <= j {
				x[i], x[j] = x[j], x[i]
				i, j = i+1, j-1
			}
		}
		switch { // x[:j+1] <= pivot <= x[i:], what is between equals it
		case k <= j:
			x = x[:j+1]
		case k >= i:
			x, k = x[i:], k-i
		default:
			return pivot
		}
	}
	slices.Sort(x)
	return x[k]
}

func middleOf(a, b, c int64) int64 { return max(min(a, b), min(max(a, b), c)) }

package function

import "fmt"

// NearLimit is how near to a limit a reading is told of. Readings are decimal
// numbers of a few digits: what is computed from them and differs by less than this
// was meant to be equal.
const NearLimit = 1e-9

// NearText says how many readings a limit can hardly tell apart, "" where there is
// none. x is what is compared with at, what is where: "SHARE(temp > 8)".
func NearText(what, x, at string, near, equal int64) string {
	switch {
	case near == 0:
		return ""
	case near == equal:
		return fmt.Sprintf("%s: %s of %s %s equal to the limit %s: whether %s hangs on < or <=, on > or >=", what,
			plural64(near, "value"), x, are64(near), at, counts64(near))
	}
	verb := "lie"
	if near == 1 {
		verb = "lies"
	}
	return fmt.Sprintf("%s: %s of %s %s within 1e-9 of the limit %s and %d of them differ from it: on which side is a matter of the last digit (ROUND(…, 6) makes them decimal again)",
		what, plural64(near, "value"), x, verb, at, near-equal)
}

func plural64(n int64, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

func are64(n int64) string {
	if n == 1 {
		return "is"
	}
	return "are"
}

func counts64(n int64) string {
	if n == 1 {
		return "it counts"
	}
	return "they count"
}

package audit

import "strings"

func trimStop(s string) string { return strings.TrimSuffix(s, ".") }

func hasPrefixFold(s, prefix string) bool {
	prefix = trimStop(prefix)
	return len(s) >= len(prefix) && strings.EqualFold(s[:len(prefix)], prefix)
}

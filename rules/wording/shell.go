package wording

import "strings"

// Shell writes an argument so that a shell passes it on as it is: in double
// quotes when it holds a space or another character with a meaning there.
func Shell(argument string) string {
	if argument != "" && !strings.ContainsFunc(argument, meansSomething) {
		return argument
	}
	return `"` + strings.NewReplacer(`\`, `\\`, `"`, `\"`, `$`, `\$`, "`", "\\`").Replace(argument) + `"`
}

// meansSomething tells characters that shells do not leave alone.
func meansSomething(r rune) bool {
	switch {
	case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r > 127:
		return false
	}
	return !strings.ContainsRune("_-./,:+=@%", r)
}

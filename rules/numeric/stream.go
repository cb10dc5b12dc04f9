package numeric

import (
	"hash/fnv"
	"math/rand/v2"
	"strconv"
)

// Stream returns the random stream for one purpose: a permuted congruential
// generator (PCG-DXSM, O'Neill 2014) seeded by seed and the 64-bit FNV-1a hash
// of name. The same seed and name give the same numbers in every run; another
// name gives numbers unrelated to them, so that a rule that is added or left
// out changes nobody else's. A stream is for one goroutine.
func Stream(seed uint64, name string) *rand.Rand {
	hash := fnv.New64a()
	hash.Write([]byte(name)) // A hash never returns an error.
	return rand.New(rand.NewPCG(seed, hash.Sum64()))
}

// BlockStream returns the stream of block b of the purpose name: that of
// name + "/" + b in decimal. Replicates that draw block by block come out the
// same however many goroutines share the blocks.
func BlockStream(seed uint64, name string, b int) *rand.Rand {
	return Stream(seed, name+"/"+strconv.Itoa(b))
}

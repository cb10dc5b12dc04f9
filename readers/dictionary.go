package readers

import (
	"hash/maphash"
	"unsafe"
)

// dictionary keeps each distinct text of a column once. A code is the order in
// which a text was first seen. Texts lie in blocks, not in strings of their own:
// a million labels are then a few large objects to the collector.
type dictionary struct {
	slots  []uint32 // code+1 by hash, 0 for free; length a power of two
	at     []uint64 // place of each text: block, offset, length
	kinds  []CellKind
	values []wordValue // of texts that tell of numbers, by code
	block  []byte      // the block being filled
	full   [][]byte
	seed   maphash.Seed
}

const (
	blockLen   = 1 << 16
	lengthBits = 28 // a text is at most a record long, a record at most 256 MiB
	offsetBits = 16 // a text longer than a block has a block of its own
)

// len is the number of distinct texts.
func (d *dictionary) len() int { return len(d.at) }

// text gives the text of a code; it shares the block's memory, which is never
// written again.
func (d *dictionary) text(code uint32) string {
	b := d.bytes(code)
	return unsafe.String(unsafe.SliceData(b), len(b))
}

func (d *dictionary) bytes(code uint32) []byte {
	at := d.at[code]
	n := int(at & (1<<lengthBits - 1))
	off := int(at >> lengthBits & (1<<offsetBits - 1))
	block := int(at >> (lengthBits + offsetBits))
	b := d.block
	if block < len(d.full) {
		b = d.full[block]
	}
	return b[off : off+n : off+n]
}

// kind is what classify made of the text when it came in.
func (d *dictionary) kind(code uint32) CellKind { return d.kinds[code] }

// find gives the code of a text, or the slot where it belongs.
func (d *dictionary) find(text []byte) (code uint32, slot int, ok bool) {
	if d.slots == nil {
		d.slots, d.seed = make([]uint32, 16), maphash.MakeSeed()
	}
	mask := len(d.slots) - 1
	for i := int(maphash.Bytes(d.seed, text)) & mask; ; i = (i + 1) & mask {
		c := d.slots[i]
		if c == 0 {
			return 0, i, false
		}
		if string(d.bytes(c-1)) == string(text) {
			return c - 1, i, true
		}
	}
}

// add takes in a text that find did not know, at the slot find gave.
func (d *dictionary) add(text []byte, slot int, kind CellKind) uint32 {
	if len(d.block)+len(text) > cap(d.block) {
		if d.block != nil {
			d.full = append(d.full, d.block)
		}
		n := max(len(text), min(blockLen, max(256, 4*cap(d.block))))
		d.block = make([]byte, 0, n)
	}
	off := len(d.block)
	d.block = append(d.block, text...)
	code := uint32(len(d.at))
	d.at = append(d.at, uint64(len(d.full))<<(lengthBits+offsetBits)|uint64(off)<<lengthBits|uint64(len(text)))
	d.kinds = append(d.kinds, kind)
	d.slots[slot] = code + 1
	if 2*len(d.at) > len(d.slots) {
		d.rehash()
	}
	return code
}

func (d *dictionary) rehash() {
	d.slots = make([]uint32, 2*len(d.slots))
	mask := len(d.slots) - 1
	for code := range d.at {
		i := int(maphash.Bytes(d.seed, d.bytes(uint32(code)))) & mask
		for d.slots[i] != 0 {
			i = (i + 1) & mask
		}
		d.slots[i] = uint32(code) + 1
	}
}

// wordValue is what a text means as a number, beside its text.
type wordValue struct {
	value float64
	form  uint8 // decimals and formThousands
	signs signUse
}

// setValue notes the number that a text stands for.
func (d *dictionary) setValue(code uint32, v wordValue) {
	for int(code) >= len(d.values) {
		d.values = append(d.values, wordValue{})
	}
	d.values[code] = v
}

// value gives what a text means as a number; zero when it is none.
func (d *dictionary) value(code uint32) wordValue {
	if int(code) < len(d.values) {
		return d.values[code]
	}
	return wordValue{}
}

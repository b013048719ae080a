// Package draw says which rows a resample holds.
//
// Random streams are addressed, not shared: seed, design and resample number give the state of a generator, and the
// generator gives the rows. So a resample is the same whatever the number of workers, their timing, or the other
// statistics of the plan. The rules of this package are frozen: they are written down with test vectors in
// DEVELOPERS.md, and another rule would be another Generator.
package draw

import (
	"crypto/sha256"
	"encoding/binary"
	"math/bits"
)

// Generator names the generator, the stream rule and the rule for bounded integers together.
const Generator = "xoshiro256++ keyed by SHA-256, chained bounded integers, edition 1"

// A Key addresses the streams of one design under one seed.
type Key [4]uint64

// NewKey returns the first, second, third and fourth big-endian word of the SHA-256 of the text "lotproof stream 1", a
// zero byte, the seed as eight big-endian bytes and the digest of the design.
func NewKey(seed uint64, design [32]byte) Key {
	in := append(make([]byte, 0, 64), "lotproof stream 1\x00"...)
	in = binary.BigEndian.AppendUint64(in, seed)
	in = append(in, design[:]...)
	sum := sha256.Sum256(in)
	var k Key
	for j := range k {
		k[j] = binary.BigEndian.Uint64(sum[8*j:])
	}
	return k
}

// golden is 2⁶⁴ divided by the golden ratio, made odd: the increment of SplitMix64.
const golden = 0x9e3779b97f4a7c15

// words are the first initial values of SHA-512 (FIPS 180-4, 5.3.5); they only set the four state words apart.
var words = [4]uint64{0x6a09e667f3bcc908, 0xbb67ae8584caa73b, 0x3c6ef372fe94f82b, 0xa54ff53a5f1d36f1}

// mix is the output function of SplitMix64: Steele, Lea and Flood, "Fast Splittable Pseudorandom Number Generators",
// OOPSLA 2014, with the constants of Stafford's variant 13.
func mix(z uint64) uint64 {
	z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9
	z = (z ^ (z >> 27)) * 0x94d049bb133111eb
	return z ^ (z >> 31)
}

// A Stream is the generator xoshiro256++ of Blackman and Vigna, "Scrambled Linear Pseudorandom Number Generators", ACM
// Transactions on Mathematical Software 47 (2021) article 36.
type Stream struct{ a, b, c, d uint64 }

// Stream returns the stream of one resample; resamples count from 1. State word j is
// mix(k[j] xor mix(resample·golden + words[j])).
func (k Key) Stream(resample uint64) Stream {
	at := func(j int) uint64 { return mix(k[j] ^ mix(resample*golden+words[j])) }
	s := Stream{at(0), at(1), at(2), at(3)}
	if s.a|s.b|s.c|s.d == 0 {
		s.a = golden // the generator must not start from zero; probability 2⁻²⁵⁶
	}
	return s
}

// Next returns the next 64-bit word.
func (s *Stream) Next() uint64 {
	out := bits.RotateLeft64(s.a+s.d, 23) + s.a
	t := s.b << 17
	s.c ^= s.a
	s.d ^= s.b
	s.b ^= s.c
	s.a ^= s.d
	s.c ^= t
	s.d = bits.RotateLeft64(s.d, 45)
	return out
}

// A chain is the rule by which 64-bit words become integers below n.
type chain struct {
	n, perWord      uint64
	power, rejected uint64 // n^perWord, and 2⁶⁴ mod that power
}

// newChain returns the rule for n ≥ 1: perWord integers from a word, the largest number k with n^k ≤ 2⁵⁶, made even if
// it is above 1. It depends on n only.
func newChain(n int) chain {
	c := chain{n: uint64(n), perWord: 1, power: uint64(n)}
	if n < 2 {
		return c
	}
	k, power := uint64(0), uint64(1)
	for power <= (1<<56)/c.n {
		power *= c.n
		k++
	}
	if k > 1 && k%2 == 1 {
		power /= c.n
		k--
	}
	c.perWord, c.power = k, power
	c.rejected = -power % power
	return c
}

// fill sets out to independent integers, uniform on 0 … n−1. A word w gives them by chained multiplication: the high
// half of w·n is the first, the low half times n gives the second, and so on; the word is rejected if the last low half
// is below 2⁶⁴ mod n^k, which makes the draw exact (Brackett-Rozinsky and Lemire, "Batched Ranged Random Integer
// Generation", Software: Practice and Experience 55 (2025) 155–169). What is left of the last word is not used. With
// n = 1 no word is taken.
func (c chain) fill(s *Stream, out []int32) {
	if c.n == 1 {
		clear(out)
		return
	}
	n, k := c.n, int(c.perWord)
	local := *s
	for len(out) > 0 {
		w := local.Next()
		if w*c.power < c.rejected {
			continue
		}
		if k > len(out) {
			k = len(out)
		}
		for i := range out[:k] {
			high, low := bits.Mul64(w, n)
			out[i] = int32(high)
			w = low
		}
		out = out[k:]
	}
	*s = local
}

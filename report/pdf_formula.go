package report

import (
	"strings"
	"unicode"
)

// Formulas come as one line of plain Unicode, as the catalogue prints them. For the page they are set as a book would:
//
//	√( … )   a radical over what stands in the parentheses
//	a / b    a fraction; with blanks around it the slash takes the whole product on its left, without blanks the factor
//	^( … )   an exponent; ^x for a single character
//	_( … )   an index; _x for a single character
//	₍ … ₎    an index in parentheses, which may hold characters that have no lowered form
//
// On its right a slash takes one factor. Parentheses that a bar or a radical makes needless are dropped. Two blanks
// after a comma or a semicolon begin a new line. Whatever does not follow these rules is set as it stands.

// A piece is part of a formula.
type piece struct {
	kind  pieceKind
	text  string // pieceText: a single character, which may carry combining ones
	inner []piece
	below []piece // pieceFraction: the denominator
}

type pieceKind uint8

const (
	pieceText     pieceKind = iota
	pieceGroup              // in parentheses
	pieceRoot               // under a radical
	pieceRaised             // exponent
	pieceLowered            // index
	pieceFraction           // inner over below
)

func (p piece) is(signs string) bool { return p.kind == pieceText && strings.Contains(signs, p.text) }

func (p piece) blank() bool { return p.kind == pieceText && strings.TrimSpace(p.text) == "" }

// operators end the operands of a slash.
const operators = "+−=±≤≥<>≠≈→,;:|[]{}"

// readFormula makes pieces of a formula; ok is false if its parentheses do not match.
func readFormula(text string) (pieces []piece, ok bool) {
	var signs []string
	for _, r := range text {
		if unicode.Is(unicode.M, r) && len(signs) > 0 {
			signs[len(signs)-1] += string(r)
			continue
		}
		signs = append(signs, string(r))
	}
	pieces, rest, ok := readPieces(signs, "", false)
	return pieces, ok && len(rest) == 0
}

// readPieces reads up to the closing sign, or to the end if there is none. Within exponents and indices everything
// stays on one line.
func readPieces(signs []string, closing string, small bool) (out []piece, rest []string, ok bool) {
	for len(signs) > 0 {
		sign := signs[0]
		signs = signs[1:]
		switch sign {
		case closing:
			return bind(out, small), signs, true
		case "(", "₍":
			until, within := ")", small
			if sign == "₍" {
				until, within = "₎", true
			} else if len(out) > 0 && out[len(out)-1].is("^_") {
				within = true
			}
			inner, rest, ok := readPieces(signs, until, within)
			if !ok {
				return nil, nil, false
			}
			signs = rest
			group := piece{kind: pieceGroup, inner: inner}
			if sign == "₍" {
				group.inner = normalForm(inner)
				if closing != "₎" { // else it stands inside an index already
					group = piece{kind: pieceLowered, inner: []piece{group}}
				}
			}
			out = append(out, group)
		case ")", "₎":
			return nil, nil, false
		default:
			out = append(out, piece{text: sign})
		}
	}
	return bind(out, small), nil, closing == ""
}

// normalForm replaces lowered characters by ordinary ones, to be set lower and smaller.
func normalForm(in []piece) []piece {
	out := make([]piece, len(in))
	for i, p := range in {
		out[i] = p
		if p.kind == pieceText {
			out[i].text = lowered.Replace(p.text)
		}
	}
	return out
}

var lowered = strings.NewReplacer("₀", "0", "₁", "1", "₂", "2", "₃", "3", "₄", "4", "₅", "5", "₆", "6", "₇", "7",
	"₈", "8", "₉", "9", "₊", "+", "₋", "−", "ᵢ", "i", "ⱼ", "j", "ₖ", "k", "ₗ", "l", "ₘ", "m", "ₙ", "n", "ₚ", "p", "ᵤ", "u",
	"ᵥ", "v")

// bind joins exponents, indices and, unless they are small, radicals and fractions on one level.
func bind(in []piece, small bool) []piece {
	var out []piece
	for i := 0; i < len(in); i++ {
		p := in[i]
		switch {
		case p.is("^_") && i+1 < len(in) && !in[i+1].blank():
			kind := pieceRaised
			if p.text == "_" {
				kind = pieceLowered
			}
			i++
			out = append(out, piece{kind: kind, inner: open(in[i : i+1])})
		case p.is("√") && !small:
			j := i + 1
			for j < len(in) && in[j].blank() {
				j++
			}
			end := factor(in, j)
			if j < len(in) && in[j].kind == pieceGroup {
				end = j + 1
			}
			if end == j {
				out = append(out, p)
				continue
			}
			out = append(out, piece{kind: pieceRoot, inner: open(bind(in[j:end], small))})
			i = end - 1
		default:
			out = append(out, p)
		}
	}
	for i := 0; i < len(out) && !small; i++ {
		if !out[i].is("/") {
			continue
		}
		from, left := i, i
		spaced := i > 0 && out[i-1].blank()
		if spaced {
			left = i - 1
		}
		for from = left; from > 0; from-- {
			if q := out[from-1]; q.is(operators) || !spaced && q.blank() {
				break
			}
		}
		for from < left && out[from].blank() {
			from++
		}
		right := i + 1
		for right < len(out) && out[right].blank() {
			right++
		}
		to := factor(out, right)
		if from == left || to == right || (right > i+1) != spaced {
			continue
		}
		f := piece{kind: pieceFraction, inner: open(out[from:left]), below: open(out[right:to])}
		out = append(append(append([]piece{}, out[:from]...), f), out[to:]...)
		i = from
	}
	for i, p := range out { // (1/n)·Σ needs no parentheses once the bar is drawn, f(1/n) and (1/n)² do
		bare := open([]piece{p})
		alone := i == 0 || out[i-1].blank() || out[i-1].is(operators+"·×")
		followed := i+1 < len(out) && !out[i+1].blank() && !out[i+1].is(operators+"·×")
		if p.kind == pieceGroup && len(bare) == 1 && bare[0].kind == pieceFraction && alone && !followed {
			out[i] = bare[0]
		}
	}
	return out
}

// factor returns where the factor that begins at i ends.
func factor(in []piece, i int) int {
	for i < len(in) && !in[i].blank() && !in[i].is(operators) && !in[i].is("/·×") {
		i++
	}
	return i
}

// open drops parentheses around all of the pieces, and blanks at both ends.
func open(in []piece) []piece {
	if len(in) == 1 && in[0].kind == pieceGroup {
		in = in[0].inner
	}
	for len(in) > 0 && in[0].blank() {
		in = in[1:]
	}
	for len(in) > 0 && in[len(in)-1].blank() {
		in = in[:len(in)-1]
	}
	return in
}

// A box is a set piece: its width, and how far it reaches above and below the baseline, in millimetres.
type box struct {
	w, up, down float64
	draw        func(p *page, x, y float64)
}

// setPieces sets pieces side by side.
func setPieces(in []piece, s style) box {
	var boxes []box
	for i := 0; i < len(in); {
		if in[i].kind != pieceText {
			boxes = append(boxes, setPiece(in[i], s))
			i++
			continue
		}
		var b strings.Builder
		for ; i < len(in) && in[i].kind == pieceText; i++ {
			b.WriteString(in[i].text)
		}
		boxes = append(boxes, setSigns(b.String(), s))
	}
	return beside(boxes...)
}

func setSigns(text string, s style) box {
	text = s.face.clean(text)
	em := float64(s.size * point)
	return box{w: s.face.width(text, s.size), up: float64(0.76 * em), down: float64(0.24 * em),
		draw: func(p *page, x, y float64) { p.text(x, y, s, text) }}
}

func beside(boxes ...box) box {
	var all box
	for _, b := range boxes {
		all.w += b.w
		all.up, all.down = max(all.up, b.up), max(all.down, b.down)
	}
	all.draw = func(p *page, x, y float64) {
		for _, b := range boxes {
			b.draw(p, x, y)
			x += b.w
		}
	}
	return all
}

func setPiece(c piece, s style) box {
	em := float64(s.size * point)
	smaller := s
	rule := pen{s.colour, float64(0.05 * em), nil}
	switch c.kind {
	case pieceGroup:
		inner := setPieces(c.inner, s)
		return beside(bracket(inner, s, "("), inner, bracket(inner, s, ")"))
	case pieceRaised:
		smaller.size *= 0.72
		inner := setPieces(c.inner, smaller)
		rise := float64(0.42 * em)
		return box{w: inner.w + float64(0.04*em), up: inner.up + rise, down: max(0, inner.down-rise),
			draw: func(p *page, x, y float64) { inner.draw(p, x+float64(0.02*em), y-rise) }}
	case pieceLowered:
		smaller.size *= 0.72
		inner := setPieces(c.inner, smaller)
		fall := float64(0.16 * em)
		return box{w: inner.w + float64(0.04*em), up: max(0, inner.up-fall), down: inner.down + fall,
			draw: func(p *page, x, y float64) { inner.draw(p, x+float64(0.02*em), y+fall) }}
	case pieceRoot:
		return setRoot(setPieces(c.inner, s), s)
	case pieceFraction:
		smaller.size *= 0.94
		num, den := setPieces(c.inner, smaller), setPieces(c.below, smaller)
		w := max(num.w, den.w) + float64(0.3*em)
		axis, air := float64(0.3*em), float64(0.14*em)
		return box{w: w + float64(0.16*em), up: axis + air + num.up + num.down, down: air + den.up + den.down - axis,
			draw: func(p *page, x, y float64) {
				x += float64(0.08 * em)
				num.draw(p, x+float64((w-num.w)/2), y-axis-air-num.down)
				p.line(rule, spot{x, y - axis}, spot{x + w, y - axis})
				den.draw(p, x+float64((w-den.w)/2), y-axis+air+den.up)
			}}
	}
	return setSigns(c.text, s)
}

// setRoot puts a radical over what is set.
func setRoot(inner box, s style) box {
	em := float64(s.size * point)
	thin, thick := pen{s.colour, float64(0.05 * em), nil}, pen{s.colour, float64(0.09 * em), nil}
	head, top := float64(0.62*em), inner.up+float64(0.14*em)
	foot := float64(inner.down * 0.8)
	return box{w: head + inner.w + float64(0.12*em), up: top + float64(0.08*em), down: inner.down,
		draw: func(p *page, x, y float64) {
			hook, valley := spot{x + float64(0.16*em), y - float64(0.36*em)}, spot{x + float64(0.34*em), y + foot}
			p.line(thin, spot{x + float64(0.04*em), y - float64(0.28*em)}, hook)
			p.line(thick, hook, valley)
			p.line(thin, valley, spot{x + head - float64(0.06*em), y - top},
				spot{x + head + inner.w + float64(0.06*em), y - top})
			inner.draw(p, x+head, y)
		}}
}

// bracket sets a parenthesis as tall as what it encloses.
func bracket(inner box, s style, sign string) box {
	em := float64(s.size * point)
	if inner.up <= float64(0.9*em) && inner.down <= float64(0.35*em) {
		return setSigns(sign, s)
	}
	tall := (inner.up + inner.down) / (float64(1.0 * em))
	large := s
	large.size *= min(tall, 2.6)
	b := setSigns(sign, large)
	middle := float64((inner.up - inner.down) / 2) // of the contents, above the baseline
	lift := middle - float64(0.3*large.size*point)
	return box{w: b.w, up: inner.up, down: inner.down, draw: func(p *page, x, y float64) { b.draw(p, x, y-lift) }}
}

// formula sets a formula on a pale band, one atom a line.
func formula(text string, s style, x, width float64) []atom {
	const inset, air = 3.0, 1.5
	var parts []string
	for _, part := range strings.Split(strings.NewReplacer(",  ", ",\n", ";  ", ";\n").Replace(s.face.clean(text)), "\n") {
		if part = strings.TrimSpace(part); part != "" {
			parts = append(parts, part)
		}
	}
	var atoms []atom
	add := func(height float64, draw func(p *page, y float64)) {
		atoms = append(atoms, atom{height: height, draw: func(p *page, y float64) {
			p.box(band, x, y-0.02, width, height+0.04) // bands of neighbouring lines meet
			draw(p, y)
		}})
	}
	for _, part := range parts {
		pieces, ok := readFormula(part)
		var set box
		if ok {
			set = setPieces(pieces, s)
		}
		if !ok || set.w > width-2*inset {
			for _, l := range wrap(plainRun(s, part), width-2*inset) {
				add(leading(s.size), func(p *page, y float64) { l.draw(p, x+inset, y+baseline(s.size)) })
			}
			continue
		}
		height := max(set.up+set.down+float64(2*air), leading(s.size)+air)
		add(height, func(p *page, y float64) {
			set.draw(p, x+inset, y+float64((height-set.up-set.down)/2)+set.up)
		})
	}
	if len(atoms) == 0 {
		return nil
	}
	edge := func(p *page, y float64) { p.box(band, x, y-0.02, width, 0.84) }
	atoms = append([]atom{{height: 0.8, draw: edge}}, append(atoms, atom{height: 0.8, draw: edge})...)
	return together(atoms)
}

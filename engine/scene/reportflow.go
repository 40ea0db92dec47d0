package scene

import "math"

// leastColumn is the least width of a column of rows, mm; columnGap stands between
// two.
const leastColumn, columnGap = 78.0, 6.0

func (b *book) columns() int {
	return max(1, int((b.paper.body()+columnGap)/(leastColumn+columnGap)))
}

func (b *book) columnWidth() float64 {
	n := float64(b.columns())
	return (b.paper.body() - (n-1)*columnGap) / n
}

// flow sets rows in so many columns of equal height, and goes on over further pages.
func (b *book) flow(lines []rowLine, columns int) {
	for len(lines) > 0 {
		room := b.bottom - b.y
		height, n := room, packed(lines, room, columns)
		if n == 0 && !b.fresh() {
			b.page()
			continue
		}
		if n == len(lines) {
			height = level(lines, room, columns)
		}
		n = max(n, 1) // a row higher than a page is cut rather than lost
		b.set(lines[:n], height, columns)
		if lines = lines[n:]; len(lines) > 0 {
			b.page()
		}
	}
}

// level is the least height of columns that holds all rows, to half a millimetre.
func level(lines []rowLine, room float64, columns int) float64 {
	low, high := 0.0, room
	for high-low > 0.5 {
		if mid := (low + high) / 2; packed(lines, mid, columns) == len(lines) {
			high = mid
		} else {
			low = mid
		}
	}
	return high
}

// packed is how many rows so many columns of a height hold.
func packed(lines []rowLine, height float64, columns int) int {
	n := 0
	for range columns {
		n += column(lines[n:], height)
	}
	return n
}

// column is how many rows one column of a height holds. A heading at its foot goes
// over with what it heads.
func column(lines []rowLine, height float64) int {
	y, n := 0.0, 0
	for n < len(lines) {
		h := lines[n].height
		if lines[n].gap && y == 0 {
			h = 0
		}
		if y += h; y > height+1e-9 {
			break
		}
		n++
	}
	if n < len(lines) {
		for n > 0 && lines[n-1].keep {
			n--
		}
	}
	return n
}

func (b *book) set(lines []rowLine, height float64, columns int) {
	low := b.y
	for c := range columns {
		n := column(lines, height)
		if c == 0 {
			n = max(n, 1)
		}
		y := b.y
		for _, l := range lines[:min(n, len(lines))] {
			if l.gap && y == b.y {
				continue
			}
			for _, m := range l.marks {
				m.X += b.paper.Margin + float64(c)*(b.columnWidth()+columnGap)
				m.Y += y
				b.put(m)
			}
			y += l.height
		}
		low = math.Max(low, y)
		lines = lines[min(n, len(lines)):]
	}
	b.y = low
}

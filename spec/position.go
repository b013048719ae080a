package spec

import "strings"

// Position returns where the plan says what path names, or the nearest enclosing thing that it says: for a key left
// out, the place of the mapping that lacks it. The place is that of the value if the value is one text or number, else
// of the key; for an entry of a list, its beginning.
//
// A path goes from the outermost key inwards: keys joined by points, places in a list, from 0, in brackets. Sources,
// columns and derived columns go by their names. Examples:
//
//	study.id                         sources.peel.file               statistics[2].of[0]
//	confidence[1]                    sources.peel.columns.strength   statistics[2].with.p
//	resampling.unit[0]               sources.peel.exclude[0].where   statistics[2].compare.of[1]
//	rounding.rule                    sources.peel.derive.excess      statistics[2].accept.lower_at_least
//
// A value that may be a list or stand alone has both paths, of and of[0]. Where a statistic takes its resampling or its
// confidence from the plan's default, statistics[2].resampling.unit and statistics[2].confidence lead to the default.
func (p *Plan) Position(path string) Position {
	for path != "" {
		if at, known := p.positions[path]; known {
			return at
		}
		path = path[:max(0, strings.LastIndexAny(path, ".["))]
	}
	return Position{1, 1}
}

// Mistake returns a mistake at the place of the plan that path names.
func (p *Plan) Mistake(path, problem, fix string) Error {
	at := p.Position(path)
	return Error{File: p.File, Line: at.Line, Column: at.Column, Problem: problem, Fix: fix}
}

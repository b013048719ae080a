// Package record holds the run record: what was asked, what was read, what came out, and in which run.
//
// The results part is reproducible to the byte; everything that is not (time, run number, host) stands in the run
// part. No NaN and no infinity reaches a record: a figure that cannot be had is nil with a reason beside it.
package record

import (
	"encoding/json"

	"lotproof/runner/source"
	"lotproof/spec"
)

// Version is the version of the record's layout.
const Version = 1

// A Record is the whole of record.json.
type Record struct {
	Version       int     `json:"lotproof_record"`
	Results       Results `json:"results"`
	ResultsSHA256 string  `json:"results_sha256"` // of the compact JSON of Results
	Run           Run     `json:"run"`
	RunSHA256     string  `json:"run_sha256"` // of the compact JSON of Run
}

// Results are reproducible to the byte from the plan, the sources and the program.
type Results struct {
	Plan       Plan        `json:"plan"`
	Program    Program     `json:"program"`
	Sources    []Source    `json:"sources"`
	Statistics []Statistic `json:"statistics"`
	Verdict    string      `json:"verdict"` // met | not met | not shown | no criterion
}

// Plan is the plan as it was run.
type Plan struct {
	Study    string    `json:"study"`
	File     string    `json:"file"`   // base name
	SHA256   string    `json:"sha256"` // of the canonical content
	Text     string    `json:"text"`
	Resolved spec.Plan `json:"resolved"`
}

// Program says what computed the results.
type Program struct {
	Version      string `json:"version"`
	PlanLanguage int    `json:"plan_language"`
	Generator    string `json:"generator"`
}

// Source is one table as read.
type Source struct {
	Name       string        `json:"name"`
	File       string        `json:"file"`
	Bytes      int64         `json:"bytes"`
	SHA256     string        `json:"sha256"`
	Approved   string        `json:"approved"` // "agrees" when the plan states the digest, else "not stated"
	Rows       source.Counts `json:"rows"`     // used: not excluded; missing and outside are 0 here, they belong to a statistic
	Ignored    []string      `json:"ignored_columns"`
	Exclusions []Exclusion   `json:"exclusions"`
}

// Exclusion is one rule and the rows that it took out.
type Exclusion struct {
	Where   string `json:"where"`
	Because string `json:"because"`
	By      string `json:"by"`
	Lines   []int  `json:"lines"`
}

// Statistic is one estimate with all that belongs to it.
type Statistic struct {
	ID              string         `json:"id"`
	Label           string         `json:"label"`
	Role            string         `json:"role"`
	Source          string         `json:"source"`
	Where           string         `json:"where"`
	Statistic       string         `json:"statistic"`
	Of              []string       `json:"of"`
	With            []spec.Setting `json:"with"`
	Compare         *Compare       `json:"compare"`
	Unit            string         `json:"unit"`
	Decimals        int            `json:"decimals"` // decimals shown at most
	Rows            source.Counts  `json:"rows"`
	N               int            `json:"n"` // rows used
	Design          Design         `json:"design"`
	Estimate        *float64       `json:"estimate"`
	EstimateReason  string         `json:"estimate_reason"` // why the estimate is null; else empty
	StandardError   *float64       `json:"standard_error"`  // SD of the resample values
	Bias            *float64       `json:"bias"`            // their mean less the estimate
	Resamples       int            `json:"resamples"`
	FailedResamples int            `json:"failed_resamples"`
	Failures        []Failure      `json:"failures"`
	Exact           bool           `json:"exact"`
	Intervals       []Interval     `json:"intervals"`
	Accept          []Accept       `json:"accept"`
	Advisories      []Advisory     `json:"advisories"`
	Distribution    *Distribution  `json:"distribution"`
}

// Compare holds the two group estimates behind a difference or a ratio.
type Compare struct {
	By        string      `json:"by"`
	Of        [2]string   `json:"of"`
	As        string      `json:"as"`
	Paired    bool        `json:"paired"` // units span both groups and were drawn jointly
	N         [2]int      `json:"n"`
	Units     [2]int      `json:"units"`
	Estimates [2]*float64 `json:"estimates"`
}

// Design says how the rows were drawn.
type Design struct {
	Unit   []string  `json:"unit"`
	Strata []Stratum `json:"strata"` // one entry with empty name when the draw is not stratified
	By     []string  `json:"by"`     // the columns that make the strata
	Units  int       `json:"units"`  // outermost resampling units
	SHA256 string    `json:"sha256"` // addresses the random streams together with the seed
}

// Stratum is one part that is drawn by itself.
type Stratum struct {
	Name  string `json:"name"`
	Units int    `json:"units"`
	Rows  int    `json:"rows"`
}

// Failure counts resamples without a value.
type Failure struct {
	Reason string `json:"reason"`
	Count  int    `json:"count"`
}

// Interval is one confidence interval or bound. A limit that is not asked for and a limit that cannot be had are both
// nil; the second has a Reason.
type Interval struct {
	Method          string     `json:"method"`
	Requested       string     `json:"requested"`
	Confidence      string     `json:"confidence"` // as the plan writes it
	Bound           spec.Bound `json:"bound"`
	Lower           *float64   `json:"lower"`
	Upper           *float64   `json:"upper"`
	Reason          string     `json:"reason"` // why a limit that was asked for is null; else empty
	MonteCarloError Limits     `json:"monte_carlo_error"`
	Attained        *float64   `json:"attained_confidence"` // exact methods on ranks
	Companion       bool       `json:"companion"`
	Decides         bool       `json:"decides"` // carries the verdict
	Parameters      []Value    `json:"parameters"`
}

// Limits is a pair of figures that belong to the lower and the upper limit.
type Limits struct {
	Lower *float64 `json:"lower"`
	Upper *float64 `json:"upper"`
}

// Value is one named figure.
type Value struct {
	Name  string   `json:"name"`
	Value *float64 `json:"value"`
}

// Accept is the judgement of one criterion.
type Accept struct {
	Criterion  string   `json:"criterion"` // lower_at_least | upper_at_most
	Limit      string   `json:"limit"`     // as the plan writes it
	Method     string   `json:"method"`    // the interval that carried the verdict; empty if none
	Confidence string   `json:"confidence"`
	Bound      *float64 `json:"bound"`
	Compared   string   `json:"compared"` // the decimal that was compared, after rounding if the rule asks for it
	Verdict    string   `json:"verdict"`  // met | not met | not shown
	Why        string   `json:"why"`      // one clause
}

// Advisory is a doubt about a result, with its evidence.
type Advisory struct {
	Code     string  `json:"code"`
	Severity string  `json:"severity"` // note | caution | stop
	Text     string  `json:"text"`
	Evidence []Value `json:"evidence"`
	Action   string  `json:"action"`
	Source   string  `json:"source"`
}

// Distribution summarises the resample values.
type Distribution struct {
	Edges     []float64 `json:"edges"`  // bins+1 ascending
	Counts    []int     `json:"counts"` // left-closed bins, the last one closed
	Quantiles []Point   `json:"quantiles"`
}

// Point is one quantile of the resample values.
type Point struct {
	P     float64 `json:"p"`
	Value float64 `json:"value"`
}

// Run is what differs from run to run.
type Run struct {
	Number   int    `json:"number"`
	Started  string `json:"started"`  // UTC, RFC 3339
	Finished string `json:"finished"` // UTC, RFC 3339
	System   string `json:"system"`   // operating system/architecture
	Go       string `json:"go"`       // version of the compiler
}

var _ json.Marshaler = spec.Number{}

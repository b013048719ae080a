package spec

import (
	"encoding/json"
	"strconv"
	"strings"
)

// Decimals returns how many digits n has after the decimal point, as written; an exponent is not counted.
func (n Number) Decimals() int {
	mantissa, _, _ := strings.Cut(strings.ToLower(n.Text), "e")
	_, fraction, _ := strings.Cut(mantissa, ".")
	return len(fraction)
}

// MarshalJSON writes the digits of the plan as a JSON string, so that no digit is lost.
func (n Number) MarshalJSON() ([]byte, error) { return json.Marshal(n.Text) }

// UnmarshalJSON reads what MarshalJSON wrote.
func (n *Number) UnmarshalJSON(b []byte) error {
	var text string
	if err := json.Unmarshal(b, &text); err != nil {
		return err
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return err
	}
	n.Text, n.Value = text, value
	return nil
}

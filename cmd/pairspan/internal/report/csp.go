package report

import (
	"crypto/sha256"
	"encoding/base64"
	"strings"
)

// policy is the Content-Security-Policy of a page: nothing may load, and only
// the scripts and the style whose exact bytes are given may run. Chart data
// stands in blocks that a browser does not execute, so it needs no hash.
func policy(style string, scripts ...string) string {
	allowed := "'none'"
	if len(scripts) > 0 {
		hashes := make([]string, len(scripts))
		for i, s := range scripts {
			hashes[i] = sourceHash(s)
		}
		allowed = strings.Join(hashes, " ")
	}
	return "default-src 'none'; style-src " + sourceHash(style) + "; script-src " + allowed +
		"; base-uri 'none'; form-action 'none'"
}

// sourceHash is the hash of an inline element's text as the policy writes it.
func sourceHash(text string) string {
	sum := sha256.Sum256([]byte(text))
	return "'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"
}

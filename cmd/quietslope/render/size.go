package render

import "quietslope/scenario/result"

// Size lays out what size found.
func Size(s *result.Size) *Page {
	return &Page{}
}

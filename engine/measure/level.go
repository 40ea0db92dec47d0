package measure

import "escapement/engine/event"

// Levels of block, as the model knows them.
const (
	levelNode    = "av_node"
	levelHis     = "his"
	levelBundles = "bundles"

	Nodal      = "nodal"
	Infranodal = "infranodal"
	Mixed      = "nodal and infranodal"
	Unknown    = "unknown"
)

// levelOf is the level of one Block event: the tissue of its path, or of the
// site at the path's end where that was what refused.
func (s *strip) levelOf(id event.ID) string {
	e := s.log.At(id)
	tissue := event.Tissue(0)
	switch {
	case e.Path >= 0:
		tissue = s.log.Paths[e.Path].Tissue
		if e.Rule == event.SiteRefractory {
			tissue = s.log.Sites[s.log.Paths[e.Path].Exit(e.Dir)].Tissue
		}
	case e.Site >= 0:
		tissue = s.log.Sites[e.Site].Tissue
	}
	switch tissue {
	case event.His:
		return levelHis
	case event.Purkinje, event.Ventricle:
		return levelBundles
	}
	return levelNode
}

// level of a blocked P; empty when no block is on the record.
func (s *strip) level(i int) string {
	for _, id := range s.deepest(i) {
		return s.levelOf(id)
	}
	return ""
}

// modelLevel sums up the levels of several blocked P waves.
func (s *strip) modelLevel(ps []int) string {
	nodal, below := false, false
	for _, i := range ps {
		switch s.level(i) {
		case levelNode:
			nodal = true
		case levelHis, levelBundles:
			below = true
		}
	}
	switch {
	case nodal && below:
		return Mixed
	case nodal:
		return Nodal
	case below:
		return Infranodal
	}
	return Unknown
}

// place is a level in words for the end of a sentence.
func place(level string) string {
	switch level {
	case Nodal:
		return "at the AV node"
	case Infranodal:
		return "below the AV node"
	case Mixed:
		return "partly at the AV node, partly below it"
	}
	return ""
}

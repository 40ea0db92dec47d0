package session

func (s *Session) account(args []byte) []byte { return none }

func (s *Session) listing(args []byte) []byte { return none }

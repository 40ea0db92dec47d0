package portmath

// bitsFingerprint is what TestBitsAreTheSameEverywhere found on linux/amd64.
const bitsFingerprint = 0x9b8c676ef5a918c2

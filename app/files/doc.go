// Package files puts finished files on disk, and nothing else there.
//
// Every output of Annulet goes through Write: the bytes go to a hidden
// temporary file beside the target, which then takes the target's name in one
// step. Whoever looks finds the old file or the new one, never a part. After
// an error, a panic or a cancelled context the temporary file is gone; only a
// process killed outright (SIGKILL, power) can leave one, and then the target
// is still untouched.
//
// No file carries a clock time: same contents, same bytes.
package files

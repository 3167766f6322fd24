// Package keep remembers between sessions: settings, recent files, and the
// work that a session which was killed had not saved. It imports no window
// toolkit.
//
// Settings are one JSON file in the user's configuration folder; unsaved work
// lies in the user's state folder, one file a running window.
package keep

// Package browser drives a headless Chromium in tests, so that pages which the program
// writes are tried as a reader would: opened, clicked, typed at, looked at. Nothing of the
// program imports it.
//
// # Model
//
// [Open] starts one Chromium for a test and stops it at the end; where there is none the
// test is skipped with a word. [Browser.Page] opens a file in a tab of a given width and
// height. [Page.Eval] evaluates an expression in it, [Page.Click], [Page.Drag], [Page.Key]
// do what a person would, [Page.Picture] is what the tab looks like, [Page.Paper] and
// [Page.Dark] set the surroundings. [Page.Faults] lists what a page must not have: errors
// and warnings of the console, exceptions, violations of its own security policy, and
// requests to anything but the file itself.
//
// The protocol is Chromium's DevTools protocol, as messages that end with a zero byte over
// two pipes (--remote-debugging-pipe), so that no port is opened.
//
// # Limitations
//
// Chromium is looked for under the names that distributions give it, and in the variable
// CHROMIUM. It paints in software, so that times are upper bounds of those of readers.
// A page that does not settle within ten seconds fails the test.
package browser

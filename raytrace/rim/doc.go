// Package rim says where circles of the disk plane appear on the screen of an
// observer: by closed form where there is one, and rooted on traced paths.
package rim

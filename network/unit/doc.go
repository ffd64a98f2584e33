// Package unit holds the units of files and of people-facing output.
//
// Everything inside the program is in metres, seconds and vehicles. Units are converted twice only: readers call
// Parse, FromNumber and ParseClock, writers use the constants, Clock and a System.
package unit

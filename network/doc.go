// Package network holds the road: nodes, links with their fundamental diagrams, and corridors.
//
// The walk through a run begins here:
//
//  1. a reader fills Node and Link values, in metres and seconds, with a diagram for each link;
//  2. New turns them into a Network, or returns every fault at once;
//  3. CheckReach says which links no entry feeds and which lead nowhere, once the demand is known;
//  4. Corridor.Check makes sure that a named chain of links is one road, and Place turns a point on it into a
//     chainage that an engineer can find.
//
// Package diagram below it holds the fundamental diagrams, package unit the units of files and reports.
package network

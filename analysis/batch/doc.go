// Package batch answers the main job at many points: copy numbers, values of
// constants, points of a file, draws of what is not well known. It can be killed at any
// moment and goes on from what is on disk, and can be spread over machines.
//
// # A point
//
// Points are numbered from 1. Each has the resting states of the design there and, where
// there are two stable ones or more, their hold times as package hold finds them. Its
// random numbers come from the seed and its number alone. A point that is no switch, or
// whose answer failed, is a row that says so.
//
// # On disk
//
// The folder of a batch holds batch.json, which says what is asked, and while it is at
// work the folder parts: a part for each finished point, written under a temporary name,
// synced, renamed, and the folder synced. A part carries its SHA-256; one that is damaged
// is made anew. When all points are there, the tables points, states and rates and
// manifest.json are put in place and the parts are removed.
//
// Tables are read from the parts in the order of the points. So their bytes follow from
// the design, the options and the program's version alone: threads, shards, interruptions
// and the time of day have no say. Processors of different kinds may differ in the last
// digits of a number (some multiply and add in one rounding).
//
// # Shards
//
// Shard i of n takes every n-th point from point i on. Shards may work in one folder or
// in one each; Join makes the tables of their parts. A point that was made twice, because
// a node of a cluster was lost say, is taken once, and must be the same in both.
package batch

// Package records writes and reads the records of a run: tables as Arrow IPC files
// and a manifest, one folder a run.
//
// # Writing
//
// Create opens a folder, Folder.Table starts a table, Writer appends rows to it, and
// Folder.Finish puts every table and then manifest.json in place. Rows go to disk a
// batch at a time, from buffers that are used again, so that memory does not grow with
// the rows. Until Finish all of it stands under temporary names in the same folder, and
// an older record of the same command stays as it was. Finish makes each file whole
// first (flushed, synced, closed), renames it, and syncs the folder; the manifest, with
// the SHA-256 of each table, comes last. So a file under its final name is whole, and a
// folder with a manifest is complete. On an error nothing is left behind: no table, no
// temporary file, no folder that was made for it.
//
// A folder that exists is used if it is empty, or holds a record of the same design,
// seed and command, which is then replaced. Any other is refused with what differs.
// So is a folder that another process is writing to, where the file system can lock.
//
// # Bytes
//
// The same Provenance and rows give the same bytes: there are no times of day, no
// names of machines and no thread counts in the tables or the manifest. The command in
// Provenance is the caller's: it should hold everything that decides the results and
// nothing else. The number of threads, the folder, and how progress is shown decide
// nothing and are left out. Command puts the words together.
//
// # Layout
//
// The standard tables are written by WriteStates, NewDwells, WriteRates and NewPaths;
// any other is a few lines with NewTable. Columns are plain numbers, booleans, UTF-8
// text, and names as dictionaries with 16-bit indices; the unit of a column and what it
// holds are in the metadata of its field, everything in Provenance in the metadata of
// the schema. The README beside the code describes each column and how to load them.
package records

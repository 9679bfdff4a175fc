package storage

// Ids of what is stored. They are distinct types so that one is never taken
// for another.
type (
	UploadID int64
	BatchID  int64
	StudyID  int64
)

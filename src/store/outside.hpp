#pragma once
// Seams to the world outside, for tests: the clock, the wait for a lock, and the file system under SQLite.
// Not used unless set.

#include <cstdint>
#include <functional>
#include <string>

#include "terms/time.hpp"

namespace scourbook::store {

/// Replaces the clock that acts are timed by; an empty function brings the system's clock back.
void use_clock(std::function<Instant()> clock);
[[nodiscard]] Instant now();

/// How long one waits for another who is writing: 10 s unless set.
void use_wait(Millis wait);
[[nodiscard]] Millis wait_for_lock();

/// A file system on which the power fails, or the disk is full. It passes everything on to the real one and
/// counts what changes files: writes, truncations, syncs, deletions. Syncs are only counted and believed.
class FailingFileSystem {
 public:
  FailingFileSystem();   ///< books are opened on it from here on
  ~FailingFileSystem();  ///< and on the real one again
  FailingFileSystem(const FailingFileSystem&) = delete;
  FailingFileSystem& operator=(const FailingFileSystem&) = delete;

  /// What becomes of writes that were not synced: undone in every file, kept (only the process died), or kept
  /// but for the second half of the last one.
  enum class Unsynced { lost, kept, half_of_the_last };
  /// At operation `number` (from 1) the power goes; every later operation fails until `restore`. `then` is
  /// called when the files are as the failure left them; a test ends its process there.
  void cut_at(std::int64_t number, Unsynced unsynced, std::function<void()> then = {});
  /// From operation `number` on the disk is full, until `restore`; nothing written before is lost.
  void full_at(std::int64_t number);
  void restore();                                 ///< power is back, or room on the disk
  [[nodiscard]] std::int64_t operations() const;  ///< since the last cut_at, full_at or restore
  [[nodiscard]] bool has_failed() const;
};

/// The name of the SQLite VFS that books are opened with; null: SQLite's own.
[[nodiscard]] const char* file_system_name();

}  // namespace scourbook::store
